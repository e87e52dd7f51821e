"""Multiply an equation by the resistances under its fractions and collect the unknowns."""

from __future__ import annotations

from derive.eliminate.rows import Row
from derive.eliminate.scribe import Scribe
from derive.expressions.polynomials import divide
from derive.expressions.tree import ONE

NAME = "multiply out"


def apply(scribe: Scribe, source: int, row: Row, common: int) -> int:
    """Give the collected equation; nothing is written where it would not differ."""
    equation = scribe.equation(row)
    top, bottom = common * row.raised, row.content
    shared = top.gcd(bottom)
    raised, content = (scribe.polynomial(value / shared) for value in (top, bottom))
    before = scribe.steps[source - 1].equation
    if row.raised == 1 and row.content == 1 and common == 1 and before == equation:
        return source
    factor = divide(raised, content)
    nonzero = None if (bottom / shared).is_constant() else content
    return scribe.follow(
        NAME,
        equation,
        [(source, raised)],
        content,
        factor=None if factor == ONE else factor,
        nonzero=nonzero,
    )
