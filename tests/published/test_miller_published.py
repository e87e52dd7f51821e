"""Published results about bridging capacitors, from the quantities that the sheet's own Miller view holds."""

from __future__ import annotations

import random
from dataclasses import replace
from fractions import Fraction

import pytest
from ledger_arithmetic import PRIME, RESIDUES
from published_checks import closed_form, published

from derive.check.roads import miller as road
from derive.expressions.text import to_text
from derive.expressions.walk import evaluate, evaluate_modulo
from derive.pipeline import derive
from derive.reading.read import parse

CHECKS = {check.id: check for check in published()}


def solution_of(text, band="full"):
    (found,) = [
        result.solution
        for result in derive(parse(text, "published.toml"), other_engine=False).outcome.results
        if result.solution.band.band == band
    ]
    return found


def views_of(text, band="full"):
    return {view.symbol: view for view in solution_of(text, band).miller}


def negative_capacitance():
    return CHECKS["miller_negcap"]


def port_impedance(view, values, s):
    """Give 1/(s·C·(1 − A)) with the view's own gain as a function of s, in complex numbers."""
    top, bottom = (
        sum(complex(evaluate(part, values, Fraction)) * s**power for power, part in enumerate(parts))
        for parts in (view.gain_numerator, view.gain_denominator)
    )
    gain = complex(evaluate(view.gain, values, Fraction)) * top / bottom
    return 1 / (s * complex(values[view.symbol]) * (1 - gain))


# J. M. Miller, Scientific Papers of the Bureau of Standards 15 (1920) 367-385.
def test_bridging_capacitor_across_a_gain_of_two_is_a_negative_capacitance():
    check = negative_capacitance()
    (view,) = views_of(check.topology).values()
    assert (view.near, view.far) == ("p", "o")
    values = {"C1": Fraction(1, 10**11), "E1": Fraction(2), "Ro": Fraction(1000)}
    found = port_impedance(view, values, check.s)
    assert abs(found - check.expected) <= check.relative * abs(check.expected)
    assert evaluate(view.input_factor, values, Fraction) == -1
    assert view.halves == (Fraction(-1, 10**11), Fraction(1, 2 * 10**11))
    # The gain is the same at every frequency, so that here the approximation is the truth.
    assert view.usable is True


def test_negative_capacitance_is_the_published_form_identically():
    check = negative_capacitance()
    (view,) = views_of(check.topology).values()
    chance = random.Random("negative capacitance")
    for _ in range(3):
        values = {name: chance.randrange(1, PRIME) for name in ("C1", "E1", "Ro", "s")}
        factor = evaluate_modulo(view.input_factor, values, PRIME)
        found = pow(values["s"] * values["C1"] * factor, -1, PRIME)
        assert found == closed_form(check, values, RESIDUES)
        wrong = pow(values["s"] * values["C1"] * (1 + values["E1"]), -1, PRIME)
        assert found != wrong


# Solomon, IEEE JSSC SC-9 (1974) 314-332: the compensation capacitor's zero at +g_m2/C_c, which the
# approximation has not.
def test_zero_of_a_compensated_two_stage_amplifier_is_missing_from_the_approximation():
    check = CHECKS["ts_zero"]
    view = views_of(check.topology)["Cc"]
    assert (view.near, view.far) == ("x", "out")
    (zero,) = view.missing_zeros
    assert zero.imag == 0
    assert zero.real == pytest.approx(-1 / check.expected.real, rel=1e-9)
    assert any("right half-plane" in reason for reason in view.reasons)


STAGE = """
[sheet]
title = "Stage"
[drives]
V_s = {{ voltage = ["in", "gnd"] }}
[parts]
R_S = {{ resistor = "{source}", between = ["in", "b"] }}
{parts}
[models.npn]
g_m = "40 mS"
r_pi = "2k5"
C_pi = "10 pF"
C_mu = "2 pF"
[find.A_v]
voltage = "out"
per = "V_s"
"""
COMMON_EMITTER = STAGE.format(
    source="5k",
    parts="""
Q1 = { bipolar = "npn", base = "b", collector = "out", emitter = "gnd" }
R_L = { resistor = "2k", between = ["out", "gnd"] }
""",
)
FOLLOWER = STAGE.format(
    source="1k",
    parts="""
Q1 = { bipolar = "npn", base = "b", collector = "gnd", emitter = "out" }
R_E = { resistor = "1k", between = ["out", "gnd"] }
""",
)
CASCODE = STAGE.format(
    source="1k",
    parts="""
Q1 = { bipolar = "npn", base = "b", collector = "e", emitter = "gnd" }
Q2 = { bipolar = "npn", base = "gnd", collector = "out", emitter = "e" }
R_L = { resistor = "5k", between = ["out", "gnd"] }
""",
)


# P. R. Gray, R. G. Meyer, Analysis and Design of Analog Integrated Circuits, frequency response: the
# Miller capacitance of the common emitter is C_μ·(1 + g_m·R_L); from memory.
def test_common_emitter_multiplies_c_mu_by_one_plus_its_gain():
    view = views_of(COMMON_EMITTER, "high")["C_mu"]
    assert to_text(view.input_factor) == "1 + g_m*R_L"
    assert to_text(view.output_factor) == "1 + 1/(g_m*R_L)"
    assert view.halves == (81 * Fraction(2, 10**12), Fraction(81, 80) * Fraction(2, 10**12))
    # R = R_S ∥ r_π = 1667 Ω: the input pole at 1/(R·(C_π + 81·C_μ)), against the exact quadratic's.
    resistance = 1 / (1 / 5000 + 1 / 2500)
    guess = 1 / (resistance * (10e-12 + 81 * 2e-12))
    b_1 = resistance * (10e-12 + 81 * 2e-12) + 2000 * 2e-12
    b_2 = resistance * 2000 * 10e-12 * 2e-12
    exact = (b_1 - (b_1**2 - 4 * b_2) ** 0.5) / (2 * b_2)
    (first,) = [error for error in view.errors if error.name == "first pole"]
    assert first.approximate.real == pytest.approx(-guess, rel=1e-9)
    assert first.exact.real == pytest.approx(-exact, rel=1e-9)
    assert first.error == pytest.approx(guess / exact - 1, rel=1e-6)
    assert view.usable is True
    assert view.reasons[0].startswith("first pole within 1.")
    assert any("do not use it for the second pole" in reason for reason in view.reasons)


# Miller's theorem misleads at a follower's C_π: common practice. 1 − A_0 is 1/(1 + (1 + β)·R_E/r_π).
def test_approximation_at_a_followers_c_pi_is_refused():
    view = views_of(FOLLOWER, "high")["C_pi"]
    values = {"R_E": Fraction(1000), "r_pi": Fraction(2500), "g_m": Fraction(40, 1000)}
    known = dict(values)
    for name, definition in view.definitions:
        known[name] = evaluate(definition, known, Fraction)
    assert evaluate(view.input_factor, known, Fraction) == 1 / (1 + 101 * Fraction(1000, 2500))
    assert evaluate(view.output_factor, known, Fraction) < 0
    assert view.usable is False
    assert any("near +1" in reason for reason in view.reasons)
    assert any("within a decade of the first pole" in reason for reason in view.reasons)
    (zero,) = view.missing_zeros
    assert zero.real == pytest.approx(-(40e-3 + 1 / 2500) / 10e-12, rel=1e-9)
    assert any("zero" in reason and "missing" in reason for reason in view.reasons)


# Gray and Meyer, from memory: in a cascode the input device sees the load r_e of the upper one, so that
# C_μ1 is multiplied by about two, and not by the gain to the output.
def test_cascode_does_not_multiply_c_mu_by_the_full_gain():
    views = views_of(CASCODE, "high")
    assert list(views) == ["C_mu1"]
    view = views["C_mu1"]
    assert (view.near, view.far) == ("b", "e")
    assert to_text(view.gain) == "-g_m1*r_e2"
    assert to_text(view.input_factor) == "1 + g_m1*r_e2"
    gain = float(view.halves[0] / Fraction(2, 10**12)) - 1
    assert gain == pytest.approx(100 / 101, rel=1e-9)
    assert "R_L" not in to_text(view.input_factor)
    full = float(solution_of(CASCODE, "high").numbers.gain)
    assert abs(full) > 100
    assert view.usable is True


@pytest.mark.parametrize("text", [COMMON_EMITTER, FOLLOWER, CASCODE])
def test_check_passes_on_these_stages_and_fails_with_another_gain(text):
    solution = solution_of(text, "high")
    assert road.judge(solution).passed is True
    (view, *rest) = solution.miller
    wrong = replace(view, gain=view.input_factor)
    assert road.judge(replace(solution, miller=(wrong, *rest))).passed is False
