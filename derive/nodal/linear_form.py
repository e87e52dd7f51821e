"""A sum of unknowns and drives with coefficients, kept both as written and as a row of polynomials."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass

from derive.algebra.ring import Polynomial
from derive.expressions.polynomials import divide, multiply, negate, subtract
from derive.expressions.tree import Expression, Name

Row = tuple[tuple[str, Polynomial], ...]


@dataclass(frozen=True, slots=True, eq=False)
class LinearForm:
    """`shown` is the form as an engineer writes it; `row` its coefficient by name, in first order."""

    shown: Expression
    row: Row

    @property
    def is_zero(self) -> bool:
        """Whether nothing is left of the form."""
        return not self.row

    def negated(self) -> LinearForm:
        """Give the form with its sign changed."""
        return LinearForm(negate(self.shown), tuple((name, -entry) for name, entry in self.row))

    def minus(self, other: LinearForm) -> LinearForm:
        """Give this form minus another."""
        rows = combine([self.row, other.negated().row])
        return LinearForm(subtract(self.shown, other.shown), rows)

    def times(self, factors: Iterable[Expression], entry: Polynomial) -> LinearForm:
        """Give the form times a product of factors, whose polynomial is `entry`."""
        shown = multiply([*factors, self.shown])
        return LinearForm(shown, tuple((name, value * entry) for name, value in self.row))

    def over(self, name: str, generator: Polynomial) -> LinearForm:
        """Give the form divided by a name whose reciprocal is `generator`."""
        shown = divide(self.shown, Name(name))
        return LinearForm(shown, tuple((key, value * generator) for key, value in self.row))


def combine(rows: Iterable[Row]) -> Row:
    """Add rows; names whose coefficients cancel are left out."""
    total: dict[str, Polynomial] = {}
    for row in rows:
        for name, entry in row:
            total[name] = total[name] + entry if name in total else entry
    return tuple((name, entry) for name, entry in total.items() if entry != 0)
