from __future__ import annotations

from fractions import Fraction

import pytest
from hypothesis import given
from hypothesis import strategies as st

from derive.errors import InputError
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
)
from derive.quantities.value import read_number, read_value

DIMENSIONS = (
    CAPACITANCE,
    CONDUCTANCE,
    CURRENT,
    FREQUENCY,
    INDUCTANCE,
    RATIO,
    RESISTANCE,
    TIME,
    VOLTAGE,
)

# IEC 60062:2016, clause on coding of resistance and capacitance values.
RESISTOR_CODES = [
    ("R47", "0.47"),
    ("4R7", "4.7"),
    ("470R", "470"),
    ("4K7", "4700"),
    ("47K", "47e3"),
    ("47K3", "47.3e3"),
    ("470K", "470e3"),
    ("4M7", "4.7e6"),
]
# As above; these from memory.
CAPACITOR_CODES = [
    ("p33", "0.33e-12"),
    ("3p3", "3.3e-12"),
    ("33p", "33e-12"),
    ("n33", "0.33e-9"),
    ("3n3", "3.3e-9"),
    ("u33", "0.33e-6"),
    ("3u3", "3.3e-6"),
    ("3m3", "3.3e-3"),
]


@pytest.mark.parametrize(("code", "ohms"), RESISTOR_CODES)
def test_resistor_code_reads_as_the_standard_says(code, ohms):
    assert read_value(code, RESISTANCE, where="").exact == Fraction(ohms)


@pytest.mark.parametrize(("code", "farads"), CAPACITOR_CODES)
def test_capacitor_code_reads_as_the_standard_says(code, farads):
    assert read_value(code, CAPACITANCE, where="").exact == Fraction(farads)


# SI prefixes: SI Brochure, 9th edition, table 7.
WRITTEN = [
    ("4k7", RESISTANCE, "4700"),
    ("2R2", RESISTANCE, "2.2"),
    ("4.7 kΩ", RESISTANCE, "4700"),
    ("4.7 k\u2126", RESISTANCE, "4700"),
    ("4.7kohm", RESISTANCE, "4700"),
    ("1 MΩ", RESISTANCE, "1e6"),
    ("1 mΩ", RESISTANCE, "1e-3"),
    ("1M", RESISTANCE, "1e6"),
    ("1m", RESISTANCE, "1e-3"),
    ("4.7E+3 ohm", RESISTANCE, "4700"),
    ("1.25e+07 ohm", RESISTANCE, "12500000"),
    ("4k7 Ω", RESISTANCE, "4700"),
    ("1 V/A", RESISTANCE, "1"),
    ("-10 kΩ", RESISTANCE, "-10000"),
    ("−10 kΩ", RESISTANCE, "-10000"),
    ("100n", CAPACITANCE, "100e-9"),
    ("10 uF", CAPACITANCE, "10e-6"),
    ("10 µF", CAPACITANCE, "10e-6"),
    ("10 \u03bcF", CAPACITANCE, "10e-6"),
    ("3 pF", CAPACITANCE, "3e-12"),
    ("4n7F", CAPACITANCE, "4.7e-9"),
    ("1 F", CAPACITANCE, "1"),
    ("5 fF", CAPACITANCE, "5e-15"),
    ("4u7", INDUCTANCE, "4.7e-6"),
    ("4E-2 H", INDUCTANCE, "0.04"),
    ("40 mS", CONDUCTANCE, "0.04"),
    ("40 mA/V", CONDUCTANCE, "0.04"),
    ("12 V", VOLTAGE, "12"),
    ("1 mA", CURRENT, "0.001"),
    ("1 us", TIME, "1e-6"),
    ("6.283185307E+7 rad/s", FREQUENCY, "62831853.07"),
    ("1.39 Grad/s", FREQUENCY, "1.39e9"),
    ("10 MHz", FREQUENCY, "1e7"),
    ("100", RATIO, "100"),
    ("-0.5", RATIO, "-0.5"),
    ("1/2", RATIO, "1/2"),
    ("-1/3", RATIO, "-1/3"),
    ("200k", RATIO, "200000"),
    ("10 V/V", RATIO, "10"),
    (".5", RATIO, "0.5"),
]


@pytest.mark.parametrize(("text", "dimension", "exact"), WRITTEN)
def test_value_is_read_exactly(text, dimension, exact):
    value = read_value(text, dimension, where="")
    assert value.exact == Fraction(exact)
    assert value.text == text


def test_question_mark_leaves_the_value_open():
    value = read_value(" ? ", RESISTANCE, where="")
    assert value.exact is None
    assert value.text == "?"


REFUSED = [
    ("4700", RESISTANCE, "no unit", "4k7"),
    ("10 nF", RESISTANCE, "a capacitance", "4.7 kΩ"),
    ("2R2", CAPACITANCE, "a resistance", "100 nF"),
    ("4F7", RESISTANCE, "a capacitance", "4k7"),
    ("1 s", CONDUCTANCE, "a time", "mS"),
    ("25 °C", RESISTANCE, "a temperature", "4k7"),
    ("10 uf", CAPACITANCE, "unknown unit", '"uF"'),
    ("10 mhz", FREQUENCY, "unknown unit", 'Hz"'),
    ("4k7 kΩ", RESISTANCE, "unknown unit", '"Ω"'),
    ("10 nn", CAPACITANCE, "unknown unit", "nF"),
    ("4,7k", RESISTANCE, "not a value", "decimal point"),
    ("1e999999999 Ω", RESISTANCE, "exponent", "a part can have"),
    ("1e-61 F", CAPACITANCE, "exponent", "a part can have"),
    ("1/0", RATIO, "zero", "1/2"),
    ("1/2", RESISTANCE, "unknown unit", "4k7"),
    ("nan", RATIO, "not a value", "100"),
    ("-inf", RATIO, "not a value", "100"),
    ("0x10", RATIO, "unknown unit", "100"),
    ("", RESISTANCE, "not a value", "4k7"),
    ("9" * 61, RATIO, "longer than 60", "100"),
    ("٤k٧", RESISTANCE, "not a value", "4k7"),
    ("__import__('os').system('x')", RESISTANCE, "not a value", "4k7"),
    ("4k7\n4k7", RESISTANCE, "unknown unit", "Ω"),
]


@pytest.mark.parametrize(("text", "dimension", "words", "cure"), REFUSED)
def test_value_that_cannot_be_meant_is_refused_with_a_cure(text, dimension, words, cure):
    with pytest.raises(InputError) as caught:
        read_value(text, dimension, where="f.toml:7")
    assert caught.value.where == "f.toml:7"
    assert words in caught.value.what
    assert cure in caught.value.cure
    assert "\n" not in str(caught.value)


def test_frequency_counted_in_cycles_refuses_radians_and_the_other_way_round():
    assert read_value("1 MHz", FREQUENCY, where="", cycles=True).exact == 10**6
    assert read_value("1 Mrad/s", FREQUENCY, where="", cycles=False).exact == 10**6
    with pytest.raises(InputError, match="rad/s, where Hz"):
        read_value("1 Mrad/s", FREQUENCY, where="", cycles=True)
    with pytest.raises(InputError, match="Hz, where rad/s"):
        read_value("1 MHz", FREQUENCY, where="", cycles=False)


@given(st.text(max_size=70), st.sampled_from(DIMENSIONS))
def test_no_text_gives_anything_but_a_value_or_an_input_error(text, dimension):
    cure = ""
    try:
        value = read_value(text, dimension, where="")
    except InputError as error:
        cure = error.cure
    assert cure or value.exact is None or abs(value.exact) < 10**140


@given(
    st.integers(-(10**12), 10**12),
    st.integers(-12, 12),
    st.sampled_from(["", "p", "n", "u", "m", "k", "M", "G"]),
)
def test_every_prefix_scales_by_its_power_of_ten(digits, exponent, prefix):
    powers = {"": 0, "p": -12, "n": -9, "u": -6, "m": -3, "k": 3, "M": 6, "G": 9}
    read = read_value(f"{digits}e{exponent} {prefix}F", CAPACITANCE, where="").exact
    assert read == digits * Fraction(10) ** (exponent + powers[prefix])


def test_plain_number_is_exact_and_anything_else_is_refused():
    assert read_number("0.1", where="") == Fraction(1, 10)
    for text in ("1 k", "1/2", "", "nan", "1e99"):
        with pytest.raises(InputError):
            read_number(text, where="")
