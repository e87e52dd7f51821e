"""Writes an expression for the terminal: Greek letters, raised exponents, ∥ and a product dot."""

from __future__ import annotations

import re
from functools import lru_cache

from derive.expressions.linear import (
    ATOM,
    POWER,
    SUM,
    Dialect,
    Written,
    enclosed,
    write_line,
)
from derive.expressions.names import GREEK, shape_of
from derive.expressions.text import more_terms
from derive.expressions.tree import Equation, Expression

_RAISED = str.maketrans("-0123456789", "⁻⁰¹²³⁴⁵⁶⁷⁸⁹")


def to_unicode(content: Expression | Equation) -> str:
    """Write an expression, or an equation as `left = right`, on one line for reading on a terminal.

    Subscripts stay as they are written: R_E, r_π.
    """
    return write_line(content, _UNICODE)


@lru_cache(maxsize=4096)
def name_to_unicode(name: str) -> str:
    """Give a name with its Greek letters as letters; nothing else of it changes."""
    shape = shape_of(name)
    base = GREEK.get(shape.base, shape.base)
    rest = name[len(shape.base) :]
    runs = re.findall(r"[A-Za-z]+|[0-9]+|_+", rest)
    return base + "".join(GREEK.get(run, run) for run in runs)


def _power(base: str, exponent: int) -> str:
    return base + str(exponent).translate(_RAISED)


def _root(radicand: str, level: int) -> Written:
    return f"√{enclosed((radicand, level), ATOM)}", POWER


def _parallel(branches: list[Written]) -> Written:
    return " ∥ ".join(enclosed(branch, POWER) for branch in branches), SUM


_UNICODE = Dialect(
    times="·",
    minus="−",
    name=name_to_unicode,
    power=_power,
    root=_root,
    parallel=_parallel,
    elided=lambda elided: f"… ({more_terms(elided)})",
    nearly="≈",
)
