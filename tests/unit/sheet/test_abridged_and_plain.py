"""Long sums are shown by their leading terms, with a pointer to the whole; the ledger keeps all."""

import json
from pathlib import Path

import pytest

from derive.expressions.tree import Elided, Name, Negative, Product, Quotient, Sum
from derive.expressions.walk import children_of
from derive.pipeline import derive
from derive.reading.read import parse, read
from derive.sheet.compose import compose
from derive.sheet.document import Display, Matrix, unfolded
from derive.sheet.plain import plain_outcome, summary_rows
from derive.sheet.view import LEADING_TERMS, TERM_LIMIT, abridged

CIRCUITS = Path(__file__).parents[2] / "benchmarks" / "circuits"


def long_sum(count):
    return Sum(tuple(Name(f"x{k}") for k in range(count)))


def test_a_sum_at_the_limit_is_shown_whole_and_one_beyond_it_is_not():
    assert abridged(long_sum(TERM_LIMIT), "there") == long_sum(TERM_LIMIT)
    short = abridged(long_sum(TERM_LIMIT + 1), "there")
    assert short.terms[:-1] == long_sum(TERM_LIMIT).terms[:LEADING_TERMS]
    assert short.terms[-1] == Elided(TERM_LIMIT + 1 - LEADING_TERMS, "there")


def test_long_sums_are_found_inside_other_expressions():
    whole = Negative(
        Quotient(Product((Name("s"), long_sum(99))), Sum((Name("a"), Product((long_sum(99),)))))
    )
    short = abridged(whole, "there")

    def count(expression):
        return isinstance(expression, Elided) + sum(map(count, children_of(expression)))

    assert count(short) == 2
    assert abridged(Name("a"), "there") == Name("a")


@pytest.fixture(scope="module")
def two_stage():
    # The long sums are those of the steps; the words of the trade add none, and take most of the time.
    return derive(read(CIRCUITS / "two_stage.toml"), other_engine=False, explain=False).outcome


def elided_in(sheet):
    found = []

    def visit(expression):
        if isinstance(expression, Elided):
            found.append(expression)
        for child in children_of(expression):
            visit(child)

    for section in sheet.sections:
        for block in unfolded(section.blocks):
            if isinstance(block, Display) and not isinstance(block.content, Matrix):
                content = block.content
                for side in (content.left, content.right) if hasattr(content, "left") else (content,):
                    visit(side)
    return found


def test_five_unknowns_are_shown_by_leading_terms_that_point_to_the_ledger(two_stage):
    sheet = compose(two_stage, "two_stage")
    found = elided_in(sheet)
    assert found
    steps = json.loads(sheet.ledger_text)["results"][0]["steps"]
    for piece in found:
        assert piece.pointer.startswith("ledger, result A_v, step ")
        number = int(piece.pointer.rpartition(" ")[2])
        assert steps[number - 1]["n"] == number


def test_the_ledger_of_it_holds_every_term(two_stage):
    sheet = compose(two_stage, "two_stage")
    assert "..." not in sheet.ledger_text
    assert "more term" not in sheet.ledger_text
    assert sheet.ledger_name == "two_stage.json"


def test_the_same_outcome_gives_the_same_bytes(two_stage):
    again = derive(read(CIRCUITS / "two_stage.toml"), other_engine=False, explain=False).outcome
    assert compose(again, "two_stage") == compose(two_stage, "two_stage")


TWO_FINDS = """
[sheet]
title = "Low-pass"
number = "LP-1"
[drives]
V_s = { voltage = ["in", "gnd"] }
[parts]
R_1 = { resistor = "1k", between = ["in", "out"] }
C_1 = { capacitor = "1u", between = ["out", "gnd"] }
[find.A_v]
voltage = "out"
per = "V_s"
[find.Z_out]
impedance = "out"
"""


def test_plain_text_shows_title_result_and_checks_and_with_steps_the_way():
    outcome = derive(parse(TWO_FINDS, "low_pass.toml"), other_engine=False).outcome
    brief, whole = plain_outcome(outcome), plain_outcome(outcome, steps=True)
    assert brief.startswith("Low-pass  (LP-1)\n")
    assert "159.15 Hz" in brief
    assert "Currents leaving node out through R" not in brief
    assert "Currents leaving node out through" in whole
    assert len(whole) > len(brief)
    assert [row[0] for row in summary_rows(outcome)] == ["A_v", "Z_out"]
    assert [row[1] for row in summary_rows(outcome)] == ["1", "1 kΩ"]


def test_equations_of_several_results_are_numbered_by_their_place():
    outcome = derive(parse(TWO_FINDS, "low_pass.toml"), other_engine=False).outcome
    numbers = [
        block.number
        for section in compose(outcome, "low_pass").sections
        for block in unfolded(section.blocks)
        if isinstance(block, Display) and block.number
    ]
    assert {number.partition(".")[0] for number in numbers} == {"1", "2"}
    assert len(numbers) == len(set(numbers))
