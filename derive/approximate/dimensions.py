"""The dimension of an expression that a user wrote."""

from __future__ import annotations

from collections.abc import Mapping

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
from derive.expressions.walk import children_of
from derive.quantities.dimension import RATIO, Dimension


class UnlikeError(ValueError):
    """Raised where unlike quantities are added, or a square root is taken."""


def dimension_of(expression: Expression, known: Mapping[str, Dimension]) -> Dimension:
    """Give the dimension of an expression in known names.

    Raises: UnlikeError for sums and parallel combinations of unlike quantities, and for roots.
    """
    inner = [dimension_of(child, known) for child in children_of(expression)]
    if isinstance(expression, Name):
        return known[expression.text]
    if isinstance(expression, Number):
        return RATIO
    if isinstance(expression, Negative):
        return inner[0]
    if isinstance(expression, Sum | Parallel):
        if any(other != inner[0] for other in inner):
            raise UnlikeError("unlike quantities are added")
        return inner[0]
    if isinstance(expression, Product):
        total = RATIO
        for factor in inner:
            total = total * factor
        return total
    if isinstance(expression, Quotient):
        return inner[0] / inner[1]
    if isinstance(expression, Power):
        return inner[0] ** expression.exponent
    raise UnlikeError("a square root has no place here")
