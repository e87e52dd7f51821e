"""The check of Miller's views is made to fail, one wrong entry at a time."""

import random
import sys
from dataclasses import replace
from fractions import Fraction
from pathlib import Path

import pytest
from miller_circuits import FOLLOWER, STAGE, solution_of, solved

from derive.check.excitation import excite
from derive.check.marks import marks_of, roots_of
from derive.check.roads import miller as road
from derive.check.roads.nominal import nominal_values
from derive.expressions.parse import parse_expression
from derive.expressions.tree import ONE

sys.path.append(str(Path(__file__).parents[2] / "properties"))
SOLUTIONS = {"stage": solution_of(STAGE), "follower": solution_of(FOLLOWER)}


def text(expression):
    return parse_expression(expression)


def changed(name="stage", **fields):
    """Judge a solution whose only view has other fields."""
    solution = SOLUTIONS[name]
    (view,) = solution.miller
    return road.judge(replace(solution, miller=(replace(view, **fields),)))


def error_changed(which, **fields):
    (view,) = SOLUTIONS["stage"].miller
    return changed(
        errors=tuple(replace(error, **fields) if error.name == which else error for error in view.errors)
    )


@pytest.mark.parametrize("name", SOLUTIONS)
def test_right_views_pass(name):
    verdict = road.judge(SOLUTIONS[name])
    assert verdict.passed is True
    assert verdict.measured.startswith("1 capacitor, ")


def test_no_view_is_neither_pass_nor_fail():
    assert road.judge(replace(SOLUTIONS["stage"], miller=())).passed is None


WRONG = {
    "gain": {"gain": text("g_m*R_L")},
    "gain, and factors to match": {
        "gain": text("g_m*R_L"),
        "input_factor": text("1 - g_m*R_L"),
        "output_factor": text("1 - 1/(g_m*R_L)"),
    },
    "coefficient of the gain's numerator": {"gain_numerator": (ONE, text("C_mu/g_m"))},
    "dropped coefficient": {"gain_denominator": (ONE,)},
    "polynomial that does not begin with one": {"gain_numerator": (text("2"), text("-C_mu/g_m"))},
    "swapped polynomials": {
        "gain_numerator": (ONE, text("R_L*(C_mu + C_L)")),
        "gain_denominator": (ONE, text("-C_mu/g_m")),
    },
    "input factor": {"input_factor": text("2 + g_m*R_L")},
    "input factor of the gain alone": {"input_factor": text("g_m*R_L")},
    "output factor": {"output_factor": text("1 - 1/(g_m*R_L)")},
    "symbol": {"symbol": "C_pi"},
    "element": {"element": "C_pi"},
    "element that is no capacitor": {"element": "R_S"},
    "part": {"part": "C_pi"},
    "nodes turned round": {"near": "out", "far": "b"},
    "node that is not there": {"near": "x"},
    "halves swapped": {"halves": (Fraction(81, 40) * Fraction(1, 10**12), 162 * Fraction(1, 10**12))},
    "no errors": {"errors": ()},
    "numbers without halves": {"halves": None},
    "usable turned": {"usable": False},
    "no reasons": {"reasons": ()},
    "zero not told": {"missing_zeros": ()},
    "zero on the wrong side": {"missing_zeros": (-2e10 + 0j,)},
    "zero told twice": {"missing_zeros": (2e10 + 0j, 2e10 + 0j)},
}


@pytest.mark.parametrize("case", WRONG)
def test_one_wrong_entry_fails(case):
    verdict = changed(**WRONG[case])
    assert verdict.passed is False
    assert not verdict.measured.startswith("could not")


@pytest.mark.parametrize("name", ["gain", "first pole", "second pole"])
@pytest.mark.parametrize("field", ["approximate", "exact", "error"])
def test_a_number_that_is_wrong_in_the_eighth_digit_fails(name, field):
    (error,) = [error for error in SOLUTIONS["stage"].miller[0].errors if error.name == name]
    value = getattr(error, field)
    assert error_changed(name, **{field: value}).passed is True
    assert error_changed(name, **{field: value * (1 + 3e-8) or 1e-8}).passed is False


def test_error_under_another_name_fails():
    assert error_changed("second pole", name="third pole").passed is False
    assert error_changed("second pole", name="zero").passed is False


def test_definition_that_is_wrong_fails():
    (view,) = SOLUTIONS["follower"].miller
    assert view.definitions
    for name, _ in view.definitions:
        wrong = tuple((n, text("2*r_pi") if n == name else d) for n, d in view.definitions)
        assert changed("follower", definitions=wrong).passed is False


def test_refused_approximation_that_is_called_usable_fails():
    assert changed("follower", usable=True).passed is False


def test_numbers_where_a_value_is_open_fail():
    solution = solution_of(STAGE.replace('"2k"', '"?"'))
    assert road.judge(solution).passed is True
    (view,) = solution.miller
    wrong = replace(view, usable=True)
    assert road.judge(replace(solution, miller=(wrong,))).passed is False


def test_tableau_for_all_s_gives_the_roots_of_a_known_quadratic():
    solution = SOLUTIONS["stage"]
    circuit = solution.judged
    marks = marks_of(circuit, excite(solution.derivation.system), nominal_values(circuit))
    r = Fraction(5000, 3)
    assert marks.gain == -r / 5000 * 80
    assert marks.power == 0
    assert marks.zeros == pytest.approx([2e10])
    b_1 = r * Fraction(10) + (r * 81 + 2000) * 2 + 2000 * 5
    b_2 = r * 2000 * (10 * 2 + 10 * 5 + 2 * 5)
    by_hand = roots_of([Fraction(1), b_1 / 10**12, b_2 / 10**24])
    assert marks.poles == pytest.approx(by_hand, rel=1e-12)
    # Vieta's rules, so that the roots are not trusted for themselves.
    assert sum(-1 / pole for pole in marks.poles) == pytest.approx(float(b_1) * 1e-12, rel=1e-12)


def test_views_of_random_circuits_pass():
    from circuits import accepted_circuit

    from derive.devices.linearise import linearise
    from derive.errors import InputError

    judged = 0
    for seed in range(60):
        topology, _ = accepted_circuit(random.Random(seed))
        for find in topology.finds:
            try:
                solution = solved(linearise(topology), find)
            except InputError:
                continue
            if solution.miller:
                judged += 1
                assert road.judge(solution).passed is True, seed
    assert judged >= 8


@pytest.fixture(scope="module")
def turned():
    """Give a view with poles that cannot be compared: with a heavy load the follower has a pair."""
    loaded = FOLLOWER + 'C_L = { capacitor = "200p", between = ["out", "gnd"] }\n'
    return solution_of(loaded)


def test_percentage_between_a_real_pole_and_a_pair_fails(turned):
    (view,) = turned.miller
    assert road.judge(turned).passed is True
    (place,) = [k for k, error in enumerate(view.errors) if error.name == "first pole"]
    assert view.errors[place].error is None
    for change in ({"error": 0.0175, "says": ""}, {"says": ""}):
        errors = list(view.errors)
        errors[place] = replace(errors[place], **change)
        wrong = replace(turned, miller=(replace(view, errors=tuple(errors)),))
        assert road.judge(wrong).passed is False


def test_false_pole_on_the_right_that_is_not_told_fails():
    # Into a follower's output the halves make a pole in the right half-plane.
    loaded = (
        FOLLOWER.replace('"out"', '"e"')
        + """
R_iso = { resistor = "47 ohm", between = ["e", "out"] }
C_cab = { capacitor = "4n7", between = ["out", "gnd"] }
"""
    )
    solution = solution_of(loaded)
    (view,) = solution.miller
    assert road.judge(solution).passed is True
    false = [error for error in view.errors if error.says and error.approximate.real > 0]
    assert false
    for error in false:
        kept = tuple(other for other in view.errors if other is not error)
        wrong = replace(solution, miller=(replace(view, errors=kept),))
        assert road.judge(wrong).passed is False
        exact = error.exact or -1e9
        moved = tuple(
            replace(other, exact=2 * exact) if other is error else other for other in view.errors
        )
        wrong = replace(solution, miller=(replace(view, errors=moved),))
        assert road.judge(wrong).passed is False


def test_pole_that_does_not_follow_the_capacitor_is_not_judged_by():
    tuned = (
        STAGE.replace('"out"', '"c"').replace("C_L", "C_x")
        + """
A_1 = { voltage_gain = "1", output = ["m", "gnd"], senses = ["c", "gnd"] }
R_9 = { resistor = "10 ohm", between = ["m", "n"] }
L_9 = { inductor = "1m", between = ["n", "out"] }
C_9 = { capacitor = "1u", between = ["out", "gnd"] }
"""
    )
    solution = solution_of(tuned)
    (view,) = solution.miller
    assert road.judge(solution).passed is True
    assert view.usable is True
    # Were the second pole not compared, the first, exact as it is, would say nothing of the approximation.
    kept = tuple(error for error in view.errors if error.name != "second pole")
    wrong = replace(solution, miller=(replace(view, errors=kept),))
    assert "second pole" in road.judge(wrong).measured
