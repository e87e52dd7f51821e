"""Writes an expression on one line, with the parentheses it needs; the dialects share it.

A parallel combination always has parentheses inside a larger expression: the language does not need
them, but a reader who does not know how tightly `||` binds does.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

from derive.expressions.signs import split_sign
from derive.expressions.tree import (
    Elided,
    Equation,
    Expression,
    Name,
    Number,
    Parallel,
    Power,
    Product,
    Quotient,
    Root,
    Struck,
    Sum,
)

# How tightly what was written holds together; a place that needs more puts parentheses round it.
SUM, QUOTIENT, PRODUCT, POWER, ATOM = range(5)
Written = tuple[str, int]


@dataclass(frozen=True, slots=True)
class Dialect:
    """The signs of one way of writing on a line.

    `power` takes the base (an atom) and the exponent, `root` the radicand and how tightly it holds,
    `parallel` the branches.
    `struck` says of what is written that it is struck out; `nearly` is the sign of an approximation.
    """

    times: str
    minus: str
    name: Callable[[str], str]
    power: Callable[[str, int], str]
    root: Callable[[str, int], Written]
    parallel: Callable[[list[Written]], Written]
    elided: Callable[[Elided], str]
    nearly: str = "~"
    struck: Callable[[str], str] = "[struck: {}]".format


def enclosed(written: Written, needed: int) -> str:
    """Give the text, in parentheses if it holds less tightly than its place needs."""
    text, level = written
    return text if level >= needed else f"({text})"


def write_line(content: Expression | Equation, dialect: Dialect) -> str:
    """Write an expression or an equation on one line in a dialect."""
    if isinstance(content, Equation):
        left, right = _write(content.left, dialect), _write(content.right, dialect)
        sign = "=" if content.relation == "=" else dialect.nearly
        return f"{left[0]} {sign} {right[0]}"
    return _write(content, dialect)[0]


def _write(node: Expression, d: Dialect) -> Written:
    negative, node = split_sign(node)
    if negative:
        return d.minus + enclosed(_write(node, d), QUOTIENT), SUM
    if isinstance(node, Sum):
        return _sum(node, d)
    if isinstance(node, Product):
        return _product(node, d)
    return _WRITERS[type(node)](node, d)


def _sum(node: Sum, d: Dialect) -> Written:
    if not node.terms:
        return "0", ATOM
    if len(node.terms) == 1:
        return _write(node.terms[0], d)
    pieces: list[str] = []
    plus, minus = " + ", f" {d.minus} "
    for term in node.terms:
        negative, term = split_sign(term)
        if pieces:
            pieces.append(minus if negative else plus)
        elif negative:
            pieces.append(d.minus)
        kind = type(term)
        # Leaves and products are nearly all of a long sum: they are written without detours.
        if kind is Name:
            pieces.append(d.name(term.text))  # type: ignore[union-attr]
        elif kind is Product:
            pieces.append(_product(term, d)[0])  # type: ignore[arg-type]
        else:
            pieces.append(enclosed(_write(term, d), QUOTIENT))
    return "".join(pieces), SUM


def _product(node: Product, d: Dialect) -> Written:
    if not node.factors:
        return "1", ATOM
    if len(node.factors) == 1:
        return _write(node.factors[0], d)
    pieces: list[str] = []
    for factor in node.factors:
        if type(factor) is Name:
            pieces.append(d.name(factor.text))
        else:
            # A quotient may lead: a/b*c is (a/b)·c. Behind a factor it needs parentheses.
            pieces.append(enclosed(_write(factor, d), PRODUCT if pieces else QUOTIENT))
    return d.times.join(pieces), PRODUCT


def _number(node: Number, d: Dialect) -> Written:
    return str(node.value), ATOM if node.value.denominator == 1 else QUOTIENT


def _quotient(node: Quotient, d: Dialect) -> Written:
    above = enclosed(_write(node.numerator, d), PRODUCT)
    below = enclosed(_write(node.denominator, d), POWER)
    return f"{above}/{below}", QUOTIENT


def _power(node: Power, d: Dialect) -> Written:
    return d.power(enclosed(_write(node.base, d), ATOM), node.exponent), POWER


def _parallel(node: Parallel, d: Dialect) -> Written:
    if len(node.branches) == 1:
        return _write(node.branches[0], d)
    branches = []
    for branch in node.branches:
        branches.append(_write(branch, d))
    return d.parallel(branches)


_WRITERS: dict[type, Callable[..., Written]] = {
    Name: lambda node, d: (d.name(node.text), ATOM),
    Number: _number,
    Quotient: _quotient,
    Power: _power,
    Parallel: _parallel,
    Root: lambda node, d: d.root(*_write(node.radicand, d)),
    Elided: lambda node, d: (d.elided(node), ATOM),
    Struck: lambda node, d: (d.struck(_write(node.operand, d)[0]), ATOM),
}
