"""Builds the tree while the grammar reads: one method a rule, and the one shape that each gives.

The shape is the same for the same text: sums, products and parallel combinations are flat (a group
of the same kind in parentheses joins its surroundings), what is subtracted is a `Negative`, two
signs in a row cancel, a sign in front of a product spans all of it, and `a*b/c/d*e` is
(a·b)/(c·d)·e: divisors that follow one another share one denominator.
"""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from fractions import Fraction
from typing import Any

from derive.expressions.tree import (
    Expression,
    Name,
    Negative,
    Number,
    Parallel,
    Power,
    Product,
    Quotient,
    Root,
    Sum,
)

MAX_EXPONENT = 64
MAX_NUMBER_LENGTH = 400
MAX_DECIMAL_EXPONENT = 400
_HALF = Fraction(1, 2)


class Refusal(Exception):
    """Raised inside the reader for what the grammar allows and the language does not."""

    def __init__(self, position: int, what: str, cure: str) -> None:
        self.position = position
        self.what = what
        self.cure = cure
        super().__init__(what)


class TreeBuilder:
    """The actions of the grammar; each takes the pieces of its rule in the order written."""

    def number(self, pieces: Sequence[Any]) -> Expression:
        """Give the exact value of a whole or decimal number."""
        token = pieces[0]
        _, _, exponent = token.lower().partition("e")
        if len(token) > MAX_NUMBER_LENGTH or abs(int(exponent or 0)) > MAX_DECIMAL_EXPONENT:
            raise Refusal(
                token.start_pos,
                "this number is too long",
                f"keep to {MAX_NUMBER_LENGTH} digits and powers of ten to {MAX_DECIMAL_EXPONENT}",
            )
        return Number(Fraction(str(token)))

    def name(self, pieces: Sequence[Any]) -> Expression:
        """Give the name as it was written."""
        return Name(str(pieces[0]))

    def root(self, pieces: Sequence[Any]) -> Expression:
        """Give the square root."""
        return Root(pieces[0])

    def signed(self, pieces: Sequence[Any]) -> Expression:
        """Give the operand, negative where an odd number of minus signs stands before it."""
        odd = sum(sign == "-" for sign in pieces[:-1]) % 2
        return _negative(pieces[-1]) if odd else pieces[-1]

    def sum(self, pieces: Sequence[Any]) -> Expression:
        """Give one flat sum."""
        terms: list[Expression] = []
        for index in range(0, len(pieces), 2):
            term = pieces[index]
            if index and pieces[index - 1] == "-":
                term = _negative(term)
            terms.extend(term.terms if isinstance(term, Sum) else (term,))
        return Sum(tuple(terms))

    def product(self, pieces: Sequence[Any]) -> Expression:
        """Give products and quotients from left to right."""
        above: list[Expression] = [pieces[0]]
        below: list[Expression] = []
        for index in range(1, len(pieces), 2):
            if pieces[index] == "/":
                below.append(pieces[index + 1])
                continue
            if below:
                above, below = [_over(above, below)], []
            above.append(pieces[index + 1])
        return _over(above, below) if below else _product(above)

    def parallel(self, pieces: Sequence[Any]) -> Expression:
        """Give one flat parallel combination."""
        branches: list[Expression] = []
        for branch in pieces:
            branches.extend(branch.branches if isinstance(branch, Parallel) else (branch,))
        return Parallel(tuple(branches))

    def power(self, pieces: Sequence[Any]) -> Expression:
        """Give the power; the exponent 1/2 is the square root, as the ledger writes it."""
        base, hat, written = pieces
        exponent = _constant(written)
        if exponent == _HALF:
            return Root(base)
        if exponent is None or exponent.denominator != 1:
            raise Refusal(
                hat.end_pos,
                "an exponent must be a whole number",
                "write sqrt(x) for a square root, and parentheses for a power of a power",
            )
        if abs(exponent) > MAX_EXPONENT:
            raise Refusal(
                hat.end_pos,
                "this exponent is too large",
                f"keep between -{MAX_EXPONENT} and {MAX_EXPONENT}",
            )
        return Power(base, int(exponent))


def _negative(operand: Expression) -> Expression:
    return operand.operand if isinstance(operand, Negative) else Negative(operand)


def _product(parts: Iterable[Expression]) -> Expression:
    factors: list[Expression] = []
    for part in parts:
        factors.extend(part.factors if isinstance(part, Product) else (part,))
    return factors[0] if len(factors) == 1 else Product(tuple(factors))


def _over(above: Iterable[Expression], below: Iterable[Expression]) -> Expression:
    return Quotient(_product(above), _product(below))


def _constant(expression: Expression) -> Fraction | None:
    if isinstance(expression, Number):
        return expression.value
    if isinstance(expression, Negative) and isinstance(expression.operand, Number | Quotient):
        value = _constant(expression.operand)
        return None if value is None else -value
    if isinstance(expression, Quotient):
        above, below = expression.numerator, expression.denominator
        if isinstance(above, Number) and isinstance(below, Number) and below.value:
            return above.value / below.value
    return None
