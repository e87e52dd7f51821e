"""Exact numbers from Python to FLINT and back."""

from __future__ import annotations

from fractions import Fraction

from flint import fmpq


def rational(value: Fraction) -> fmpq:
    """Give a fraction as a FLINT rational."""
    return fmpq(value.numerator, value.denominator)


def fraction(value: fmpq) -> Fraction:
    """Give a FLINT rational as a fraction."""
    return Fraction(int(value.p), int(value.q))
