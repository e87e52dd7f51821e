"""Mistakes as they really occur: every right form accepted, every wrong one refused, and mended where one change does.

Source: the collection in data/mistakes.json, each entry with the right form, the wrong one and the reason.
"""

from __future__ import annotations

import json
from functools import cache
from pathlib import Path

import pytest
from hand_lines import judged, solution_of

from derive.check.verdict import Solution
from derive.expressions.text import to_text
from derive.handcheck.report import LineVerdict

DATA = json.loads((Path(__file__).with_name("data") / "mistakes.json").read_text(encoding="utf-8"))
MISTAKES = {entry["id"]: entry for entry in DATA["mistakes"]}
# No single change leads from the wrong form to the right one: two terms are missing, or a whole product.
BEYOND_ONE_CHANGE = {"ps3_sqrt3", "rout_noboost", "rout_gmre"}


def with_bars(text: str) -> str:
    """Write par(a, b) as (a || b)."""
    while "par(" in text:
        start = text.rindex("par(")
        depth, comma, end = 0, 0, start + 4
        while text[end] != ")" or depth:
            depth += (text[end] == "(") - (text[end] == ")")
            comma = end if text[end] == "," and not depth else comma
            end += 1
        text = (
            f"{text[:start]}(({text[start + 4 : comma]}) || ({text[comma + 1 : end]})){text[end + 1 :]}"
        )
    return text


@cache
def solved(topology: str) -> Solution:
    return solution_of(topology)


def verdict_on(entry: dict, right: str) -> LineVerdict:
    define = {name: with_bars(text) for name, text in entry["define"].items()}
    given = [tie for tie in entry.get("requires", "").split(",") if tie]
    line = f"{entry['left']} = {with_bars(right)}"
    (verdict,) = judged(solved(entry["topology"]), line, define=define, given=given).verdicts
    return verdict


@pytest.mark.parametrize("name", MISTAKES)
def test_the_right_form_of_a_usual_mistake_is_accepted(name):
    assert verdict_on(MISTAKES[name], MISTAKES[name]["right"]).passed is True


@pytest.mark.parametrize("name", MISTAKES)
def test_the_wrong_form_is_refused_and_the_first_proposal_is_the_right_one(name):
    entry = MISTAKES[name]
    verdict = verdict_on(entry, entry["wrong"])
    assert verdict.outcome == "mistake"
    if name in BEYOND_ONE_CHANGE:
        assert not verdict.edits
        return
    mended = verdict.edits[0].line
    assert to_text(mended.left) == entry["left"]
    # Both are what the left side is, so they are the same value.
    assert verdict_on(entry, to_text(mended.right)).passed is True


def test_four_of_five_mistakes_are_mended_by_the_first_proposal():
    assert len(BEYOND_ONE_CHANGE) <= len(MISTAKES) / 5


@pytest.mark.parametrize("entry", DATA["right_in_other_words"], ids=lambda e: e["equivalent"])
def test_the_right_form_in_other_words_is_accepted(entry):
    assert verdict_on(entry, entry["equivalent"]).passed is True


@pytest.mark.parametrize(
    ("name", "says"),
    [
        ("beta_rin", "the right side is too small by exactly RE"),
        ("sign_ce", "the sides differ in sign: their ratio is −1"),
        ("vccs_terminal", "the right side is (1 + beta2) times the left side"),
        ("integ_pole", "the right side is too small by exactly R1*C1"),
    ],
)
def test_the_clue_is_given_as_an_engineer_would(name, says):
    assert verdict_on(MISTAKES[name], MISTAKES[name]["wrong"]).finding == says


def test_a_sum_over_a_product_in_the_place_of_a_parallel_combination_is_told_by_its_units():
    entry = MISTAKES["par_inverted"]
    (remark,) = verdict_on(entry, entry["wrong"]).dimensions
    assert remark.says == "the left side is in s, the right side in s/Ω²"
