"""Takes the sign off an expression, so that every printer writes a minus in the same place."""

from __future__ import annotations

from derive.expressions.tree import Expression, Negative, Number, Product, Quotient


def split_sign(expression: Expression) -> tuple[bool, Expression]:
    """Give whether a minus stands in front, and the expression without it.

    A negative number that leads a product or a numerator gives its sign to the whole of it.
    """
    negative = False
    while isinstance(expression, Negative):
        negative = not negative
        expression = expression.operand
    if isinstance(expression, Number):
        if expression.value < 0:
            return not negative, Number(-expression.value)
    elif isinstance(expression, Product):
        first = expression.factors[0] if expression.factors else None
        if isinstance(first, Number) and first.value < 0:
            factors = (Number(-first.value), *expression.factors[1:])
            return not negative, Product(factors)
    elif isinstance(expression, Quotient):
        above = expression.numerator
        if isinstance(above, Number | Product):
            taken, positive = split_sign(above)
            if taken:
                return not negative, Quotient(positive, expression.denominator)
    return negative, expression
