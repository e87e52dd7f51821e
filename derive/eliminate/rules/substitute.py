"""Put the solution for an unknown into another equation."""

from __future__ import annotations

from derive.eliminate.rows import Row
from derive.eliminate.scribe import Scribe
from derive.expressions.polynomials import add, multiply, negate
from derive.expressions.tree import ONE, Equation

NAME = "substitute"


def apply(scribe: Scribe, target: int, row: Row, solved: int, unknown: str) -> int:
    """Give the target equation with the unknown replaced by its solution."""
    value = scribe.steps[solved - 1].equation.right
    coefficient = scribe.polynomial(row.entries[unknown])
    rest = [name for name in row.entries if name != unknown]
    left = add([multiply([coefficient, value]), scribe.left_of(row, rest)])
    right = scribe.times(row.right, scribe.system.input)
    uses = [(target, ONE), (solved, negate(coefficient))]
    return scribe.follow(NAME, Equation(left, right), uses, ONE, subject=unknown)
