"""Write an equation of the circuit with short names for its entries, the input on the right."""

from __future__ import annotations

from derive.eliminate.scribe import Scribe
from derive.expressions.tree import ONE, Equation

NAME = "write with short names"


def apply(scribe: Scribe, source: int, equation: Equation) -> int:
    """Give the equation collected by its unknowns; nothing is multiplied."""
    return scribe.follow(NAME, equation, [(source, ONE)], ONE)
