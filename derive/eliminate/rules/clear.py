"""Multiply by the denominator of the substituted solution, multiply out, and collect."""

from __future__ import annotations

from derive.eliminate.scribe import Scribe
from derive.expressions.tree import ONE, Equation, Expression

NAME = "clear the fraction"


def apply(scribe: Scribe, source: int, equation: Equation, pivot: Expression, divisor: Expression) -> int:
    """Give the collected equation; a divisor other than 1 is cancelled in the same step."""
    factor = None if pivot == ONE else pivot
    return scribe.follow(NAME, equation, [(source, pivot)], divisor, factor=factor)
