"""Divide an equation by a factor that all of its terms share; the factor is named."""

from __future__ import annotations

from derive.eliminate.scribe import Scribe
from derive.expressions.tree import ONE, Equation, Expression

NAME = "cancel a common factor"


def apply(scribe: Scribe, source: int, equation: Equation, factor: Expression) -> int:
    """Give the equation without the factor, which is stated not to be zero."""
    return scribe.follow(NAME, equation, [(source, ONE)], factor, factor=factor, nonzero=factor)
