"""The road "time constants": right constants pass, and every kind of wrong one is found."""

from __future__ import annotations

from dataclasses import replace
from fractions import Fraction
from functools import cache

import pytest
from road import solution_of

from derive.check.roads import time_constants as road
from derive.check.verdict import Solution
from derive.expressions.parse import parse_expression
from derive.expressions.tree import ONE, ZERO, Expression, Negative, Number
from derive.expressions.tree import Product as Times
from derive.reactances.find_time_constants import find_time_constants
from derive.reactances.time_constants import Coefficient, TimeConstants
from derive.readable.vocabulary import vocabulary_of

COMMON_EMITTER = """
R_S = { resistor = "600 ohm", between = ["in", "b"] }
r_pi = { resistor = "2k5", between = ["b", "gnd"] }
C_pi = { capacitor = "12 pF", between = ["b", "gnd"] }
C_mu = { capacitor = "2 pF", between = ["b", "out"] }
g_m = { transconductance = "40 mS", flows = ["out", "gnd"], senses = ["b", "gnd"] }
R_L = { resistor = "4k7", between = ["out", "gnd"] }
"""
# A second pole behind a buffer that the response at "out" does not show.
HIDDEN = """
R_1 = { resistor = "1k", between = ["in", "out"] }
C_1 = { capacitor = "1n", between = ["out", "gnd"] }
A = { voltage_gain = "1", output = ["x", "gnd"], senses = ["out", "gnd"] }
R_2 = { resistor = "1k", between = ["x", "y"] }
C_2 = { capacitor = "1n", between = ["y", "gnd"] }
"""
COUPLED = """
R_S = { resistor = "1k", between = ["in", "a"] }
C_1 = { capacitor = "1u", between = ["a", "b"], role = "coupling" }
R_1 = { resistor = "10k", between = ["b", "gnd"] }
C_2 = { capacitor = "2u2", between = ["b", "out"], role = "coupling" }
R_2 = { resistor = "22k", between = ["out", "gnd"] }
"""
COIL = """
R_1 = { resistor = "1k", between = ["in", "a"] }
L_1 = { inductor = "1m", between = ["a", "out"] }
R_2 = { resistor = "2k", between = ["out", "gnd"] }
"""
OP_AMP = """
R_1 = { resistor = "1k", between = ["in", "p"] }
C_1 = { capacitor = "1n", between = ["p", "gnd"] }
U1 = { opamp = true, output = "out", inputs = ["p", "out"], A_0 = "100000", f_unity = "1 MHz" }
"""
SENSED = """
R_1 = { resistor = "1k", between = ["in", "out"] }
C_1 = { capacitor = "1n", between = ["out", "gnd"] }
F = { current_gain = "3", flows = ["out", "gnd"], senses = "C_1" }
"""


@cache
def solved(parts: str) -> Solution:
    form, derivation = solution_of(parts)
    vocabulary = vocabulary_of(derivation.system.small_signal)
    found = find_time_constants(derivation, form, vocabulary)
    return Solution(derivation, form, None, None, time_constants=found)


def verdict_on(parts: str, **changes):
    solution = solved(parts)
    return road.judge(replace(solution, time_constants=replace(solution.time_constants, **changes)))


def twice(expression: Expression) -> Expression:
    return Times((Number(Fraction(2)), expression))


def with_row(parts: str, index: int, kind: str = "open_circuit", **changes):
    rows = list(getattr(solved(parts).time_constants, kind))
    rows[index] = replace(rows[index], **changes)
    return verdict_on(parts, **{kind: tuple(rows)})


def with_products(parts: str, name: str, change) -> road.Verdict:
    """Judge with the products of one coefficient changed."""
    found: TimeConstants = solved(parts).time_constants
    coefficients = tuple(
        Coefficient(each.name, tuple(change(list(each.products)))) if each.name == name else each
        for each in found.coefficients
    )
    assert coefficients != found.coefficients
    return verdict_on(parts, coefficients=coefficients)


@pytest.mark.parametrize("parts", [COMMON_EMITTER, HIDDEN, COUPLED, COIL, OP_AMP, SENSED])
def test_right_time_constants_pass(parts):
    verdict = road.judge(solved(parts))
    assert verdict.passed is True, verdict.measured
    assert "at 2 points" in verdict.measured
    assert "10⁻¹" in verdict.limit


def test_nothing_given_is_neither_pass_nor_fail():
    assert road.judge(replace(solved(COIL), time_constants=None)).passed is None
    nothing = TimeConstants((), (), (), (), "the circuit is too large")
    assert road.judge(replace(solved(COIL), time_constants=nothing)).passed is None


@pytest.mark.parametrize("field", ["resistance", "readable", "constant"])
@pytest.mark.parametrize("parts", [COMMON_EMITTER, COIL])
def test_wrong_tree_of_a_row_fails(field, parts):
    row = solved(parts).time_constants.open_circuit[0]
    verdict = with_row(parts, 0, **{field: twice(getattr(row, field))})
    assert verdict.passed is False
    assert row.symbol in verdict.measured


def test_beta_for_beta_plus_one_is_found_in_a_readable_form():
    # Under 1 % at nominal values, and yet another formula.
    row = solved(COMMON_EMITTER).time_constants.open_circuit[1]
    wrong = parse_expression("(R_S || r_pi)*g_m*R_L + R_L")
    assert with_row(COMMON_EMITTER, 1, readable=wrong).passed is False
    right = parse_expression("(R_S || r_pi)*(1 + g_m*R_L) + R_L")
    assert with_row(COMMON_EMITTER, 1, readable=right).passed is True
    assert row.symbol == "C_mu"


def test_swapped_rows_fail():
    first, second = solved(COMMON_EMITTER).time_constants.open_circuit
    assert with_row(COMMON_EMITTER, 0, readable=second.readable).passed is False
    other = with_row(COMMON_EMITTER, 1, derivation=first.derivation)
    assert "derivation is that of another" in other.measured
    assert with_row(COMMON_EMITTER, 1, symbol=first.symbol).passed is False


def test_broken_step_of_a_resistance_fails():
    row = solved(COMMON_EMITTER).time_constants.open_circuit[1]
    steps = list(row.derivation.steps)
    last = steps[-1]
    steps[-1] = replace(last, equation=replace(last.equation, right=twice(last.equation.right)))
    broken = replace(row.derivation, steps=tuple(steps))
    verdict = with_row(COMMON_EMITTER, 1, derivation=broken)
    assert verdict.passed is False
    assert "step" in verdict.measured


def test_missing_row_fails():
    rows = solved(COMMON_EMITTER).time_constants.open_circuit
    verdict = verdict_on(COMMON_EMITTER, open_circuit=rows[:1])
    assert verdict.passed is False
    assert "add up to b_1" in verdict.measured
    without = tuple(row for row in rows if row.symbol != "C_mu")
    coefficients = solved(COMMON_EMITTER).time_constants.coefficients
    kept = tuple(
        replace(each, products=tuple(p for p in each.products if "C_mu" not in p.symbols))
        for each in coefficients
    )
    verdict = verdict_on(COMMON_EMITTER, open_circuit=without, coefficients=kept)
    assert verdict.passed is False


@pytest.mark.parametrize("name", ["b_1", "b_2", "a_1"])
def test_missing_product_fails(name):
    verdict = with_products(COMMON_EMITTER, name, lambda products: products[1:])
    assert verdict.passed is False
    assert name in verdict.measured


@pytest.mark.parametrize("name", ["b_1", "b_2", "a_1"])
@pytest.mark.parametrize("field", ["term", "readable"])
def test_wrong_product_fails(name, field):
    def change(products):
        wrong = Negative(getattr(products[0], field))
        return [replace(products[0], **{field: wrong}), *products[1:]]

    assert with_products(COMMON_EMITTER, name, change).passed is False


def test_products_that_only_add_up_fail():
    def change(products):
        first, second = products
        return [
            replace(first, term=second.term, readable=second.readable, share=second.share),
            replace(second, term=first.term, readable=first.readable, share=first.share),
        ]

    verdict = with_products(COMMON_EMITTER, "b_1", change)
    assert verdict.passed is False
    assert "the product of C_pi" in verdict.measured


@pytest.mark.parametrize("hidden", [(ONE,), (ONE, parse_expression("R_1*C_2"))])
def test_wrong_hidden_factor_fails(hidden):
    verdict = verdict_on(HIDDEN, hidden=hidden)
    assert verdict.passed is False
    assert "hidden" in verdict.measured


def test_hidden_factor_where_there_is_none_fails():
    assert verdict_on(COMMON_EMITTER, hidden=(ONE, parse_expression("R_S*C_pi"))).passed is False


@pytest.mark.parametrize("field", ["resistance", "readable", "constant"])
def test_wrong_short_circuit_constant_fails(field):
    row = solved(COUPLED).time_constants.short_circuit[1]
    verdict = with_row(COUPLED, 1, "short_circuit", **{field: twice(getattr(row, field))})
    assert verdict.passed is False
    assert "short-circuit" in verdict.measured


def test_open_circuit_constant_given_as_a_short_circuit_one_fails():
    opened = solved(COUPLED).time_constants.open_circuit[0]
    verdict = with_row(
        COUPLED,
        0,
        "short_circuit",
        resistance=opened.resistance,
        readable=opened.readable,
        constant=opened.constant,
        seconds=opened.seconds,
        share=None,
    )
    assert verdict.passed is False


def test_wrong_seconds_and_shares_fail():
    row = solved(COMMON_EMITTER).time_constants.open_circuit[0]
    assert "seconds" in with_row(COMMON_EMITTER, 0, seconds=row.seconds * 2).measured
    assert "seconds" in with_row(COMMON_EMITTER, 0, seconds=None).measured
    assert "share" in with_row(COMMON_EMITTER, 0, share=row.share + 0.01).measured
    short = solved(COUPLED).time_constants.short_circuit[0]
    assert "share" in with_row(COUPLED, 0, "short_circuit", share=short.share * 1.001).measured
    verdict = with_products(COMMON_EMITTER, "b_2", lambda items: [replace(items[0], share=0.5)])
    assert "share" in verdict.measured


def test_constant_called_infinite_that_is_not_fails():
    assert with_row(COMMON_EMITTER, 0, constant=None).passed is False
    without = {
        "resistance": None,
        "readable": None,
        "seconds": Fraction(0),
        "share": 0.0,
        "constant": ZERO,
    }
    assert with_row(COIL, 0, **without).passed is False


def test_definition_that_a_readable_form_uses_is_taken_at_its_word():
    row = solved(COMMON_EMITTER).time_constants.open_circuit[1]
    readable = parse_expression("(R_S || r_pi)*(1 + x*R_L) + R_L")
    right = (("x", parse_expression("g_m")),)
    wrong = (("x", parse_expression("2*g_m")),)
    constant = Times((readable, parse_expression("C_mu")))
    both = {"readable": readable, "constant": constant}
    kept = tuple(name for name in row.definitions if name[0] != "x")
    assert with_row(COMMON_EMITTER, 1, **both, definitions=(*kept, *right)).passed is True
    assert with_row(COMMON_EMITTER, 1, **both, definitions=(*kept, *wrong)).passed is False
    assert with_row(COMMON_EMITTER, 1, **both, definitions=kept).passed is False


@pytest.mark.parametrize(
    "changes",
    [
        {"hidden_says": ""},
        {"hidden_readable": (ONE, parse_expression("R_1*C_1"))},
        {"hidden": (ONE, parse_expression("R_1*C_1")), "hidden_readable": ()},
    ],
)
def test_wrong_word_on_a_hidden_mode_fails(changes):
    assert verdict_on(HIDDEN, **changes).passed is False


def test_coefficient_of_the_whole_circuit_is_none_of_a_response_with_hidden_modes():
    def with_the_hidden_one(products):
        other = replace(products[0], symbols=("C_2",), term=parse_expression("R_2*C_2"))
        return [products[0], replace(other, readable=other.term)]

    verdict = with_products(HIDDEN, "b_1", with_the_hidden_one)
    assert verdict.passed is False
    assert "b_1" in verdict.measured


def test_open_circuit_constant_of_a_hidden_mode_is_judged():
    row = solved(HIDDEN).time_constants.open_circuit[1]
    assert row.symbol == "C_2"
    assert with_row(HIDDEN, 1, constant=twice(row.constant)).passed is False


def test_words_of_hidden_modes_where_there_are_none_fail():
    assert verdict_on(COIL, hidden_says="C_9 cancels.").passed is False
