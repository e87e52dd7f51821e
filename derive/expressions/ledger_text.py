"""Writes an expression for the ledger: names, integers, + - * / ** and parentheses alone."""

from __future__ import annotations

from derive.errors import DeriveError
from derive.expressions.linear import (
    ATOM,
    POWER,
    QUOTIENT,
    Dialect,
    Written,
    enclosed,
    write_line,
)
from derive.expressions.tree import Elided, Equation, Expression


def to_ledger(content: Expression | Equation) -> str:
    """Write an expression, or an equation as `LEFT = RIGHT`, with the five arithmetic signs alone.

    A parallel combination is written out, 1/(1/a + 1/b); a square root is x**(1/2). The text means
    the same by the rules of Python as by those of the user's language.
    Raises: DeriveError for elided terms: the ledger holds every term.
    """
    return write_line(content, _LEDGER)


def _power(base: str, exponent: int) -> str:
    return f"{base}**{exponent}" if exponent >= 0 else f"{base}**({exponent})"


def _root(radicand: str, level: int) -> Written:
    return f"{enclosed((radicand, level), ATOM)}**(1/2)", POWER


def _parallel(branches: list[Written]) -> Written:
    reciprocals = " + ".join(f"1/{enclosed(branch, POWER)}" for branch in branches)
    return f"1/({reciprocals})", QUOTIENT


def _struck(written: str) -> str:
    raise DeriveError(f"{written} is struck out and cannot stand in the ledger")


def _elided(elided: Elided) -> str:
    raise DeriveError("elided terms cannot stand in the ledger")


_LEDGER = Dialect(
    times="*",
    minus="-",
    name=str,
    power=_power,
    root=_root,
    parallel=_parallel,
    elided=_elided,
    struck=_struck,
)
