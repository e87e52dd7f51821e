"""Exact values in which a rounded root leaves no last digit over.

A mutual inductance M = k·√(L_1·L_2) is held to 40 digits where it is irrational. What cancels exactly,
such as L_1·L_2 − M² at k = 1, then leaves its last digit over; beside the size of its terms that is
nothing, and it is taken for nothing.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from fractions import Fraction

from derive.errors import DeriveError
from derive.expressions.tree import (
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

LEFT_OVER = Fraction(1, 10**25)
# A value, and the sum of the magnitudes of the terms that made it.
Sized = tuple[Fraction, Fraction]


def value_without_rounding(expression: Expression, values: Mapping[str, Fraction]) -> Fraction:
    """Give an expression's value, sums that are nothing but rounding being exactly zero.

    Raises: DeriveError for a name that is not known; ZeroDivisionError for a division by zero.
    """
    return _sized(expression, values)[0]


def definitions_without_rounding(
    definitions: Iterable[tuple[str, Expression]], values: Mapping[str, Fraction]
) -> dict[str, Fraction]:
    """Give the values of names defined one by the other, what is nothing but rounding being exactly zero.

    Raises: DeriveError for a name that is not known; ZeroDivisionError for a division by zero.
    """
    sized: dict[str, Sized] = {name: (value, abs(value)) for name, value in values.items()}
    for name, meaning in definitions:
        sized[name] = _sized(meaning, sized)
    return {name: value for name, (value, _) in sized.items()}


def _sized(expression: Expression, values: Mapping[str, Fraction | Sized]) -> Sized:
    if isinstance(expression, Number):
        return expression.value, abs(expression.value)
    if isinstance(expression, Name):
        if expression.text not in values:
            raise DeriveError(f"no value is known for {expression.text}")
        known = values[expression.text]
        return known if isinstance(known, tuple) else _alone(known)
    if isinstance(expression, Negative):
        value, size = _sized(expression.operand, values)
        return -value, size
    if isinstance(expression, Sum):
        return _sum(expression, values)
    if isinstance(expression, Product):
        return _product(expression, values)
    if isinstance(expression, Quotient):
        above, size = _sized(expression.numerator, values)
        below, _ = _sized(expression.denominator, values)
        return above / below, size / abs(below)
    if isinstance(expression, Parallel):
        value = 1 / sum((1 / _sized(branch, values)[0] for branch in expression.branches), Fraction(0))
        return value, abs(value)
    if isinstance(expression, Power):
        value, size = _sized(expression.base, values)
        return value**expression.exponent, size**expression.exponent if value else Fraction(0)
    raise DeriveError("an expression of this form has no exact value")


def _alone(value: Fraction) -> Sized:
    # What is not negative is its own size, as the same object: products and sums of such are worked once.
    return value, value if value >= 0 else -value


def _product(expression: Product, values: Mapping[str, Fraction | Sized]) -> Sized:
    value = size = Fraction(1)
    for factor in expression.factors:
        own, own_size = _sized(factor, values)
        if value is size and own is own_size:
            value = size = value * own
        else:
            value, size = value * own, size * own_size
    return value, size


def _sum(expression: Sum, values: Mapping[str, Fraction | Sized]) -> Sized:
    value = size = Fraction(0)
    for term in expression.terms:
        own, own_size = _sized(term, values)
        if value is size and own is own_size:
            value = size = value + own
        else:
            value, size = value + own, size + own_size
    return (Fraction(0) if abs(value) < LEFT_OVER * size else value), size
