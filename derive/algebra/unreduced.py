"""Fractions of polynomials in which nothing is cancelled, for expressions that are worked but once."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any, Self


@dataclass(frozen=True, slots=True, eq=False)
class Unreduced:
    """top/bottom over any ring of polynomials; equal denominators are kept where two are added.

    A class of its own can refuse what grows too long, in `__post_init__` and `__pow__`.
    """

    top: Any
    bottom: Any

    def __add__(self, other: Self) -> Self:
        """Add without a common denominator being sought."""
        if self.bottom == other.bottom:
            return type(self)(self.top + other.top, self.bottom)
        return type(self)(self.top * other.bottom + other.top * self.bottom, self.bottom * other.bottom)

    def __mul__(self, other: Self) -> Self:
        """Multiply tops and bottoms."""
        return type(self)(self.top * other.top, self.bottom * other.bottom)

    def __truediv__(self, other: Self) -> Self:
        """Multiply by the reciprocal.

        Raises: ZeroDivisionError where the divisor is zero for all values.
        """
        if other.top == 0:
            raise ZeroDivisionError("a divisor is zero for all values")
        return type(self)(self.top * other.bottom, self.bottom * other.top)

    def __neg__(self) -> Self:
        """Change the sign of the top."""
        return type(self)(-self.top, self.bottom)

    def __pow__(self, exponent: int) -> Self:
        """Raise top and bottom to a power that is not negative."""
        return type(self)(self.top**exponent, self.bottom**exponent)
