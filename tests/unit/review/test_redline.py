"""Redlines: against itself nothing, against an edited version exactly the edit and what follows from it."""

import json
from fractions import Fraction
from functools import lru_cache
from pathlib import Path

import pytest
from edited_versions import EDITS, STAGE
from rechecked import issue

from derive.errors import InputError
from derive.reading.read import parse
from derive.review.redline.compose import compose_redline
from derive.review.redline.ledger import ledger
from derive.review.redline.plain import SAME, plain_redline
from derive.review.redline.redline import ONLY_WRITTEN, redline, redline_of
from derive.sheet.plain import line_text

CASES = Path(__file__).parents[3] / "cases"


@lru_cache
def between(old, new):
    return redline_of(("old.toml", parse(old, "old.toml")), ("new.toml", parse(new, "new.toml")))


def named(found):
    return sorted((c.sign, c.group, c.subject, c.aspect) for c in found.changes)


@pytest.mark.parametrize("edit", EDITS, ids=lambda edit: edit.name)
def test_exactly_the_edit_and_its_effect_are_named(edit):
    found = between(STAGE, edit.text)
    if edit.effect is None:
        # What follows is large; the edit itself must stand alone in the circuit and the questions.
        own = ("Title block", "Circuit", "What is asked for", "Assumptions")
        assert [name for name in named(found) if name[1] in own] == sorted(edit.edit)
    else:
        assert named(found) == sorted((*edit.edit, *edit.effect))
    text = plain_redline(found)
    for words in edit.says:
        assert words in text
    assert (SAME in text) == (not found.changes)


@pytest.mark.parametrize("edit", EDITS, ids=lambda edit: edit.name)
def test_the_way_back_names_the_same_with_signs_exchanged(edit):
    there, back = between(STAGE, edit.text), between(edit.text, STAGE)
    turned = {"added": "removed", "removed": "added", "changed": "changed"}
    assert sorted((turned[c.sign], c.group, c.subject, c.aspect) for c in back.changes) == named(there)


def test_against_itself_nothing_changed():
    found = between(STAGE, STAGE)
    assert found.changes == ()
    assert found.remarks == ()
    assert SAME in plain_redline(found)


@pytest.mark.parametrize("case", ["post_filter", "limiter_stage"])
def test_a_case_against_itself_is_empty(case):
    file = str(CASES / case / "topology.toml")
    assert redline(file, file).changes == ()


def test_a_file_that_is_only_written_otherwise_is_said_to_be_so():
    assert between(STAGE, STAGE.replace('"1k"', '"1000 Ω"')).remarks == (ONLY_WRITTEN,)


def test_sheets_and_topologies_mix(tmp_path):
    files = issue(STAGE, "stage", ["json", "html"])
    for kind, data in files.items():
        (tmp_path / f"stage.{kind}").write_bytes(data)
    new = tmp_path / "new.toml"
    new.write_text(STAGE.replace('"1k"', '"2k"'), encoding="utf-8")
    for kind in files:
        found = redline(str(tmp_path / f"stage.{kind}"), str(new))
        assert [c.subject for c in found.changes if c.group == "Circuit"] == ["R_1"]
    assert redline(str(tmp_path / "stage.json"), str(tmp_path / "stage.html")).changes == ()


def test_a_sheet_whose_source_was_changed_is_refused(tmp_path):
    path = tmp_path / "stage.json"
    path.write_bytes(issue(STAGE, "stage", ["json"])["json"].replace(b'\\"1k', b'\\"2k'))
    with pytest.raises(InputError, match="recheck"):
        redline(str(path), str(path))


BIASED = """[sheet]
title = "Stage"
[supplies]
V_CC = { node = "vcc", dc = "12 V" }
[drives]
V_s = { voltage = ["in", "gnd"] }
[parts]
C_1 = { capacitor = "1u", between = ["in", "b"], role = "coupling" }
R_B = { resistor = "1M8", between = ["vcc", "b"] }
R_C = { resistor = "4k7", between = ["vcc", "c"] }
Q1  = { bipolar = "npn", base = "b", collector = "c", emitter = "gnd" }
[models.npn]
beta = 180
V_BE = "0.65 V"
[find.A_v]
voltage = "c"
per     = "V_s"
"""


def test_a_device_model_changes_the_operating_point_and_what_follows():
    found = between(BIASED, BIASED.replace("180", "200"))
    own = {(c.group, c.subject, c.aspect): c for c in found.changes}
    assert line_text(own["Circuit", "Q1", "beta"].after) == "200"
    # I_C = β·(V_CC − V_BE)/R_B: 180·11.35/1.8 MΩ = 1.135 mA, and 200 give 1.26111 mA.
    current = own["Operating point and parameters", "Q1", "current"]
    assert [line_text(current.before), line_text(current.after)] == ["1.135 mA", "1.26111 mA"]
    assert ("Operating point and parameters", "g_m", "value") in own
    assert ("A_v, mid band", "gain", "value") in own


def test_a_check_that_flips_is_named_as_such():
    # With half the base resistor the collector falls into saturation: 12 V − 4.7 kΩ·2.27 mA = 1.3 V is left,
    # with a quarter nothing is.
    found = between(BIASED, BIASED.replace('"1M8"', '"470k"'))
    flips = [c for c in found.changes if c.aspect == "check"]
    assert [(c.subject, line_text(c.before), line_text(c.after)) for c in flips] == [
        ("region of Q1", "passed", "failed")
    ]


def test_the_ledger_holds_every_change_and_both_sources():
    found = between(STAGE, EDITS[0].text)
    data = json.loads(json.dumps(ledger(found)))
    assert data["redline"] == 1
    assert [change["subject"] for change in data["changes"]] == [c.subject for c in found.changes]
    assert data["old"]["topology"]["text"] == STAGE
    assert data["new"]["topology"]["text"] == EDITS[0].text


def test_the_page_marks_changes_by_sign_word_and_element():
    from derive.render.html import to_html

    load = next(edit for edit in EDITS if edit.name == "a load")
    page = to_html(compose_redline(between(STAGE, load.text))).decode()
    assert '<ins class="revised added">+ added</ins>' in page
    assert '<span class="revised changed">~ changed</span>' in page
    page = to_html(compose_redline(between(load.text, STAGE))).decode()
    assert '<del class="revised removed">− removed</del>' in page
    same = to_html(compose_redline(between(STAGE, STAGE))).decode()
    assert "revised added" not in same.partition("<main")[2]
    assert SAME.capitalize() in same


def test_terms_are_compared_whatever_their_order_and_sign():
    from derive.expressions.parse import parse_expression
    from derive.expressions.text import to_text
    from derive.review.redline.terms import same_value, term_changes

    def change(old, new):
        found = term_changes(parse_expression(old), parse_expression(new))
        sides = (found.came_above, found.went_above, found.came_below, found.went_below)
        return to_text(found.scaled), to_text(found.scaled_new), *([to_text(t) for t in s] for s in sides)

    assert same_value(parse_expression("(a + b)/(c*d)"), parse_expression("(b + a)/(d*c)"))
    assert not same_value(parse_expression("a - b"), parse_expression("b - a"))
    assert change("a*b + c", "c + 2*b*a") == ("1", "1", ["2*b*a"], ["b*a"], [], [])
    assert change("a/(a + b)", "a*c/(a*b + a*c + b*c)") == ("c", "1", [], [], ["a*b"], [])
    assert change("a*c/(a*b + a*c + b*c)", "a/(a + b)") == ("1", "c", [], [], [], ["a*b"])
    assert change("-a", "a") == ("1", "1", ["a"], ["-a"], [], [])


@pytest.mark.parametrize(
    ("value", "unit", "words"),
    [
        (Fraction(4700), "Ω", "4.7 kΩ"),
        (Fraction(1, 10**8), "F", "10 nF"),
        (Fraction(-12), "V", "−12 V"),
        (Fraction(1, 3), "Ω", "1/3 Ω"),
        (Fraction(0), "V", "0 V"),
        (Fraction(180), "", "180"),
    ],
)
def test_values_are_worded_exactly(value, unit, words):
    from derive.review.redline.circuit import amount

    assert amount(value, unit) == words
