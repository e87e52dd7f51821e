"""Multiply an equation by the resistances under its fractions and collect the unknowns."""

from __future__ import annotations

from derive.eliminate.rows import Row
from derive.eliminate.scribe import Scribe, number
from derive.expressions.polynomials import divide, multiply
from derive.expressions.tree import ONE

NAME = "multiply out"


def apply(scribe: Scribe, source: int, row: Row, common: int) -> int:
    """Give the collected equation; nothing is written where it would not differ."""
    equation = scribe.equation(row)
    raised = scribe.polynomial(row.raised)
    content = scribe.polynomial(row.content)
    before = scribe.steps[source - 1].equation
    if row.raised == 1 and row.content == 1 and common == 1 and before == equation:
        return source
    factor = divide(multiply([number(common), raised]), content)
    uses = [(source, multiply([number(common), raised]))]
    return scribe.follow(NAME, equation, uses, content, factor=None if factor == ONE else factor)
