"""How much there is to read: the measure of simplicity that every rewrite must make fall.

A name counts four, so that the smaller things that tire a reader (a fraction bar, a bracket, a sign, a
bare 1) can count less than one name each.
"""

from __future__ import annotations

from collections.abc import Mapping
from fractions import Fraction

from derive.expressions.tree import (
    ONE,
    Expression,
    Name,
    Negative,
    Number,
    Parallel,
    Power,
    Product,
    Quotient,
    Sum,
)
from derive.expressions.walk import children_of
from derive.readable.compose import is_divider

NAME, NUMBER, UNIT, MARK = 4, 3, 2, 1


def measure(expression: Expression, weights: Mapping[str, int] | None = None) -> int:
    """Give the length of an expression for a reader; `weights` are those of names that stand for more."""
    if isinstance(expression, Name):
        return (weights or {}).get(expression.text, NAME)
    if isinstance(expression, Number):
        return UNIT if expression == ONE else NUMBER
    total = sum(measure(child, weights) for child in children_of(expression))
    if isinstance(expression, Parallel) and all(isinstance(b, Name) for b in expression.branches):
        # R_1 ∥ R_2 is read as one resistance.
        return total - 2 * MARK * (len(expression.branches) - 1)
    if isinstance(expression, Power):
        return total + 2 * MARK
    if isinstance(expression, Negative | Parallel):
        return total + MARK
    if isinstance(expression, Product):
        return total + MARK * sum(isinstance(factor, Sum) for factor in expression.factors)
    if isinstance(expression, Quotient):
        # Fractions within fractions are what makes a formula hard to read.
        below, above = _fraction_in(expression.denominator), _fraction_in(expression.numerator)
        if is_divider(expression):
            return total - 2 * MARK
        marks = 1 + isinstance(expression.denominator, Sum | Product) + 4 * below + 2 * above
        return total + MARK * marks
    return total


def _fraction_in(expression: Expression) -> bool:
    if isinstance(expression, Quotient):
        return True
    return any(map(_fraction_in, children_of(expression)))


def leaves(expression: Expression) -> int:
    """Give the number of names and numbers, a power counted as often as it multiplies."""
    if isinstance(expression, Name | Number):
        return 1
    if isinstance(expression, Power):
        return leaves(expression.base) * abs(expression.exponent)
    return sum(map(leaves, children_of(expression)))


def magnitude(expression: Expression, values: Mapping[str, Fraction | None]) -> float | None:
    """Give the size at the nominal values; None where one is open or a divisor vanishes."""
    try:
        return abs(_value(expression, values))
    except (KeyError, TypeError, ZeroDivisionError, OverflowError, ArithmeticError):
        return None


def _value(node: Expression, values: Mapping[str, Fraction | None]) -> float:
    if isinstance(node, Name):
        found = values[node.text]
        if found is None:
            raise KeyError(node.text)
        return float(found)
    if isinstance(node, Number):
        return float(node.value)
    parts = [_value(child, values) for child in children_of(node)]
    if isinstance(node, Sum):
        return sum(parts)
    if isinstance(node, Product):
        total = 1.0
        for part in parts:
            total *= part
        return total
    if isinstance(node, Quotient):
        return parts[0] / parts[1]
    if isinstance(node, Power):
        return float(parts[0] ** node.exponent)
    if isinstance(node, Negative):
        return -parts[0]
    if isinstance(node, Parallel):
        return 1 / sum(1 / part for part in parts)
    raise TypeError("no size")
