"""Numbers with units as a sheet prints them."""

from __future__ import annotations

import math
from fractions import Fraction

from derive.quantities.dimension import (
    CAPACITANCE,
    CONDUCTANCE,
    CURRENT,
    FREQUENCY,
    INDUCTANCE,
    RESISTANCE,
    TIME,
    VOLTAGE,
    Dimension,
)
from derive.quantities.units import ledger_unit, unit_of

__all__ = ["engineering", "ledger_unit", "unit_of"]

_PREFIX_BY_EXPONENT = {
    -15: "f",
    -12: "p",
    -9: "n",
    -6: "µ",
    -3: "m",
    0: "",
    3: "k",
    6: "M",
    9: "G",
    12: "T",
}
# A prefix before a power would be raised with it (1 ms² is 10⁻⁶ s²): only single units take one.
_TAKES_PREFIX = frozenset(
    {
        RESISTANCE,
        CAPACITANCE,
        INDUCTANCE,
        CONDUCTANCE,
        VOLTAGE,
        CURRENT,
        FREQUENCY,
        TIME,
    }
)
_SUPERSCRIPTS = str.maketrans("-0123456789", "⁻⁰¹²³⁴⁵⁶⁷⁸⁹")
_PLAIN_RANGE = range(-3, 6)


def engineering(
    value: float | Fraction, dimension: Dimension, digits: int = 4, *, unit: str | None = None
) -> str:
    """Give the value rounded to so many digits with its prefix and unit: "4.7 kΩ", "1.39 Grad/s".

    Given: a value in SI base units; `unit` replaces the dimension's own ("Hz" for a frequency that
    is counted in cycles). Zeros at the end are dropped; a pure ratio takes no prefix. Halves round
    to even. Rounding is exact: the same value gives the same text on every machine.
    """
    name = unit_of(dimension) if unit is None else unit
    tail = f" {name}" if name else ""
    if isinstance(value, float) and not math.isfinite(value):
        return "undefined" if math.isnan(value) else f"{'−' if value < 0 else ''}∞{tail}"
    exact = Fraction(value)
    if exact == 0:
        return f"0{tail}"
    sign = "−" if exact < 0 else ""
    mantissa, exponent = _rounded(abs(exact), digits)
    if dimension in _TAKES_PREFIX:
        group = 3 * (exponent // 3)
        if group in _PREFIX_BY_EXPONENT:
            number = _decimal(mantissa, exponent - group, digits)
            return f"{sign}{number} {_PREFIX_BY_EXPONENT[group]}{name}"
    elif exponent in _PLAIN_RANGE:
        return f"{sign}{_decimal(mantissa, exponent, digits)}{tail}"
    power = str(exponent).translate(_SUPERSCRIPTS)
    return f"{sign}{_decimal(mantissa, 0, digits)} × 10{power}{tail}"


def _rounded(value: Fraction, digits: int) -> tuple[int, int]:
    """Give m of that many digits and e with value ≈ m·10^(e - digits + 1)."""
    exponent = len(str(value.numerator)) - len(str(value.denominator))
    if value < Fraction(10) ** exponent:
        exponent -= 1
    mantissa = round(value / Fraction(10) ** (exponent - digits + 1))
    if mantissa == 10**digits:
        return mantissa // 10, exponent + 1
    return mantissa, exponent


def _decimal(mantissa: int, exponent: int, digits: int) -> str:
    figures = str(mantissa)
    if exponent < 0:
        text = "0." + "0" * (-exponent - 1) + figures
    elif exponent + 1 >= digits:
        return figures + "0" * (exponent + 1 - digits)
    else:
        text = f"{figures[: exponent + 1]}.{figures[exponent + 1 :]}"
    return text.rstrip("0").rstrip(".")
