"""Proof of a line by exact algebra, on request."""

from __future__ import annotations

from derive.errors import DeriveError
from derive.expressions.tree import Expression
from derive.handcheck.names import NameRefused
from derive.handcheck.solved import Solved, TooLarge

IDENTICAL = "identical when multiplied out in all symbols"
DIFFERENT = "different when multiplied out in all symbols"


def proved_exactly(solved: Solved, left: Expression, right: Expression) -> str:
    """Say whether both sides are the same ratio of polynomials once multiplied out."""
    try:
        first, second = solved.ratios(left, right)
    except (TooLarge, NameRefused, DeriveError, ZeroDivisionError):
        return "too long to be multiplied out"
    if first[0] * second[1] == second[0] * first[1]:
        return IDENTICAL
    return DIFFERENT
