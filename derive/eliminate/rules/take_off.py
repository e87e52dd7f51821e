"""Take a multiple of one equation off another, so that an unknown falls out of it."""

from __future__ import annotations

from derive.eliminate.scribe import Scribe
from derive.expressions.polynomials import negate
from derive.expressions.tree import ONE, Equation, Expression

NAME = "take off a multiple"


def apply(
    scribe: Scribe,
    target: int,
    pivot: int,
    multiple: Expression,
    equation: Equation,
    unknown: str,
    *,
    turned: bool,
) -> int:
    """Give equation `target` less `multiple` times equation `pivot`, all signs turned or not."""
    uses = [(target, ONE), (pivot, negate(multiple))]
    divisor = negate(ONE) if turned else ONE
    return scribe.follow(NAME, equation, uses, divisor, subject=unknown, factor=multiple)
