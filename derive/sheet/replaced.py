"""Parts of an expression that bear a name already, replaced by it for print."""

from __future__ import annotations

from collections.abc import Mapping

from derive.expressions.tree import (
    Expression,
    Negative,
    Parallel,
    Power,
    Product,
    Quotient,
    Sum,
)


def replaced(expression: Expression, names: Mapping[Expression, Expression]) -> Expression:
    """Put a name in the place of every part of an expression that is written just like what it names."""
    known = names.get(expression)
    if known is not None:
        return known
    if isinstance(expression, Sum):
        return Sum(tuple(replaced(term, names) for term in expression.terms))
    if isinstance(expression, Product):
        return Product(tuple(replaced(factor, names) for factor in expression.factors))
    if isinstance(expression, Parallel):
        return Parallel(tuple(replaced(branch, names) for branch in expression.branches))
    if isinstance(expression, Quotient):
        return Quotient(replaced(expression.numerator, names), replaced(expression.denominator, names))
    if isinstance(expression, Negative):
        return Negative(replaced(expression.operand, names))
    if isinstance(expression, Power):
        return Power(replaced(expression.base, names), expression.exponent)
    return expression
