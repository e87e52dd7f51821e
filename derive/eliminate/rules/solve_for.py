"""Solve an equation for one unknown; the divisor is stated not to be zero."""

from __future__ import annotations

from derive.eliminate.rows import Row
from derive.eliminate.scribe import Scribe
from derive.expressions.polynomials import add, divide, negate
from derive.expressions.tree import ONE, Equation, Expression, Name

NAME = "solve for one unknown"


def solution(scribe: Scribe, row: Row, unknown: str) -> Expression:
    """Give what the equation says the unknown is."""
    others = [negate(scribe.times(entry, name)) for name, entry in row.entries.items() if name != unknown]
    total = add([*others, scribe.times(row.right, scribe.system.input)])
    return divide(total, scribe.polynomial(row.entries[unknown]))


def apply(scribe: Scribe, source: int, row: Row, unknown: str) -> int:
    """Give "unknown = …"; nothing is written where the equation already says so."""
    pivot = scribe.polynomial(row.entries[unknown])
    equation = Equation(Name(unknown), solution(scribe, row, unknown))
    if scribe.steps[source - 1].equation == equation:
        return source
    nonzero = None if row.entries[unknown].is_constant() else pivot
    return scribe.follow(NAME, equation, [(source, ONE)], pivot, subject=unknown, nonzero=nonzero)
