"""Issued sheets with a derivation by hand, rechecked from nothing but the file."""

from functools import partial

import pytest

import derive.review.remake as making
from derive.hand import check_hand_file, write_hand
from derive.pipeline import derive
from derive.reading.read import read
from derive.review.open import open_bytes
from derive.review.recheck import recheck
from derive.review.redline.redline import redline
from derive.review.remake import write
from derive.sheet.compose import compose

TOPOLOGY = """
[sheet]
title = "Low-pass section"
hand = "by_hand.toml"
[drives]
V_s = { voltage = ["in", "gnd"] }
[parts]
R_1 = { resistor = "4k7", between = ["in", "out"] }
C_1 = { capacitor = "10n", between = ["out", "gnd"] }
[find.A_v]
voltage = "out"
per = "V_s"
"""
HAND = '''
topology = "section.toml"
lines = """
(V_s - v_out)/R_1 = s*C_1*v_out      # current law at the output
A_v = 1/(1 + s*R_1*C_1)
b_1 = R_1*C_1
"""
'''
KINDS = ("json", "html", "pdf")


@pytest.fixture(scope="module")
def folder(tmp_path_factory):
    """Give a folder with both sheets in it; what they were made from is gone by then."""
    folder = tmp_path_factory.mktemp("issued")
    sources = tmp_path_factory.mktemp("sources")
    (sources / "section.toml").write_text(TOPOLOGY, encoding="utf-8")
    (sources / "by_hand.toml").write_text(HAND, encoding="utf-8")
    outcome = derive(read(sources / "section.toml"), other_engine=False).outcome
    for kind in KINDS:
        (folder / f"section.{kind}").write_bytes(write(compose(outcome, "section"), kind))
    write_hand(check_hand_file(sources / "by_hand.toml"), "by_hand", folder, KINDS)
    write_hand(check_hand_file(sources / "by_hand.toml", exact=True), "exactly", folder, ["json"])
    for file in sources.iterdir():
        file.unlink()
    return folder


@pytest.fixture(autouse=True)
def without_the_other_engine(monkeypatch):
    # It takes longer than all the rest, and has nothing to do with what is written by hand.
    monkeypatch.setattr(making, "derive", partial(derive, other_engine=False))


@pytest.mark.parametrize("kind", KINDS)
@pytest.mark.parametrize("name", ["section", "by_hand"])
def test_a_sheet_with_a_derivation_by_hand_is_the_same_from_its_file_alone(name, kind, folder):
    found = recheck(open_bytes((folder / f"{name}.{kind}").read_bytes(), f"{name}.{kind}"))
    assert (found.standing, found.differences) == ("same", ())


def test_a_sheet_whose_lines_were_multiplied_out_is_the_same(folder):
    found = recheck(open_bytes((folder / "exactly.json").read_bytes(), "exactly.json"))
    assert found.standing == "same"


@pytest.mark.parametrize("kind", ["json", "html"])
@pytest.mark.parametrize("name", ["section", "by_hand"])
def test_another_derivation_put_in_is_found(name, kind, folder):
    data = (folder / f"{name}.{kind}").read_bytes()
    old = b"A_v = 1/(1 + s*R_1*C_1)"
    assert old in data
    found = recheck(open_bytes(data.replace(old, b"A_v = 1/(1 + s*C_1*R_1)"), f"{name}.{kind}"))
    assert found.standing == "differs"
    assert {difference.aspect for difference in found.differences} & {"source", "ledger"}


def test_a_ledger_without_the_derivation_that_its_topology_names_differs(folder):
    text = (folder / "section.json").read_text(encoding="utf-8").replace('"hand": {', '"hound": {')
    found = recheck(open_bytes(text.encode(), "section.json"))
    assert found.standing == "differs"
    assert "does not carry it" in found.differences[-1].fresh


def test_a_redline_takes_no_notice_of_what_was_written_by_hand(folder):
    section = str(folder / "section.json")
    assert redline(section, section).changes == ()
