"""Miller's views against matrices solved by NumPy and against textbook forms worked here by hand."""

from dataclasses import replace
from fractions import Fraction

import numpy as np
import pytest
from miller_circuits import FOLLOWER, STAGE, solution_of, views_of
from road import equal

from derive.expressions.walk import evaluate
from derive.reactances.find_miller import MOST_CAPACITORS, MOST_UNKNOWNS, find_miller
from derive.readable.vocabulary import vocabulary_of

VALUES = {
    "R_S": 5e3, "r_pi": 2.5e3, "C_pi": 10e-12, "C_mu": 2e-12, "g_m": 40e-3, "R_L": 2e3, "C_L": 5e-12, "R_E": 1e3,
}  # fmt: skip


def again(solution):
    """Find the views of a solution once more, as the road does."""
    vocabulary = vocabulary_of(solution.derivation.system.small_signal)
    return find_miller(solution.derivation, solution.form, solution.numbers, vocabulary)


def gain_at(view, s):
    """Give the view's A(s) in complex numbers, its words worked out."""
    known = dict(VALUES)
    for name, definition in view.definitions:
        known[name] = evaluate(definition, known, float)
    top, bottom = (
        sum(evaluate(part, known, float) * s**power for power, part in enumerate(parts))
        for parts in (view.gain_numerator, view.gain_denominator)
    )
    return evaluate(view.gain, known, float) * top / bottom


def stage_voltages(s, bridging=True, extra=(0.0, 0.0)):
    """Solve the stage's two current laws by NumPy; `extra` are capacitances to ground at b and out."""
    v = VALUES
    c = s * v["C_mu"] * bridging
    matrix = np.array(
        [
            [1 / v["R_S"] + 1 / v["r_pi"] + s * (v["C_pi"] + extra[0]) + c, -c],
            [v["g_m"] - c, 1 / v["R_L"] + s * (v["C_L"] + extra[1]) + c],
        ]
    )
    return np.linalg.solve(matrix, np.array([1 / v["R_S"], 0]))


POINTS = [1e5, 3e6j, 1e7 + 2e8j, -4e5 + 1e9j]


@pytest.mark.parametrize("s", POINTS)
def test_gain_is_the_ratio_of_two_solved_voltages(s):
    view = views_of(STAGE)["C_mu"]
    near, far = stage_voltages(s)
    assert gain_at(view, s) == pytest.approx(far / near, rel=1e-9)
    # The current that the capacitor draws from each node is that of the exact admittances.
    current = s * VALUES["C_mu"] * (near - far)
    assert s * VALUES["C_mu"] * (1 - gain_at(view, s)) * near == pytest.approx(current, rel=1e-9)
    assert s * VALUES["C_mu"] * (1 - 1 / gain_at(view, s)) * far == pytest.approx(-current, rel=1e-9)


@pytest.mark.parametrize("s", POINTS)
def test_gain_of_the_follower_is_the_textbook_s(s):
    v = VALUES
    drive = v["g_m"] + 1 / v["r_pi"] + s * v["C_pi"]
    view = views_of(FOLLOWER)["C_pi"]
    assert gain_at(view, s) == pytest.approx(drive / (drive + 1 / v["R_E"]), rel=1e-9)


def test_factors_are_those_of_the_gain_at_zero_frequency():
    view = views_of(STAGE)["C_mu"]
    assert equal(view.gain, "-g_m*R_L")
    assert equal(view.input_factor, "1 + g_m*R_L")
    assert equal(view.output_factor, "1 + 1/(g_m*R_L)")
    assert (view.part, view.symbol, view.element, view.near, view.far) == (
        "C_mu",
        "C_mu",
        "C_mu",
        "b",
        "out",
    )


def quadratic(b_1, b_2):
    return sorted(np.roots([b_2, b_1, 1]), key=abs)


def test_errors_agree_with_numpy_to_six_digits():
    v = VALUES
    view = views_of(STAGE)["C_mu"]
    r, gain = 1 / (1 / v["R_S"] + 1 / v["r_pi"]), v["g_m"] * v["R_L"]
    b_1 = r * v["C_pi"] + (r * (1 + gain) + v["R_L"]) * v["C_mu"] + v["R_L"] * v["C_L"]
    pairs = v["C_pi"] * v["C_mu"] + v["C_pi"] * v["C_L"] + v["C_mu"] * v["C_L"]
    exact = quadratic(b_1, r * v["R_L"] * pairs)
    guess = sorted(
        [
            -1 / (r * (v["C_pi"] + v["C_mu"] * (1 + gain))),
            -1 / (v["R_L"] * (v["C_L"] + v["C_mu"] * (1 + 1 / gain))),
        ],
        key=abs,
    )
    errors = {error.name: error for error in view.errors}
    assert list(errors) == ["gain", "first pole", "second pole"]
    assert errors["gain"].error == 0
    for name, approximate, true in zip(("first pole", "second pole"), guess, exact, strict=True):
        assert errors[name].approximate == pytest.approx(approximate, rel=1e-9)
        assert errors[name].exact == pytest.approx(true, rel=1e-9)
        assert errors[name].error == pytest.approx((approximate - true) / true, rel=1e-6)
    (zero,) = view.missing_zeros
    assert zero == pytest.approx(v["g_m"] / v["C_mu"], rel=1e-12)


def test_response_with_both_halves_is_that_of_the_circuit_with_them():
    view = views_of(STAGE)["C_mu"]
    near, far = map(float, view.halves)
    assert near == pytest.approx(2e-12 * 81, rel=1e-12)
    assert far == pytest.approx(2e-12 * (1 + 1 / 80), rel=1e-12)
    first = next(error.approximate for error in view.errors if error.name == "first pole")
    # Beside its pole the response grows beyond all bounds; a thousandth away it does not.
    at_pole, beside = (
        abs(stage_voltages(s, bridging=False, extra=(near, far))[1])
        for s in (first * (1 + 1e-12), first * (1 + 1e-3))
    )
    assert at_pole > 1e6 * beside


def test_complex_pair_is_compared_by_its_distance_from_the_origin():
    loaded = FOLLOWER + 'C_L = { capacitor = "200p", between = ["out", "gnd"] }\n'
    v, load = VALUES, 200e-12
    view = views_of(loaded)["C_pi"]
    # The two current laws of base and emitter, multiplied out by hand.
    g_s, g_b, g_e = 1 / 1e3, 1 / v["r_pi"], 1 / v["R_E"]
    matrix = [
        [
            np.polynomial.Polynomial([g_s + g_b, v["C_pi"] + v["C_mu"]]),
            np.polynomial.Polynomial([-g_b, -v["C_pi"]]),
        ],
        [
            np.polynomial.Polynomial([-g_b - v["g_m"], -v["C_pi"]]),
            np.polynomial.Polynomial([g_b + v["g_m"] + g_e, v["C_pi"] + load]),
        ],
    ]
    exact = (matrix[0][0] * matrix[1][1] - matrix[0][1] * matrix[1][0]).roots()
    assert abs(exact[0].imag) > 0
    first = next(error for error in view.errors if error.name == "first pole")
    assert abs(first.exact) == pytest.approx(abs(exact[0]), rel=1e-9)
    # The halves make two real poles of it, whose size tells nothing of the pair's.
    assert first.approximate.imag == 0
    assert (first.error, first.says) == (None, "real, and no pair")
    assert view.usable is False


def test_values_left_open_leave_symbols_alone():
    view = views_of(STAGE.replace('"2k"', '"?"'))["C_mu"]
    assert equal(view.input_factor, "1 + g_m*R_L")
    assert (view.errors, view.usable, view.reasons, view.halves) == ((), None, (), None)


def test_coupled_coils_whose_m_is_no_whole_root_are_not_judged_in_numbers():
    coils = """
L_1 = { inductor = "1u", between = ["out", "gnd"] }
L_2 = { inductor = "2u", between = ["z", "gnd"] }
k_1 = { coupling = "0.5", coils = ["L_1", "L_2"] }
R_z = { resistor = "50R", between = ["z", "gnd"] }
R_d = { resistor = "10k", between = ["out", "c"] }
"""
    circuit = STAGE.replace('"out"', '"c"') + coils
    view = views_of(circuit)["C_mu"]
    assert (view.errors, view.usable) == ((), None)
    rational = circuit.replace('"2u"', '"4u"')
    assert views_of(rational)["C_mu"].usable is not None


def ladder(rungs):
    """Give a chain of resistors, each bridged by a capacitor but for the first."""
    lines = ['R_0 = { resistor = "1k", between = ["in", "n0"] }']
    for k in range(rungs):
        lines.append(f'R_{k + 1} = {{ resistor = "1k", between = ["n{k}", "n{k + 1}"] }}')
        lines.append(f'C_{k + 1} = {{ capacitor = "1n", between = ["n{k}", "n{k + 1}"] }}')
    lines.append(f'R_x = {{ resistor = "1k", between = ["n{rungs}", "gnd"] }}')
    return "\n".join(lines).replace(f'"n{rungs}"', '"out"')


def test_work_is_bounded_by_unknowns():
    assert len(views_of(ladder(MOST_UNKNOWNS - 1))) == MOST_UNKNOWNS - 1
    assert views_of(ladder(MOST_UNKNOWNS)) == {}


def test_work_is_bounded_by_capacitors():
    several = "\n".join(
        f'C_{name} = {{ capacitor = "1p", between = ["b", "out"] }}'
        for name in ("a", "b", "c", "d", "e", "f", "g")
    )
    views = views_of(STAGE + several)
    assert len(views) == MOST_CAPACITORS
    assert list(views) == ["C_mu", "C_a", "C_b", "C_c", "C_d", "C_e"]


def test_gain_that_is_too_long_to_read_is_left_out(monkeypatch):
    solution = solution_of(STAGE)
    assert again(solution) == solution.miller
    monkeypatch.setattr("derive.reactances.miller_gain.READABLE_TERMS", 3)
    assert again(solution) == ()


def test_determinants_beyond_their_limit_are_not_worked(monkeypatch):
    solution = solution_of(STAGE)
    monkeypatch.setattr("derive.reactances.miller_gain.TERM_LIMIT", 0)
    assert again(solution) == ()


def test_response_of_zero_has_no_view():
    solution = solution_of(
        STAGE + 'R_y = { resistor = "1k", between = ["y", "gnd"] }', find='voltage = "y"\nper = "V_s"'
    )
    assert solution.form.is_zero
    assert solution.miller == ()


def test_same_circuit_gives_the_same_views_twice():
    solution = solution_of(FOLLOWER)
    assert again(solution) == again(replace(solution)) == solution.miller


def test_halves_times_the_gain_leave_no_charge_over():
    # C_near·1 + C_far·A_0 is the capacitor's charge at both ends for V_near = 1: they cancel.
    view = views_of(FOLLOWER)["C_pi"]
    gain = Fraction(101 * 1000, 2500 + 101 * 1000)
    near, far = view.halves
    assert near == Fraction(10, 10**12) * (1 - gain)
    assert near + far * gain == 0
