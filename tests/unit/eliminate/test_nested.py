"""The nested derivation: its lines against the circuit, and a wrong line found out."""

from dataclasses import replace
from fractions import Fraction

import numpy as np
import pytest
from road import circuit_of, system_of

from derive.bands.restrict import restrict
from derive.check.roads.steps import broken_steps
from derive.check.verdict import Solution
from derive.eliminate.derivation import Nested
from derive.eliminate.names import names_taken
from derive.eliminate.nested import eliminate_nested, needed
from derive.eliminate.plan import plan
from derive.eliminate.rules import name_entry, name_ratio, take_off, write_short
from derive.expressions.tree import Equation, Negative
from derive.expressions.unicode_text import to_unicode
from derive.expressions.walk import evaluate
from derive.normalise.nested import normalise_nested
from derive.normalise.nested_response import nested_response
from derive.normalise.nested_terms import determinants

DIVIDER = """R_1 = { resistor = "1k", between = ["in", "out"] }
R_2 = { resistor = "3k", between = ["out", "gnd"] }"""
CHAIN = """R_1 = { resistor = "1k", between = ["in", "a"] }
C_1 = { capacitor = "1n", between = ["a", "gnd"] }
R_2 = { resistor = "2k", between = ["a", "b"] }
C_2 = { capacitor = "3n", between = ["b", "gnd"] }
C_3 = { capacitor = "2n", between = ["a", "out"] }
g_1 = { transconductance = "5 mS", flows = ["out", "gnd"], senses = ["b", "gnd"] }
R_3 = { resistor = "5k", between = ["out", "gnd"] }"""
RULES = (name_entry.NAME, name_ratio.NAME, write_short.NAME, take_off.NAME)


def nested_of(parts, **more):
    system = system_of(parts, **more)
    return eliminate_nested(system, plan(system), Nested(None))


def solution_of_nested(parts, **more):
    """Give a whole solution in nested form, on the circuit of the full band."""
    derivation = nested_of(parts, **more)
    system = derivation.system
    found = determinants(system, derivation.plan, names_taken(system))
    form, derivation, numbers = normalise_nested(derivation, found)
    return Solution(derivation, form, numbers, restrict(circuit_of(parts, **more), "full"))


def lines_at(derivation, values):
    """Work the lines from top to bottom and give the last, which is the wanted ratio."""
    known = dict(values)
    for step in derivation.steps:
        if step.rule in (name_entry.NAME, name_ratio.NAME):
            known[step.defines] = evaluate(step.equation.right, known, Fraction)
    return evaluate(derivation.steps[-1].equation.right, known, Fraction)


def test_lines_of_a_divider_give_the_divider():
    found = lines_at(nested_of(DIVIDER), {"R_1": Fraction(1), "R_2": Fraction(3), "s": Fraction(7)})
    assert found == Fraction(3, 4)


def test_lines_are_written_as_on_paper():
    lines = [to_unicode(step.equation.right) for step in nested_of(DIVIDER).steps]
    assert lines[2:] == ["1/R_1 + 1/R_2", "V_in/R_1".replace("V_in", "V_s"), "1/(R_1·y_1)"]


def test_every_step_of_a_right_derivation_holds():
    assert broken_steps(solution_of_nested(CHAIN)) == ()


def test_lines_agree_with_the_circuit_solved_by_hand():
    # Two nodes a and out by superposition is no shorter; so b first, then a, then out, in plain fractions.
    r1, r2, r3, c1, c2, c3, g = (Fraction(v) for v in (3, 5, 7, 11, 13, 17, 19))
    s = Fraction(2, 3)
    b_per_a = 1 / (1 + s * r2 * c2)
    # out: (v_o - v_a)·s·C_3 + g·v_b + v_o/R_3 = 0.
    out_per_a = (s * c3 - g * b_per_a) / (s * c3 + 1 / r3)
    a_per_in = (1 / r1) / (1 / r1 + s * c1 + (1 - b_per_a) / r2 + s * c3 * (1 - out_per_a))
    values = {"R_1": r1, "R_2": r2, "R_3": r3, "C_1": c1, "C_2": c2, "C_3": c3, "g_1": g, "s": s}
    assert lines_at(nested_of(CHAIN), values) == a_per_in * out_per_a


@pytest.mark.parametrize("rule", RULES)
def test_wrong_line_of_every_rule_is_found_out(rule):
    solution = solution_of_nested(CHAIN)
    places = [k for k, step in enumerate(solution.derivation.steps) if step.rule == rule]
    assert places
    for place in places:
        steps = list(solution.derivation.steps)
        step = steps[place]
        turned = Equation(step.equation.left, Negative(step.equation.right))
        if step.equation.right == Negative(step.equation.right) or to_unicode(step.equation.right) == "0":
            turned = Equation(step.equation.right, Negative(step.equation.left))
            turned = Equation(turned.left, _plus_one(turned.right))
        steps[place] = replace(step, equation=turned)
        wrong = replace(solution, derivation=replace(solution.derivation, steps=tuple(steps)))
        assert broken_steps(wrong), step.number


def _plus_one(expression):
    from derive.expressions.tree import ONE, Sum

    return Sum((expression, ONE))


def test_wrong_definition_of_a_coefficient_fails_the_identity():
    from derive.check.roads import identity

    solution = solution_of_nested(CHAIN)
    assert identity.judge(solution).passed
    form = solution.form
    for place, (name, meaning) in enumerate(form.definitions):
        changed = list(form.definitions)
        changed[place] = (name, Negative(meaning))
        wrong = replace(solution, form=replace(form, definitions=tuple(changed)))
        assert identity.judge(wrong).passed is False, name


def test_part_that_the_wanted_voltage_does_not_hang_on_gets_no_line():
    behind = """
g_2 = { transconductance = "1 mS", flows = ["far", "gnd"], senses = ["out", "gnd"] }
R_9 = { resistor = "1k", between = ["far", "gnd"] }
C_9 = { capacitor = "1n", between = ["far", "gnd"] }"""
    lone, both = nested_of(CHAIN), nested_of(CHAIN + behind)
    count = [sum(step.rule in RULES for step in derivation.steps) for derivation in (lone, both)]
    assert count[0] == count[1]
    assert {line.unknown for line in both.plan.lines} == {line.unknown for line in lone.plan.lines}
    assert solution_of_nested(CHAIN + behind).form.shared == 0


def test_plan_keeps_what_the_last_unknown_needs_in_order():
    system = system_of(CHAIN)
    whole = plan(system)
    assert [line.unknown for line in needed(whole).lines] == [line.unknown for line in whole.lines]


def test_names_of_lines_step_aside_for_parts_that_bear_them():
    parts = DIVIDER.replace("R_1", "y_1").replace("R_2", "y_7")
    derivation = nested_of(parts)
    assert not {step.defines for step in derivation.steps} & {"y_1", "y_7"}
    assert lines_at(derivation, {"y_1": Fraction(1), "y_7": Fraction(3), "s": Fraction(1)}) == Fraction(
        3, 4
    )


def test_response_that_is_zero_is_given_as_zero():
    parts = (
        DIVIDER
        + """
R_8 = { resistor = "1k", between = ["alone", "gnd"] }"""
    )
    solution = solution_of_nested(parts, find='voltage = "alone"\nper = "V_s"')
    assert solution.form.is_zero
    assert solution.numbers.gain == 0
    assert broken_steps(solution) == ()


def test_same_equations_give_the_same_lines():
    assert nested_of(CHAIN).steps == nested_of(CHAIN).steps


def test_response_at_many_frequencies_is_the_circuit_solved_there():
    derivation = nested_of(CHAIN)
    values = {"R_1": 1e3, "R_2": 2e3, "R_3": 5e3, "C_1": 1e-9, "C_2": 3e-9, "C_3": 2e-9, "g_1": 5e-3}
    s = 2j * np.pi * np.logspace(2, 8, 50)
    found = nested_response(derivation, values, s)
    for one, value in zip(s, found, strict=True):
        # Nodes a, b, out: the nodal matrix written by hand.
        matrix = np.array(
            [
                [1e-3 + 5e-4 + one * 3e-9, -5e-4, -one * 2e-9],
                [-5e-4, 5e-4 + one * 3e-9, 0],
                [-one * 2e-9, 5e-3, one * 2e-9 + 2e-4],
            ]
        )
        assert value == pytest.approx(np.linalg.solve(matrix, [1e-3, 0, 0])[2], rel=1e-10)
