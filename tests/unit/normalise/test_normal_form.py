"""The normal form and its numbers, against responses that textbooks give."""

from dataclasses import replace
from fractions import Fraction

import pytest
from road import derivation_of, equal, solution_of

from derive.expressions.text import to_text
from derive.expressions.tree import ONE, ZERO, Name
from derive.normalise.normalise import normalise
from derive.normalise.numbers import nominal_numbers

LOW_PASS = """
R_1 = { resistor = "1k", between = ["in", "out"] }
C_1 = { capacitor = "1u", between = ["out", "gnd"] }
"""
HIGH_PASS = """
C_1 = { capacitor = "1u", between = ["in", "out"] }
R_1 = { resistor = "1k", between = ["out", "gnd"] }
"""
DIVIDER = """
R_1 = { resistor = "1k", between = ["in", "out"] }
R_2 = { resistor = "3k", between = ["out", "gnd"] }
"""
INTEGRATOR = """
R_1 = { resistor = "1k", between = ["in", "m"] }
C_1 = { capacitor = "1u", between = ["m", "out"] }
U = { ideal_opamp = true, output = "out", inputs = ["gnd", "m"] }
"""
DIFFERENTIATOR = INTEGRATOR.replace('"in", "m"', '"m", "out"').replace(
    '"m", "out"] }\nU', '"in", "m"] }\nU'
)
TWO_INTEGRATORS = """
R_1 = { resistor = "1k", between = ["in", "m"] }
C_1 = { capacitor = "1u", between = ["m", "y"] }
U_1 = { ideal_opamp = true, output = "y", inputs = ["gnd", "m"] }
R_2 = { resistor = "1k", between = ["y", "n"] }
C_2 = { capacitor = "1u", between = ["n", "out"] }
U_2 = { ideal_opamp = true, output = "out", inputs = ["gnd", "n"] }
"""


def form_of(parts, **more):
    return solution_of(parts, **more)[0]


@pytest.mark.parametrize(
    ("parts", "gain", "power", "numerator", "denominator"),
    [
        (LOW_PASS, "1", 0, [], ["R_1*C_1"]),
        (HIGH_PASS, "R_1*C_1", 1, [], ["R_1*C_1"]),
        (DIVIDER, "R_2/(R_1 + R_2)", 0, [], []),
        (INTEGRATOR, "-1/(R_1*C_1)", -1, [], []),
        (DIFFERENTIATOR, "-R_1*C_1", 1, [], []),
        (TWO_INTEGRATORS, "1/(R_1*C_1*R_2*C_2)", -2, [], []),
        (
            # A lead network.
            DIVIDER + '\nC_1 = { capacitor = "1u", between = ["in", "out"] }',
            "R_2/(R_1 + R_2)",
            0,
            ["R_1*C_1"],
            ["R_1*R_2*C_1/(R_1 + R_2)"],
        ),
        (
            # Two equal kinds of section, coupled: b_1 = R_1·C_1 + R_1·C_2 + R_2·C_2 (common practice).
            LOW_PASS.replace('"out"', '"x"')
            + '\nR_2 = { resistor = "1k", between = ["x", "out"] }'
            + '\nC_2 = { capacitor = "1u", between = ["out", "gnd"] }',
            "1",
            0,
            [],
            ["R_1*C_1 + R_1*C_2 + R_2*C_2", "R_1*R_2*C_1*C_2"],
        ),
    ],
    ids=[
        "low-pass",
        "high-pass",
        "constant",
        "integrator",
        "differentiator",
        "double",
        "lead",
        "two sections",
    ],
)
def test_a_response_is_brought_into_normal_form(parts, gain, power, numerator, denominator):
    form = form_of(parts)
    assert equal(form.gain, gain)
    assert form.power_of_s == power
    for found, expected in ((form.numerator, numerator), (form.denominator, denominator)):
        assert found[0] == ONE
        assert len(found) == 1 + len(expected)
        assert all(equal(one, other) for one, other in zip(found[1:], expected, strict=True))
    assert not form.is_zero


def test_the_last_step_expands_to_the_ratio():
    form, derivation = solution_of(LOW_PASS)
    named = {step.defines: step.equation.right for step in derivation.steps if step.defines}
    assert to_text(derivation.steps[-1].equation) == "H = K/(1 + b_1*s)"
    assert equal(named["b_1"], form.denominator[1])
    assert equal(named["K"], form.gain)


def test_a_power_that_does_not_occur_has_coefficient_zero_and_no_name():
    # A loss-free tank: 1/(1 + s²·L·C).
    form, derivation = solution_of(
        'L_1 = { inductor = "1m", between = ["in", "out"] }\n'
        'C_1 = { capacitor = "1u", between = ["out", "gnd"] }'
    )
    assert form.denominator[1] == ZERO
    assert equal(form.denominator[2], "L_1*C_1")
    assert [step.defines for step in derivation.steps if step.defines] == ["H", "K", "b_2"]


def test_a_response_of_zero_has_gain_zero_and_no_further_steps():
    parts = (
        DIVIDER
        + '\nR_3 = { resistor = "1k", between = ["x", "gnd"] }\n'
        + 'C_3 = { capacitor = "1u", between = ["x", "gnd"] }'
    )
    derivation = derivation_of(parts, find='voltage = "x"\nper = "V_s"')
    form, after = normalise(derivation)
    assert form.is_zero
    assert (form.gain, form.power_of_s, form.numerator, form.denominator) == (ZERO, 0, (ONE,), (ONE,))
    assert after == derivation
    numbers = nominal_numbers(derivation)
    assert (numbers.gain, numbers.zeros, numbers.poles) == (Fraction(0), (), ())


def test_names_that_parts_bear_are_not_given_again():
    parts = LOW_PASS.replace("R_1", "K").replace("C_1", "b_1")
    form, derivation = solution_of(parts)
    assert [step.defines for step in derivation.steps if step.defines] == ["H", "K_H", "b_1_H"]
    assert equal(form.denominator[1], "K*b_1")


def numbers_of(parts, **more):
    return nominal_numbers(derivation_of(parts, **more))


def test_the_numbers_of_a_low_pass_are_exact():
    numbers = numbers_of(LOW_PASS)
    assert numbers.gain == 1
    assert numbers.bottom[1] / numbers.bottom[0] == Fraction(1, 1000)
    (pole,) = numbers.poles
    assert (pole.real, pole.imaginary, pole.multiplicity) == (-1000.0, 0.0, 1)
    assert pole.hertz == pytest.approx(159.15494309189535, rel=1e-15)
    assert pole.quality is None
    assert numbers.zeros == ()


def test_a_resonance_has_the_textbooks_quality():
    # Series R-L-C: Q = (1/R)·√(L/C) = 10 for 100 Ω, 10 mH, 10 nF; ω_0 = 10^5 rad/s.
    numbers = numbers_of(
        'R_1 = { resistor = "100 Ω", between = ["in", "x"] }\n'
        'L_1 = { inductor = "10 mH", between = ["x", "out"] }\n'
        'C_1 = { capacitor = "10n", between = ["out", "gnd"] }'
    )
    assert [pole.imaginary > 0 for pole in numbers.poles] == [False, True]
    assert all(pole.quality == pytest.approx(10, rel=1e-14) for pole in numbers.poles)
    assert all(pole.magnitude == pytest.approx(1e5, rel=1e-14) for pole in numbers.poles)


MATCHED = (
    DIVIDER
    + """
C_1 = { capacitor = "3n", between = ["in", "out"] }
C_2 = { capacitor = "1n", between = ["out", "gnd"] }
"""
)


def test_a_pole_and_a_zero_that_meet_at_these_values_only_are_said_to():
    # A probe's divider: compensated where R_1·C_1 = R_2·C_2.
    numbers = numbers_of(MATCHED)
    (shared,) = numbers.coincident
    assert shared.real == numbers.poles[0].real == numbers.zeros[0].real
    assert shared.real == pytest.approx(-1 / 3e-6, rel=1e-14)
    assert numbers_of(MATCHED.replace("3n", "3.3n")).coincident == ()


BALANCED = """
R_1 = { resistor = "1k", between = ["in", "a"] }
R_2 = { resistor = "2k", between = ["a", "gnd"] }
R_3 = { resistor = "2k", between = ["in", "b"] }
R_4 = { resistor = "4k", between = ["b", "gnd"] }
C_4 = { capacitor = "1n", between = ["b", "gnd"] }
"""


def test_a_lowest_coefficient_that_vanishes_at_these_values_gives_gain_zero():
    find = 'voltage = ["a", "b"]\nper = "V_s"'
    numbers = numbers_of(BALANCED, find=find)
    assert numbers.gain == 0
    assert numbers.top[0] == 0 != numbers.top[1]
    assert [root.real for root in numbers.zeros] == [0.0]
    assert form_of(BALANCED, find=find).power_of_s == 0
    assert numbers_of(BALANCED.replace("4k", "4k7"), find=find).gain != 0


def test_a_denominator_that_begins_with_zero_at_these_values_has_no_gain():
    # A negative conductance that just makes up for the load: 1/R_1 = g.
    parts = (
        LOW_PASS + '\ng = { transconductance = "1 mS", flows = ["gnd", "out"], senses = ["out", "gnd"] }'
    )
    numbers = numbers_of(parts)
    assert numbers.gain is None
    assert numbers.bottom[0] == 0 != numbers.bottom[1]
    assert [pole.real for pole in numbers.poles] == [0.0]
    assert numbers_of(parts.replace("1 mS", "2 mS")).poles[0].real == pytest.approx(1000)


def test_a_denominator_that_vanishes_at_these_values_has_neither_gain_nor_poles():
    parts = DIVIDER.replace("3k", "1k")
    parts += '\ng = { transconductance = "2 mS", flows = ["gnd", "out"], senses = ["out", "gnd"] }'
    numbers = numbers_of(parts)
    assert numbers.gain is None
    assert not any(numbers.bottom)
    assert numbers.poles == ()


def test_a_value_left_open_leaves_no_numbers():
    assert numbers_of(LOW_PASS.replace('"1k"', '"?"')) is None


COILS = """
R_1 = {{ resistor = "1k", between = ["in", "a"] }}
L_1 = {{ inductor = "1m", between = ["a", "gnd"] }}
L_2 = {{ inductor = "{}", between = ["out", "gnd"] }}
K_1 = {{ coupling = "{}", coils = ["L_1", "L_2"] }}
R_L = {{ resistor = "1k", between = ["out", "gnd"] }}
"""


def test_a_mutual_inductance_is_exact_where_its_square_root_is_rational():
    # M = 0.5·√(1 mH · 4 mH) = 1 mH; the zero at the origin has gain M/(R_1·R_L)·R_L = M/R_1.
    assert numbers_of(COILS.format("4m", "0.5")).gain == Fraction(1, 10**6)
    assert numbers_of(COILS.format("4m", "-0.5")).gain == -Fraction(1, 10**6)


def test_a_mutual_inductance_that_is_not_rational_is_good_to_sixty_digits():
    gain = numbers_of(COILS.format("2m", "0.5")).gain
    exact_square = Fraction(1, 4) * Fraction(1, 1000) * Fraction(2, 1000) / 10**6
    assert gain**2 != exact_square
    assert abs(gain**2 - exact_square) < exact_square / 10**55


def test_perfectly_coupled_coils_lose_a_pole_exactly():
    # k = 1: L_1·L_2 − M² is exactly zero although M is irrational.
    numbers = numbers_of(COILS.format("2m", "1"))
    assert len(numbers.poles) == 1
    assert len(numbers_of(COILS.format("2m", "0.999")).poles) == 2


def test_the_form_is_made_anew_from_whatever_derivation_is_given():
    derivation = derivation_of(LOW_PASS)
    twice = replace(derivation, numerator=derivation.numerator * 2)
    form, _ = normalise(twice)
    assert equal(form.gain, "2")
    assert Name("K") in [step.equation.left for step in normalise(derivation)[1].steps]
