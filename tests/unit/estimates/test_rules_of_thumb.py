"""Rules of thumb: their errors against independent numbers, and what is said of them."""

from dataclasses import replace
from fractions import Fraction

import mpmath
import numpy as np
import pytest
from estimated import COMMON_EMITTER, SERIES_RLC, rule, said_of, sections
from road import equal
from scipy.optimize import brentq

from derive.expressions.text import to_text
from derive.expressions.tree import Name
from derive.reactances.time_constants import TimeConstant, TimeConstants

SUM = "bandwidth by time constants"
SIX_DIGITS = 1e-6


def half_power_rad_per_s(poles, zeros=()):
    """Give where |H| has fallen to 1/√2 of its value at zero frequency, by bisection."""

    def gap(omega):
        size = 1.0
        for pole in poles:
            size *= abs(pole) / abs(1j * omega - pole)
        for zero in zeros:
            size *= abs(1j * omega - zero) / abs(zero)
        return size - 0.5**0.5

    top = 10 * max(abs(pole) for pole in poles)
    return brentq(gap, 1e-6 * top, top, xtol=1e-12 * top, rtol=8.9e-16)


# DOMAIN.md's figures, from memory: -22 %, -8.2 % and -1 % for the sum; those of p_1 are -1/(1 + r) exactly.
@pytest.mark.parametrize(("r", "domain_percent"), [(1, -22), (10, -8.2), (100, -1.0)])
def test_errors_for_two_real_poles_are_those_of_an_independent_computation(r, domain_percent):
    said = said_of(sections(r, 1))
    poles = [-1e6 / r, -1e6]
    exact = half_power_rad_per_s(poles)
    found = rule(said, SUM)
    assert found.error == pytest.approx(1e6 / (1 + r) / exact - 1, abs=SIX_DIGITS)
    assert 100 * found.error == pytest.approx(domain_percent, rel=0.03)
    assert found.exact == pytest.approx(exact / (2 * np.pi), rel=1e-9)
    dominant, second = rule(said, "dominant pole"), rule(said, "second pole")
    assert dominant.error == pytest.approx(-1 / (1 + r), abs=SIX_DIGITS)
    # -b_1/b_2 is the sum of both poles: beyond the second by the ratio of the first to it.
    assert second.error == pytest.approx(1 / r, abs=SIX_DIGITS)
    assert dominant.usable is (r >= 10)
    assert found.usable is (r >= 10)


# (2^(1/n) - 1)^(1/2) is the shrinkage of n equal poles: Valley and Wallman, Vacuum Tube Amplifiers (1948),
# from memory.
@pytest.mark.parametrize(("n", "domain_percent"), [(2, -22), (3, -35), (4, -43), (5, -48)])
def test_errors_for_equal_poles_grow_with_their_number(n, domain_percent):
    found = rule(said_of(sections(*[1] * n)), SUM)
    exact = mpmath.sqrt(mpmath.root(2, n) - 1)
    assert found.error == pytest.approx(float(1 / (n * exact) - 1), abs=SIX_DIGITS)
    assert round(100 * found.error) == domain_percent
    assert not found.usable
    assert "less bandwidth than there is, the safe side" in found.says
    assert "poles are equal" in found.says


def test_the_sum_promises_too_much_for_a_complex_pair():
    # R = 500 Ω makes Q = √(L/C)/R = 2; DOMAIN.md: +35 %.
    said = said_of(SERIES_RLC % "500 ohm")
    found = rule(said, SUM)
    q, x = 2.0, None
    inner = 1 - 1 / (2 * q * q)
    x = np.sqrt(inner + np.sqrt(inner**2 + 1))
    assert found.error == pytest.approx(q / x - 1, abs=SIX_DIGITS)
    assert round(100 * found.error) == 35
    assert not found.usable
    assert "promises 35 % more bandwidth than there is" in found.says
    assert "a complex pair (Q = 2)" in found.says
    assert [one.name for one in said.estimates] == [SUM]
    assert said.rules_remark == (
        "No real pole dominates: the lowest poles are a pair with Q = 2. Rules for real poles do not apply."
    )


def test_an_overdamped_rlc_section_errs_as_scipy_has_it():
    said = said_of(SERIES_RLC % "5k")
    poles = np.sort(np.roots([1e-12, 5e-6, 1]).real)[::-1]
    exact = half_power_rad_per_s(poles)
    assert rule(said, SUM).error == pytest.approx(1 / 5e-6 / exact - 1, abs=SIX_DIGITS)
    assert rule(said, "dominant pole").error == pytest.approx(-1 / 5e-6 / poles[0] - 1, abs=SIX_DIGITS)
    assert rule(said, "second pole").error == pytest.approx(-5e6 / poles[1] - 1, abs=SIX_DIGITS)
    factored = half_power_rad_per_s([-1 / 5e-6, -5e6])
    two = rule(said, "bandwidth by two factors")
    assert two.error == pytest.approx(factored / exact - 1, abs=SIX_DIGITS)
    assert equal(two.formula, "(1 + b_1*s)*(1 + b_2*s/b_1)")


def test_a_common_emitter_stage_may_be_judged_by_its_dominant_pole():
    said = said_of(COMMON_EMITTER)
    # Worked apart from the product: R_S' = R_S ∥ r_π, b_1 and b_2 as in Gray and Meyer (from memory).
    r, g, load, c_pi, c_mu = 1e3 * 2.5e3 / 3.5e3, 0.04, 4.7e3, 12e-12, 2e-12
    b_1 = r * c_pi + (r * (1 + g * load) + load) * c_mu
    b_2 = r * load * c_pi * c_mu
    poles = np.sort(np.roots([b_2, b_1, 1]).real)[::-1]
    exact = half_power_rad_per_s(poles, [g / c_mu])
    dominant = rule(said, "dominant pole")
    assert to_text(dominant.formula) == "-1/b_1"
    assert (dominant.value, dominant.exact) == pytest.approx((-1 / b_1, poles[0]), rel=1e-9)
    assert dominant.usable
    assert "may be used" in dominant.says
    assert rule(said, "second pole").value == pytest.approx(-b_1 / b_2, rel=1e-9)
    found = rule(said, SUM)
    assert to_text(found.formula) == "1/(2*pi*b_1)"
    assert found.error == pytest.approx(1 / b_1 / exact - 1, abs=1e-8)


def test_the_low_corner_is_the_sum_of_short_circuit_corners():
    parts = """
    C_1 = { capacitor = "1u", between = ["in", "a"] }
    R_1 = { resistor = "1k", between = ["a", "gnd"] }
    A_1 = { voltage_gain = "1", output = ["m", "gnd"], senses = ["a", "gnd"] }
    C_2 = { capacitor = "1u", between = ["m", "out"] }
    R_2 = { resistor = "1k", between = ["out", "gnd"] }
    """
    said = said_of(parts, band="low")
    found = rule(said, "low corner by time constants")
    # Mirror of two equal low-pass poles: the true corner is 1/√(√2 − 1) above one section's.
    exact = 1 / np.sqrt(np.sqrt(2) - 1)
    assert found.exact == pytest.approx(1e3 * exact / (2 * np.pi), rel=1e-9)
    assert found.error == pytest.approx(2 / exact - 1, abs=SIX_DIGITS)
    assert to_text(found.formula) == "b_1/(2*pi*b_2)"
    assert "above the true one, the safe side" in found.says


def test_poles_of_a_low_band_are_the_lowest_and_the_highest():
    # Three sections of 1, 10 and 100 µs: b_1 = 111 µs, b_2/b_3 = (1 + 0.1 + 0.01)·10⁶ rad/s.
    said = said_of(sections(1, 10, 100), band="low")
    assert [one.name for one in said.estimates if one.unit == "rad/s"] == ["lowest pole", "highest pole"]
    lowest, highest = rule(said, "lowest pole"), rule(said, "highest pole")
    assert to_text(lowest.formula) == "-1/b_1"
    assert lowest.error == pytest.approx(1e4 / 111e-6 * 1e-8 - 1, abs=SIX_DIGITS)
    assert to_text(highest.formula) == "-b_2/b_3"
    assert (highest.value, highest.exact) == pytest.approx((-1.11e6, -1e6))
    assert highest.error == pytest.approx(0.11, abs=SIX_DIGITS)
    assert not highest.usable
    assert said.rules_remark == ""
    high = said_of(sections(1, 10, 100), band="high")
    assert [one.name for one in high.estimates if one.unit == "rad/s"] == ["dominant pole", "second pole"]


def behind_a_section(parts, size):
    """Put a section of that many nF behind a buffer behind other parts."""
    return (
        parts.replace('"out"', '"m"')
        + f"""
A_9 = {{ voltage_gain = "1", output = ["k", "gnd"], senses = ["m", "gnd"] }}
R_9 = {{ resistor = "1k", between = ["k", "out"] }}
C_9 = {{ capacitor = "{size} nF", between = ["out", "gnd"] }}
"""
    )


def test_a_pair_beyond_a_real_pole_leaves_the_rule_for_that_one():
    # A pair at 1 Mrad/s with Q = 2, and a section at 10 krad/s.
    parts = behind_a_section(SERIES_RLC % "500 ohm", 100)
    said = said_of(parts)
    assert [one.name for one in said.estimates if one.unit == "rad/s"] == ["dominant pole"]
    assert rule(said, "dominant pole").usable
    assert said.rules_remark == (
        "The next poles are a pair with Q = 2: the rule for a second real pole does not apply."
    )
    low = said_of(parts, band="low")
    assert [one.name for one in low.estimates if one.unit == "rad/s"] == ["lowest pole"]
    assert low.rules_remark == (
        "The highest poles are a pair with Q = 2: the rule for a highest real pole does not apply."
    )


def test_time_constants_of_hidden_modes_are_not_summed():
    row = TimeConstant(
        "C_9", "C_9", "C_9", "capacitor", "open-circuit", ("a", "gnd"),
        None, None, None, Name("tau"), Fraction("9e-6"), None,
    )  # fmt: skip
    given = TimeConstants((row,), (), (), (), hidden_says="C_9 makes a mode of the circuit.")
    found = rule(said_of(sections(1, 1), time_constants=given), SUM)
    assert found.value == pytest.approx(1 / (2 * np.pi * 2e-6), rel=1e-12)


def test_the_sum_is_taken_from_the_time_constants_where_they_are_given():
    def constant(name, seconds):
        return TimeConstant(
            name,
            name,
            name,
            "capacitor",
            "open-circuit",
            ("a", "gnd"),
            None,
            None,
            None,
            Name(f"tau_{name}"),
            Fraction(seconds),
            None,
        )

    given = TimeConstants((constant("C_1", "1e-6"), constant("C_2", "3e-6")), (), (), ())
    found = rule(said_of(sections(1, 1), time_constants=given), SUM)
    assert found.value == pytest.approx(1 / (2 * np.pi * 4e-6), rel=1e-12)
    assert to_text(found.formula) == "1/(2*pi*(tau_C_1 + tau_C_2))"
    # Where one is infinite, b_1 tells.
    endless = replace(given.open_circuit[0], seconds=None, constant=None)
    given = replace(given, open_circuit=(endless, given.open_circuit[1]))
    found = rule(said_of(sections(1, 1), time_constants=given), SUM)
    assert found.value == pytest.approx(1 / (2 * np.pi * 2e-6), rel=1e-12)


def test_no_rule_may_be_used_for_an_unstable_stage():
    parts = (
        sections(1, 4)
        + '\ng_1 = { transconductance = "2 mS", flows = ["gnd", "out"], senses = ["out", "gnd"] }'
    )
    said = said_of(parts)
    assert said.bandwidth is None
    assert "right half-plane" in said.remark
    assert [estimate.usable for estimate in said.estimates] == [False, False]
    assert all("unstable" in estimate.says for estimate in said.estimates)


def test_a_pole_cancelled_by_a_zero_is_named():
    # R_1 C_1 = R_2 C_2 of a compensated divider, and a slower section behind it.
    parts = """
    R_1 = { resistor = "9k", between = ["in", "a"] }
    C_1 = { capacitor = "1 nF", between = ["in", "a"] }
    R_2 = { resistor = "1k", between = ["a", "gnd"] }
    C_2 = { capacitor = "9 nF", between = ["a", "gnd"] }
    A_1 = { voltage_gain = "1", output = ["m", "gnd"], senses = ["a", "gnd"] }
    R_3 = { resistor = "9k", between = ["m", "out"] }
    C_3 = { capacitor = "1 nF", between = ["out", "gnd"] }
    """
    found = rule(said_of(parts), SUM)
    assert found.exact == pytest.approx(1 / (2 * np.pi * 9e-6), rel=1e-12)
    assert found.error == pytest.approx(-0.5, abs=SIX_DIGITS)
    assert "is cancelled by a zero at these values" in found.says


def test_a_first_order_response_needs_no_rule_for_its_pole():
    said = said_of(sections(1))
    assert [estimate.name for estimate in said.estimates] == [SUM]
    assert said.estimates[0].error == pytest.approx(0, abs=1e-12)
    assert said.estimates[0].usable


def test_formulas_use_the_names_that_the_derivation_gives_its_coefficients():
    parts = sections(1, 10).replace("R_1 =", "b_1 =")
    dominant = rule(said_of(parts), "dominant pole")
    assert to_text(dominant.formula) == "-1/b_1_H"
