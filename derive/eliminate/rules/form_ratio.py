"""Divide the last equation by its coefficient and the input: what is sought, as a ratio."""

from __future__ import annotations

from derive.algebra.ring import Polynomial
from derive.eliminate.rows import Row
from derive.eliminate.scribe import Scribe, number
from derive.expressions.polynomials import divide, multiply
from derive.expressions.tree import ONE, Equation, Expression, Name

NAME = "form the ratio"
REDUCE = "reduce the ratio"


def apply(scribe: Scribe, source: int, row: Row) -> int:
    """Give "what is sought = N/D" from the last equation."""
    system = scribe.system
    pivot = row.entries[system.wanted]
    divisor = multiply([scribe.polynomial(pivot), Name(system.input)])
    equation = Equation(Name(system.find.name), scribe.ratio(row.right, pivot))
    nonzero = None if pivot.is_constant() else scribe.polynomial(pivot)
    return scribe.follow(NAME, equation, [(source, ONE)], divisor, nonzero=nonzero)


def write(
    scribe: Scribe, source: int, value: Expression, divisor: Expression, nonzero: Expression | None
) -> int:
    """Give "what is sought = value" from an equation that was divided by the divisor."""
    equation = Equation(Name(scribe.system.find.name), value)
    return scribe.follow(NAME, equation, [(source, ONE)], divisor, nonzero=nonzero)


def reduce(scribe: Scribe, source: int, numerator: Polynomial, denominator: Polynomial) -> int:
    """Give the ratio in lowest terms; its value stays, so nothing is multiplied or divided."""
    value = divide(scribe.polynomial(numerator), scribe.polynomial(denominator))
    equation = Equation(Name(scribe.system.find.name), value)
    return scribe.follow(REDUCE, equation, [(source, ONE)], number(1))
