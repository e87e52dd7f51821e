"""Rechecking: what is untouched holds, what is tampered with is found and its place named."""

import json
import random
import zlib
from dataclasses import replace

import pytest
import tampering
from rechecked import DIVIDER, issue

import derive.review.recheck as station
from derive.check.verdict import Verdict
from derive.errors import InputError
from derive.pipeline import derive
from derive.reading.read import parse
from derive.review.open import open_bytes
from derive.review.recheck import PACKED
from derive.review.remake import settled
from derive.review.report import plain_recheck
from derive.version import VERSION

KINDS = ("json", "html", "pdf")


@pytest.mark.parametrize("kind", KINDS)
def test_an_untouched_sheet_is_the_same(kind, issued, rechecked):
    found = rechecked(issued[kind], f"divider.{kind}")
    assert (found.standing, found.differences, found.passed) == ("same", (), True)
    assert "✓ same" in plain_recheck(found)


def test_a_renamed_page_is_still_the_same(issued, rechecked):
    assert rechecked(issued["html"], "somewhere/else (1).html").standing == "same"


def test_a_pdf_packed_anew_by_another_program_is_the_same_and_that_is_said(issued, rechecked):
    data = tampering.packed_anew(issued["pdf"])
    assert data != issued["pdf"]
    found = rechecked(data)
    assert found.standing == "same"
    assert found.remarks == (PACKED,)


def ways(kind, count):
    every = tampering.WAYS[kind]
    return [(kind, every[i % len(every)], i) for i in range(count)]


def word(value):
    """Give a name that is the same in every process."""
    return getattr(value, "__name__", str(value))


@pytest.mark.parametrize(
    ("kind", "way", "seed"), [*ways("json", 15), *ways("html", 18), *ways("pdf", 7)], ids=word
)
def test_tampering_is_found_and_named(kind, way, seed, issued, rechecked):
    data, aspects = way(issued[kind], random.Random(seed))
    assert data != issued[kind]
    try:
        found = rechecked(data)
    except InputError:
        # One byte may break the file itself: then it is refused.
        found = None
    if found is None:
        assert way is tampering.any_byte
        return
    assert found.standing == "differs"
    assert {difference.aspect for difference in found.differences} & aspects


def test_the_place_of_a_changed_number_is_named_with_both_readings(issued, rechecked):
    assert "338.63 Hz" in issued["html"].decode()
    found = rechecked(issued["html"].replace(b"338.63 Hz", b"833.63 Hz", 1))
    (difference,) = found.differences
    assert difference.aspect == "words"
    assert "833.63 Hz" in difference.issued
    assert "338.63 Hz" in difference.fresh
    assert "section" in difference.where


def test_the_number_of_a_changed_equation_is_named(issued, rechecked):
    text = issued["html"].decode()
    number = text.index(">(3)<")
    at = text.rindex("<mi>R</mi>", 0, number)
    found = rechecked((text[:at] + "<mi>L</mi>" + text[at + 10 :]).encode())
    assert [d.aspect for d in found.differences] == ["equation"]
    assert "equation (3)" in found.differences[0].where


def test_a_changed_coefficient_in_the_ledger_is_named_by_result_and_power(issued, rechecked):
    text = issued["json"].decode().replace('"R_1*C_1"', '"R_1*C_1*2"', 1)
    found = rechecked(text.encode())
    (difference,) = found.differences
    assert "A_v, full band" in difference.where
    assert (difference.issued, difference.fresh) == ("R_1*C_1*2", "R_1*C_1")


def test_a_source_that_no_longer_fits_its_digest_is_said_first(issued, rechecked):
    found = rechecked(issued["json"].replace(b"4k7", b"4k8"))
    assert found.by_weight[0].aspect == "source"
    assert "SHA-256" in found.by_weight[0].where
    # And what follows from the changed value is there as well.
    assert any("poles" in difference.where for difference in found.differences)


def test_a_source_that_cannot_be_derived_differs(issued, rechecked):
    found = rechecked(issued["json"].replace(b'resistor  = \\"4k7', b'resistor  = \\"4q7'))
    assert found.standing == "differs"
    assert "derivation" in {difference.aspect for difference in found.differences}


def test_the_same_data_written_otherwise_is_found(issued, rechecked):
    text = json.dumps(json.loads(issued["json"]))
    found = rechecked(text.encode())
    assert "how the ledger is written" in {difference.where for difference in found.differences}


def test_a_version_that_never_was_is_found(issued, rechecked):
    data = issued["json"].replace(VERSION.encode(), b"0.0.9", 1)
    assert rechecked(data).standing == "differs"


def test_a_sheet_of_an_earlier_version_with_other_words_holds_with_its_differences(
    issued, rechecked, monkeypatch
):
    monkeypatch.setattr(station, "EARLIER", ("0.0.9",))
    for kind in ("json", "html"):
        text = issued[kind].decode().replace(f'"version": "{VERSION}"', '"version": "0.0.9"')
        assert rechecked(text.encode()).standing == "newer"
    text = text.replace("Small-signal", "Little-signal").replace("Drives", "Sources driving it")
    found = rechecked(text.encode())
    assert found.standing == "newer"
    assert any("Sources driving it" in difference.issued for difference in found.differences)
    assert "same result from a newer version" in plain_recheck(found)


@pytest.mark.parametrize(
    ("old", "new", "aspect"),
    [
        ("338.63 Hz", "383.63 Hz", "words"),
        ("<mi>R</mi>", "<mi>L</mi>", "equation"),
        ('"R_1*C_1"', '"R_1*C_1*2"', "ledger"),
    ],
)
def test_what_an_earlier_sheet_states_and_is_not_confirmed_differs(
    old, new, aspect, issued, rechecked, monkeypatch
):
    monkeypatch.setattr(station, "EARLIER", ("0.0.9",))
    text = issued["html"].decode().replace(f'"version": "{VERSION}"', '"version": "0.0.9"')
    assert old in text
    found = rechecked(text.replace(old, new, 1).encode())
    assert found.standing == "differs"
    assert aspect in {difference.aspect for difference in found.differences}


def test_an_equal_coefficient_that_an_earlier_version_wrote_otherwise_stands(
    issued, rechecked, monkeypatch
):
    monkeypatch.setattr(station, "EARLIER", ("0.0.9",))
    text = issued["json"].decode().replace(f'"version": "{VERSION}"', '"version": "0.0.9"')
    text = text.replace('"R_1*C_1"', '"(2*C_1*R_1 - C_1*R_1)"', 1)
    found = rechecked(text.encode())
    assert found.standing == "newer"
    assert [difference.fresh for difference in found.differences] == ["R_1*C_1"]


def engine(passed, measured):
    return Verdict("another engine", "m", passed, measured, "l")


def outcome_with(verdict):
    outcome = derive(parse(DIVIDER, "divider.toml"), other_engine=False).outcome
    (result,) = outcome.results
    others = tuple(v for v in result.verdicts if v.name != verdict.name)
    return replace(outcome, results=(replace(result, verdicts=(*others, verdict)),))


LATE, FOUND = engine(None, "not finished in 10 s"), engine(True, "equal, degree 1")


@pytest.mark.parametrize(
    ("ours", "theirs", "when"), [(LATE, FOUND, "here"), (FOUND, LATE, "when it was issued")]
)
def test_an_engine_that_ran_out_of_time_on_one_side_is_a_remark(ours, theirs, when):
    outcome, remarks = settled(outcome_with(ours), [theirs])
    assert theirs in outcome.results[0].verdicts
    assert remarks == (f"A_v, full band: the other engine did not finish {when}",)


@pytest.mark.parametrize(
    ("ours", "theirs"),
    [
        (FOUND, engine(None, "would not say")),
        (FOUND, engine(False, "a different function of s")),
        (engine(False, "a different function of s"), LATE),
        (FOUND, None),
    ],
)
def test_an_engine_that_says_otherwise_is_not_forgiven(ours, theirs):
    outcome, remarks = settled(outcome_with(ours), [theirs])
    assert ours in outcome.results[0].verdicts
    assert remarks == ()


BOMB = zlib.compress(bytes(300_000_000), 1)


def pdf_of(stream):
    """Give a PDF by hand whose attached file is this stream."""
    objects = [
        b"<< /Type /Catalog /Pages 2 0 R /AF [4 0 R] >>",
        b"<< /Type /Pages /Kids [3 0 R] /Count 1 >>",
        b"<< /Type /Page /Parent 2 0 R /MediaBox [0 0 9 9] >>",
        b"<< /Type /Filespec /F (a.json) /AFRelationship /Data /EF << /F 5 0 R >> >>",
        b"<< /Filter /FlateDecode /Length %d >>\nstream\n%s\nendstream" % (len(stream), stream),
    ]
    made, places = b"%PDF-1.7\n", []
    for number, body in enumerate(objects, 1):
        places.append(len(made))
        made += b"%d 0 obj\n%s\nendobj\n" % (number, body)
    table = b"".join(b"%010d 00000 n \n" % place for place in places)
    start = len(made)
    made += b"xref\n0 6\n0000000000 65535 f \n" + table
    return made + b"trailer << /Size 6 /Root 1 0 R >>\nstartxref\n%d\n%%%%EOF\n" % start


def test_a_pdf_that_unfolds_without_end_is_refused():
    with pytest.raises(InputError, match="unfolds to more than a sheet can hold"):
        open_bytes(pdf_of(BOMB), "bomb.pdf")
    with pytest.raises(InputError, match="no sheet"):
        open_bytes(pdf_of(zlib.compress(b"{}")), "small.pdf")


def test_a_cut_or_broken_pdf_is_refused(issued):
    whole = issued["pdf"]
    for data in (
        whole[: len(whole) // 2],
        whole[:-30],
        whole.replace(b"startxref\n", b"startxref\n9"),
        b"%PDF-1.7",
    ):
        with pytest.raises(InputError, match="cannot be read"):
            open_bytes(data, "broken.pdf")


@pytest.mark.parametrize(
    "data",
    [
        b"",
        b"\0\1\2",
        b"hello",
        b"{",
        b"{}",
        b"[" * 100_000,
        b'{"ledger": ' + b"[" * 200_000,
        b'{"ledger": 1, "ledger": 1}',
        b'{"ledger": 1, "made_by": 3}',
        b'{"ledger": 1, "made_by": {"name": "nodeledger", "version": "1"}}',
        b'{"ledger": 1, "made_by": {"name": "nodeledger", "version": "1"}, "topology": {"text": 3}}',
        b'{"ledger": 1, "made_by": {"name": "other", "version": "1"}}',
        b'{"comparison": 1, "made_by": {"name": "nodeledger", "version": "1"}, "stages": [3]}',
        b'{"redline": 1, "made_by": {"name": "nodeledger", "version": "1"}, "old": 1}',
        b'{"ledger": NaN}',
        b'{"ledger": ' + b"9" * 10_000 + b"}",
        b"<!DOCTYPE html>",
        b'<!DOCTYPE html><script type="application/json" id="ledger">{',
        b"<!DOCTYPE html>" + b"<" * 500_000,
        b"<!DOCTYPE html>" + b"<!--" * 200_000,
        b"<!DOCTYPE html>" + b"<script" * 100_000,
        b"<!DOCTYPE html>\xff",
    ],
    ids=lambda data: data[:40].decode("latin-1"),
)
def test_what_is_no_sheet_is_refused_in_one_line(data):
    with pytest.raises(InputError) as refusal:
        open_bytes(data, "it")
    assert str(refusal.value).startswith("it")
    assert "\n" not in str(refusal.value)


def test_a_sheet_of_several_results_and_devices_is_the_same(rechecked):
    text = DIVIDER.replace("[find", 'R_L = { resistor = "?", between = ["out", "gnd"] }\n[find')
    text += '[find.Z_o]\nimpedance = "out"\n'
    assert rechecked(issue(text, "open", ["json"])["json"]).standing == "same"
