"""Writes an expression in words, for a screen reader: linear, and read in one way only."""

from __future__ import annotations

from collections.abc import Callable

from derive.expressions.names import shape_of
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

SUM, PRODUCT, POWER, ATOM = range(4)
_Said = tuple[str, int]


def to_speech(content: Expression | Equation) -> str:
    """Say an expression or an equation in plain words.

    Fractions and roots say where they end; groups are opened and closed in words.
    """
    if isinstance(content, Equation):
        says = "equals" if content.relation == "=" else "is approximately"
        return f"{_say(content.left)[0]} {says} {_say(content.right)[0]}"
    return _say(content)[0]


def name_to_speech(name: str) -> str:
    """Say a name: `R_E` is "R sub E", `C_pi1` is "C sub pi 1"."""
    shape = shape_of(name)
    if not shape.subscripts:
        return " ".join(shape.base.replace("_", " underscore ").split())
    runs = [run for chunk in shape.subscripts for run in chunk]
    return f"{shape.base} sub {' '.join(runs)}"


def _enclosed(said: _Said, needed: int) -> str:
    words, level = said
    return words if level >= needed else f"open parenthesis {words} close parenthesis"


def _say(node: Expression) -> _Said:
    negative, node = split_sign(node)
    if negative:
        return f"minus {_enclosed(_say(node), PRODUCT)}", SUM
    return _SAYERS[type(node)](node)


def _sum(node: Sum) -> _Said:
    if len(node.terms) == 1:
        return _say(node.terms[0])
    words: list[str] = []
    for term in node.terms:
        negative, term = split_sign(term)
        if words or negative:
            words.append("minus" if negative else "plus")
        words.append(_enclosed(_say(term), PRODUCT))
    return " ".join(words) or "0", SUM


def _product(node: Product) -> _Said:
    if len(node.factors) == 1:
        return _say(node.factors[0])
    words = []
    for factor in node.factors:
        words.append(_enclosed(_say(factor), PRODUCT))
    return " times ".join(words) or "1", PRODUCT


def _number(node: Number) -> _Said:
    if node.value.denominator == 1:
        return str(node.value), ATOM
    return _fraction(str(node.value.numerator), str(node.value.denominator)), ATOM


def _fraction(above: str, below: str) -> str:
    return f"the fraction {above} over {below} end fraction"


def _quotient(node: Quotient) -> _Said:
    return _fraction(_say(node.numerator)[0], _say(node.denominator)[0]), ATOM


def _power(node: Power) -> _Said:
    base = _enclosed(_say(node.base), ATOM)
    if node.exponent in (2, 3):
        return f"{base} {'squared' if node.exponent == 2 else 'cubed'}", POWER
    exponent = f"minus {-node.exponent}" if node.exponent < 0 else str(node.exponent)
    return f"{base} to the power {exponent}", POWER


def _parallel(node: Parallel) -> _Said:
    if len(node.branches) == 1:
        return _say(node.branches[0])
    words = []
    for branch in node.branches:
        words.append(_enclosed(_say(branch), POWER))
    return " in parallel with ".join(words), SUM


def _root(node: Root) -> _Said:
    return f"the square root of {_say(node.radicand)[0]} end root", ATOM


def _elided(node: Elided) -> _Said:
    terms = "term" if node.count == 1 else "terms"
    return f"{node.count:,} more {terms}, written out at {node.pointer}", ATOM


_SAYERS: dict[type, Callable[..., _Said]] = {
    Name: lambda node: (name_to_speech(node.text), ATOM),
    Number: _number,
    Sum: _sum,
    Product: _product,
    Quotient: _quotient,
    Power: _power,
    Parallel: _parallel,
    Root: _root,
    Elided: _elided,
    Struck: lambda node: (f"struck out {_say(node.operand)[0]} end struck out", ATOM),
}
