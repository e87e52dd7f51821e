from __future__ import annotations

from fractions import Fraction

import pytest
from hypothesis import given
from hypothesis import strategies as st

from derive.quantities.dimension import (
    CAPACITANCE,
    CONDUCTANCE,
    CURRENT,
    FREQUENCY,
    INDUCTANCE,
    RATIO,
    RESISTANCE,
    TIME,
    VOLTAGE,
    Dimension,
)
from derive.quantities.format import engineering
from derive.quantities.units import ledger_unit, unit_of
from derive.quantities.value import read_value


@pytest.mark.parametrize(
    ("value", "dimension", "printed"),
    [
        (4700, RESISTANCE, "4.7 kΩ"),
        (Fraction(12, 10**12), CAPACITANCE, "12 pF"),
        (12e-12, CAPACITANCE, "12 pF"),
        (1.39e9, FREQUENCY, "1.39 Grad/s"),
        (0.04, CONDUCTANCE, "40 mS"),
        (-0.04, CONDUCTANCE, "−40 mS"),
        (Fraction(1, 3), VOLTAGE, "333.3 mV"),
        (999.96, RESISTANCE, "1 kΩ"),
        (999.94, RESISTANCE, "999.9 Ω"),
        (100000, RESISTANCE, "100 kΩ"),
        (123456, RESISTANCE, "123.5 kΩ"),
        (1e-6, TIME, "1 µs"),
        (1e-30, RESISTANCE, "1 × 10⁻³⁰ Ω"),
        (1e20, RESISTANCE, "1 × 10²⁰ Ω"),
        (0, RESISTANCE, "0 Ω"),
        (0, RATIO, "0"),
        (-37.125675934, RATIO, "−37.13"),
        (470000.0, RATIO, "470000"),
        (0.00234, RATIO, "0.00234"),
        (1.5e9, RATIO, "1.5 × 10⁹"),
        (1e-18, TIME**2, "1 × 10⁻¹⁸ s²"),
        (0.5, TIME**2, "0.5 s²"),
        (float("inf"), RESISTANCE, "∞ Ω"),
        (float("-inf"), RATIO, "−∞"),
        (float("nan"), RATIO, "undefined"),
    ],
)
def test_value_is_printed_as_an_engineer_writes_it(value, dimension, printed):
    assert engineering(value, dimension) == printed


def test_digits_are_as_many_as_asked_for_and_halves_go_to_even():
    assert engineering(Fraction(12345), RESISTANCE, digits=2) == "12 kΩ"
    assert engineering(Fraction(1234567), RESISTANCE, digits=6) == "1.23457 MΩ"
    assert engineering(Fraction("1.25"), RESISTANCE, digits=2) == "1.2 Ω"
    assert engineering(Fraction("1.35"), RESISTANCE, digits=2) == "1.4 Ω"


def test_another_unit_of_the_dimension_can_be_asked_for():
    assert engineering(10**7, FREQUENCY, unit="Hz") == "10 MHz"


@given(
    st.fractions(Fraction(1, 10**14), Fraction(10**14)),
    st.sampled_from([RESISTANCE, CAPACITANCE, INDUCTANCE, CONDUCTANCE, FREQUENCY]),
)
def test_what_is_printed_reads_back_within_its_digits(value, dimension):
    printed = engineering(value, dimension)
    back = read_value(printed, dimension, where="").exact
    assert abs(back - value) <= value * Fraction(5, 10**4)


@pytest.mark.parametrize(
    ("dimension", "printed", "ledger"),
    [
        (RATIO, "", "1"),
        (RESISTANCE, "Ω", "ohm"),
        (CAPACITANCE, "F", "F"),
        (INDUCTANCE, "H", "H"),
        (CONDUCTANCE, "S", "S"),
        (VOLTAGE, "V", "V"),
        (CURRENT, "A", "A"),
        (FREQUENCY, "rad/s", "rad/s"),
        (TIME, "s", "s"),
        (TIME**2, "s²", "s^2"),
        (TIME**12, "s¹²", "s^12"),
        (RESISTANCE * TIME**2, "Ω·s²", "ohm*s^2"),
        (CONDUCTANCE * TIME**2, "S·s²", "S*s^2"),
        (VOLTAGE / TIME, "V/s", "V/s"),
        (FREQUENCY**2, "1/s²", "1/s^2"),
        (Dimension(volt=-1, second=-1), "1/(V·s)", "1/(V*s)"),
    ],
)
def test_unit_has_a_printed_name_and_a_ledger_name(dimension, printed, ledger):
    assert unit_of(dimension) == printed
    assert ledger_unit(dimension) == ledger
    assert ledger.isascii()
