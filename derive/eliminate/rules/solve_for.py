"""Solve an equation for one unknown; the divisor is stated not to be zero."""

from __future__ import annotations

from derive.algebra.ring import negative
from derive.eliminate.rows import Row
from derive.eliminate.scribe import Scribe, number, positive_first
from derive.expressions.polynomials import add, divide, negate
from derive.expressions.tree import Equation, Name

NAME = "solve for one unknown"


def apply(scribe: Scribe, source: int, row: Row, unknown: str) -> int:
    """Give "unknown = …"; nothing is written where the equation already says so.

    An unknown with a negative coefficient is solved for with all signs turned, so that the divisor, which
    is stated not to be zero, is written without a sign.
    """
    pivot = row.entries[unknown]
    turn = -1 if negative(pivot) else 1
    others = [
        negate(scribe.times(entry * turn, name)) for name, entry in row.entries.items() if name != unknown
    ]
    total = add(positive_first([*others, scribe.times(row.right * turn, scribe.system.input)]))
    divisor = scribe.polynomial(pivot * turn)
    equation = Equation(Name(unknown), divide(total, divisor))
    if scribe.steps[source - 1].equation == equation:
        return source
    nonzero = None if pivot.is_constant() else divisor
    uses = [(source, number(turn))]
    return scribe.follow(NAME, equation, uses, divisor, subject=unknown, nonzero=nonzero)
