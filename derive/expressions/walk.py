"""Walks an expression: its names, its value in any field, and what it is after a substitution."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from fractions import Fraction
from math import isqrt
from typing import Any, TypeVar

from derive.errors import DeriveError
from derive.expressions.tree import (
    Elided,
    Equation,
    Expression,
    Name,
    Negative,
    Number,
    Parallel,
    Power,
    Product,
    Quotient,
    Root,
    Struck,
    Sum,
)

T = TypeVar("T")


def children_of(expression: Expression) -> tuple[Expression, ...]:
    """Give the operands of an expression in reading order; () for a leaf."""
    if isinstance(expression, Sum):
        return expression.terms
    if isinstance(expression, Product):
        return expression.factors
    if isinstance(expression, Quotient):
        return (expression.numerator, expression.denominator)
    if isinstance(expression, Power):
        return (expression.base,)
    if isinstance(expression, Negative | Struck):
        return (expression.operand,)
    if isinstance(expression, Parallel):
        return expression.branches
    if isinstance(expression, Root):
        return (expression.radicand,)
    return ()


def names_of(expression: Expression | Equation) -> tuple[str, ...]:
    """Give every name once, in order of first appearance."""
    found: dict[str, None] = {}
    if isinstance(expression, Equation):
        pending: list[Expression] = [expression.right, expression.left]
    else:
        pending = [expression]
    while pending:
        node = pending.pop()
        if isinstance(node, Name):
            found[node.text] = None
        else:
            pending.extend(reversed(children_of(node)))
    return tuple(found)


def substitute(expression: Expression, replacements: Mapping[str, Expression]) -> Expression:
    """Put an expression in the place of each name given, all at once; nothing is simplified."""
    if isinstance(expression, Name):
        return replacements.get(expression.text, expression)
    before = children_of(expression)
    after = []
    for child in before:
        after.append(substitute(child, replacements))
    if all(new is old for new, old in zip(after, before, strict=True)):
        return expression
    return with_children(expression, tuple(after))


def with_children(expression: Expression, children: tuple[Expression, ...]) -> Expression:
    """Give an expression of the same kind with other operands, in the order of `children_of`."""
    if isinstance(expression, Sum | Product | Parallel):
        return type(expression)(children)
    if isinstance(expression, Quotient):
        return Quotient(*children)
    if isinstance(expression, Power):
        return Power(children[0], expression.exponent)
    if isinstance(expression, Negative | Root | Struck):
        return type(expression)(children[0])
    return expression


def evaluate(
    expression: Expression,
    lookup: Mapping[str, T],
    number: Callable[[Fraction], T],
    root: Callable[[T], T] | None = None,
) -> T:
    """Give the value of an expression in any field that has + - * / and whole powers.

    Given: a value for each name, the field's image of a rational number, and its square root (by
    default exact for rationals, else the value to the power one half).
    Raises: DeriveError for a name without a value, for elided terms, and for a root that the field
    does not have; ZeroDivisionError as the field gives it.
    """
    value: T = _value(expression, lookup, number, root or _square_root)
    return value


def _value(node: Expression, lookup: Any, number: Any, root: Any) -> Any:  # noqa: C901 - one branch a noun
    kind = type(node)
    if kind is Name:
        return _looked_up(node, lookup)
    if kind is Number:
        return number(node.value)  # type: ignore[union-attr]
    # Operands by a loop in this frame: recursion goes by depth only, one frame a level.
    values = []
    for child in children_of(node):
        values.append(_value(child, lookup, number, root))
    if isinstance(node, Sum):
        total = values[0] if values else number(Fraction(0))
        for value in values[1:]:
            total = total + value
        return total
    if isinstance(node, Product):
        total = values[0] if values else number(Fraction(1))
        for value in values[1:]:
            total = total * value
        return total
    if isinstance(node, Quotient):
        return values[0] / values[1]
    if isinstance(node, Power):
        if node.exponent >= 0:
            return values[0] ** node.exponent
        return number(Fraction(1)) / values[0] ** -node.exponent
    if isinstance(node, Negative):
        return -values[0]
    if isinstance(node, Parallel):
        one = number(Fraction(1))
        total = one / values[0]
        for value in values[1:]:
            total = total + one / value
        return one / total
    if isinstance(node, Root):
        return root(values[0])
    raise _elided()


def _looked_up(node: Any, lookup: Any) -> Any:
    try:
        return lookup[node.text]
    except KeyError:
        raise _without_value(node.text) from None


def _without_value(name: str) -> DeriveError:
    return DeriveError(f'there is no value for "{name}"')


def _elided() -> DeriveError:
    return DeriveError("an expression with elided or struck terms has no value")


def _square_root(value: Any) -> Any:
    if isinstance(value, int | Fraction):
        exact = Fraction(value)
        if exact >= 0:
            above, below = isqrt(exact.numerator), isqrt(exact.denominator)
            if above * above == exact.numerator and below * below == exact.denominator:
                return Fraction(above, below)
        raise DeriveError(f"the square root of {value} is not rational")
    try:
        return value**0.5
    except TypeError:
        raise DeriveError("these values have no square root") from None


def evaluate_modulo(expression: Expression, lookup: Mapping[str, int], prime: int) -> int:
    """Give the value of an expression in the field of integers modulo a prime, from 0 to prime - 1.

    Raises: DeriveError for a square root, elided terms and a name without a value;
    ZeroDivisionError where a divisor vanishes in the field.
    """
    try:
        return _residue(expression, lookup, prime)
    except KeyError as error:
        raise _without_value(error.args[0]) from None
    except ValueError as error:
        # pow says "base is not invertible for the given modulus".
        raise ZeroDivisionError(str(error)) from None


def _residue(node: Expression, lookup: Mapping[str, int], prime: int) -> int:  # noqa: C901 - one branch a noun
    # The commonest nouns of a long polynomial come first, and the names in it are looked up on the spot.
    kind = type(node)
    if kind is Product:
        total = 1
        for factor in node.factors:  # type: ignore[union-attr]
            known = lookup[factor.text] if type(factor) is Name else _residue(factor, lookup, prime)
            total = total * known % prime
        return total
    if kind is Name:
        return int(lookup[node.text]) % prime  # type: ignore[union-attr]
    if isinstance(node, Power):
        return pow(_residue(node.base, lookup, prime), node.exponent, prime)
    if isinstance(node, Sum):
        total = 0
        for term in node.terms:
            total += _residue(term, lookup, prime)
        return total % prime
    if isinstance(node, Negative):
        return -_residue(node.operand, lookup, prime) % prime
    if isinstance(node, Number):
        value = node.value
        return value.numerator * pow(value.denominator, -1, prime) % prime
    if isinstance(node, Quotient):
        below = pow(_residue(node.denominator, lookup, prime), -1, prime)
        return _residue(node.numerator, lookup, prime) * below % prime
    if isinstance(node, Parallel):
        total = 0
        for branch in node.branches:
            total += pow(_residue(branch, lookup, prime), -1, prime)
        return pow(total, -1, prime)
    if isinstance(node, Elided | Struck):
        raise _elided()
    raise DeriveError("a square root has no value modulo a prime")


def term_count(expression: Expression) -> int:
    """Give the number of terms in all sums of an expression; that of one without a sum is 1."""
    if isinstance(expression, Sum):
        return sum(map(term_count, expression.terms))
    inner = (term_count(child) for child in children_of(expression))
    return sum(count for count in inner if count > 1) or 1
