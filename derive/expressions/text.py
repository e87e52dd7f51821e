"""Writes an expression in the user's own language: what comes out can be read in again."""

from __future__ import annotations

from derive.expressions.linear import (
    ATOM,
    POWER,
    SUM,
    Dialect,
    Written,
    enclosed,
    write_line,
)
from derive.expressions.tree import Elided, Equation, Expression


def to_text(content: Expression | Equation) -> str:
    """Write an expression, or an equation as `left = right`, in the user's language.

    Gives: text that `parse_expression` reads as an equal expression, and as the very same tree
    where the tree came from there and holds no decimals. Elided terms cannot be read in again.
    """
    return write_line(content, _TEXT)


def more_terms(elided: Elided) -> str:
    """Say in words how many terms were left out, and where they stand."""
    return f"{elided.count:,} more term{'' if elided.count == 1 else 's'}: {elided.pointer}"


def _power(base: str, exponent: int) -> str:
    return f"{base}^{exponent}" if exponent >= 0 else f"{base}^({exponent})"


def _root(radicand: str, level: int) -> Written:
    return f"sqrt({radicand})", ATOM


def _parallel(branches: list[Written]) -> Written:
    return " || ".join(enclosed(branch, POWER) for branch in branches), SUM


_TEXT = Dialect(
    times="*",
    minus="-",
    name=str,
    power=_power,
    root=_root,
    parallel=_parallel,
    elided=lambda elided: f"... ({more_terms(elided)})",
)
