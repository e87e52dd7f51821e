"""Irrational numbers as exact rationals: rounded once, to so many digits that nothing shows it."""

from __future__ import annotations

from fractions import Fraction
from math import isqrt

DIGITS = 40

# 2π to 40 digits (OEIS A019692).
TWO_PI = Fraction("6.283185307179586476925286766559005768394")
PI = TWO_PI / 2


def square_root(value: Fraction) -> Fraction:
    """Give the square root, exact where it is rational, else rounded to 40 significant digits.

    Raises: ValueError for a negative value.
    """
    if value < 0:
        raise ValueError("a negative number has no square root")
    above, below = isqrt(value.numerator), isqrt(value.denominator)
    if above * above == value.numerator and below * below == value.denominator:
        return Fraction(above, below)
    # Scaled by an even power of ten so that the whole part of the root has the digits wanted.
    size = len(str(value.numerator)) - len(str(value.denominator))
    shift = 2 * (DIGITS + 2) - size
    shift += shift % 2
    scale = Fraction(10) ** shift
    root = isqrt(int(value * scale))
    extra = Fraction(10) ** (len(str(root)) - DIGITS)
    return round(root / extra) * extra / Fraction(10) ** (shift // 2)
