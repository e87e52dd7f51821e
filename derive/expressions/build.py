"""Builds the tree while the grammar reads: one method a rule, and the one shape that each gives.

The shape is the same for the same text: sums, products and parallel combinations are flat (a group
of the same kind in parentheses joins its surroundings), what is subtracted is a `Negative`, two
signs in a row cancel, a sign in front of a product spans all of it, and `a*b/c/d*e` is
(a·b)/(c·d)·e: divisors that follow one another share one denominator.
"""

from __future__ import annotations

from collections.abc import Sequence
from fractions import Fraction
from typing import Any, NamedTuple

from derive.expressions.spelled import Refusal
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


class Placed(NamedTuple):
    """A tree and where it stands in the text, from `start` to before `end`.

    `parts` are its operands in the order of `derive.expressions.walk.children_of`. Parentheses belong to what is in
    them; of a flat sum or product that had inner ones, each operand has its own place.
    """

    node: Expression
    start: int
    end: int
    parts: tuple[Placed, ...] = ()


class TreeBuilder:
    """The actions of the grammar; each takes the pieces of its rule in the order written."""

    def number(self, pieces: Sequence[Any]) -> Placed:
        """Give the exact value of a whole or decimal number."""
        token = pieces[0]
        _, _, exponent = token.lower().partition("e")
        if len(token) > MAX_NUMBER_LENGTH or abs(int(exponent or 0)) > MAX_DECIMAL_EXPONENT:
            raise Refusal(
                token.start_pos,
                "this number is too long",
                f"keep to {MAX_NUMBER_LENGTH} digits and powers of ten to {MAX_DECIMAL_EXPONENT}",
            )
        return Placed(Number(Fraction(str(token))), token.start_pos, token.end_pos)

    def name(self, pieces: Sequence[Any]) -> Placed:
        """Give the name as it was written."""
        token = pieces[0]
        return Placed(Name(str(token)), token.start_pos, token.end_pos)

    def group(self, pieces: Sequence[Any]) -> Placed:
        """Give what stands in parentheses, with them."""
        opening, inner, closing = pieces
        return Placed(inner.node, opening.start_pos, closing.end_pos, inner.parts)

    def root(self, pieces: Sequence[Any]) -> Placed:
        """Give the square root."""
        word, _, radicand, closing = pieces
        return Placed(Root(radicand.node), word.start_pos, closing.end_pos, (radicand,))

    def signed(self, pieces: Sequence[Any]) -> Placed:
        """Give the operand, negative where an odd number of minus signs stands before it."""
        odd = sum(sign == "-" for sign in pieces[:-1]) % 2
        return _negative(pieces[0].start_pos, pieces[-1]) if odd else pieces[-1]

    def sum(self, pieces: Sequence[Any]) -> Placed:
        """Give one flat sum."""
        terms: list[Placed] = []
        for index in range(0, len(pieces), 2):
            term = pieces[index]
            if index and pieces[index - 1] == "-":
                term = _negative(pieces[index - 1].start_pos, term)
            terms.extend(term.parts if isinstance(term.node, Sum) else (term,))
        node = Sum(tuple(term.node for term in terms))
        return Placed(node, pieces[0].start, pieces[-1].end, tuple(terms))

    def product(self, pieces: Sequence[Any]) -> Placed:
        """Give products and quotients from left to right."""
        above: list[Placed] = [pieces[0]]
        below: list[Placed] = []
        for index in range(1, len(pieces), 2):
            if pieces[index] == "/":
                below.append(pieces[index + 1])
                continue
            if below:
                above, below = [_over(above, below)], []
            above.append(pieces[index + 1])
        return _over(above, below) if below else _product(above)

    def parallel(self, pieces: Sequence[Any]) -> Placed:
        """Give one flat parallel combination."""
        branches: list[Placed] = []
        for branch in pieces:
            branches.extend(branch.parts if isinstance(branch.node, Parallel) else (branch,))
        node = Parallel(tuple(branch.node for branch in branches))
        return Placed(node, pieces[0].start, pieces[-1].end, tuple(branches))

    def power(self, pieces: Sequence[Any]) -> Placed:
        """Give the power; the exponent 1/2 is the square root, as the ledger writes it."""
        base, hat, written = pieces
        exponent = _constant(written.node)
        if exponent == _HALF:
            return Placed(Root(base.node), base.start, written.end, (base,))
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
        return Placed(Power(base.node, int(exponent)), base.start, written.end, (base,))


def _negative(start: int, operand: Placed) -> Placed:
    if isinstance(operand.node, Negative):
        return operand.parts[0]._replace(start=start)
    return Placed(Negative(operand.node), start, operand.end, (operand,))


def _product(parts: Sequence[Placed]) -> Placed:
    factors: list[Placed] = []
    for part in parts:
        factors.extend(part.parts if isinstance(part.node, Product) else (part,))
    if len(factors) == 1:
        return factors[0]
    node = Product(tuple(factor.node for factor in factors))
    return Placed(node, parts[0].start, parts[-1].end, tuple(factors))


def _over(above: Sequence[Placed], below: Sequence[Placed]) -> Placed:
    top, bottom = _product(above), _product(below)
    return Placed(Quotient(top.node, bottom.node), top.start, bottom.end, (top, bottom))


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
