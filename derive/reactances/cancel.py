"""Multiplies factors, each a product or a fraction, and cancels what stands above as well as below."""

from __future__ import annotations

from collections.abc import Sequence

from derive.expressions.polynomials import divide, multiply, negate
from derive.expressions.tree import ONE, Expression, Negative, Product, Quotient


def multiplied(factors: Sequence[Expression]) -> tuple[Expression, bool]:
    """Give the product of factors, and whether anything cancelled; where nothing does it is written as it is."""
    minus, above, below = False, list[Expression](), list[Expression]()
    pending = [(factor, True) for factor in factors]
    while pending:
        factor, side = pending.pop(0)
        if isinstance(factor, Negative):
            minus = not minus
            pending.insert(0, (factor.operand, side))
        elif isinstance(factor, Product):
            pending[:0] = [(inner, side) for inner in factor.factors]
        elif isinstance(factor, Quotient):
            pending[:0] = [(factor.numerator, side), (factor.denominator, not side)]
        elif factor != ONE:
            (above if side else below).append(factor)
    shared = [factor for factor in below if factor in above]
    if not shared:
        return multiply(list(factors)), False
    for factor in shared:
        # The same factor may stand below more often than above.
        if factor in above:
            above.remove(factor)
            below.remove(factor)
    product = divide(multiply(above) if above else ONE, multiply(below) if below else ONE)
    return negate(product) if minus else product, True
