"""Numbers as a verdict prints them."""

from __future__ import annotations

import math

_RAISED = str.maketrans("-0123456789", "⁻⁰¹²³⁴⁵⁶⁷⁸⁹")
_PREFIXES = {-1: "m", 0: "", 1: "k", 2: "M", 3: "G", 4: "T"}


def power_of_ten(exponent: int) -> str:
    """Give a power of ten with its exponent raised."""
    return "10" + str(exponent).translate(_RAISED)


def at_most(value: float) -> str:
    """Give a small positive number rounded up to one digit: 2.3e-17 is "3·10⁻¹⁷"."""
    if value <= 0:
        return "0"
    exponent = math.floor(math.log10(value))
    digit = math.ceil(value / 10.0**exponent - 1e-9)
    if digit == 10:
        digit, exponent = 1, exponent + 1
    return power_of_ten(exponent) if digit == 1 else f"{digit}·{power_of_ten(exponent)}"


def frequency(hertz: float) -> str:
    """Give a frequency to three digits with its prefix: "1.23 MHz"."""
    rounded = float(f"{hertz:.3g}")
    group = min(4, max(-1, math.floor(math.log10(rounded) / 3 + 1e-12))) if rounded > 0 else 0
    return f"{rounded / 1000.0**group:.6g} {_PREFIXES[group]}Hz"


def count(number: int, noun: str) -> str:
    """Give a number with its noun: "1 point", "3 points"."""
    return f"{number} {noun}" if number == 1 else f"{number} {noun}s"
