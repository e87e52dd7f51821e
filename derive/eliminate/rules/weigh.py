"""State a drive in terms of the one input that several drives are taken from."""

from __future__ import annotations

from fractions import Fraction

from derive.eliminate.scribe import Scribe, number
from derive.expressions.polynomials import divide, multiply
from derive.expressions.tree import Equation, Name, Negative

NAME = "state a drive"


def apply(scribe: Scribe, drive: str, weight: Fraction) -> int:
    """Define one drive as its weight times the input."""
    share = multiply([number(abs(weight.numerator)), Name(scribe.system.input)])
    value = divide(share, number(weight.denominator))
    equation = Equation(Name(drive), Negative(value) if weight < 0 else value)
    return scribe.add(NAME, equation, defines=drive, subject=drive)
