"""Lines with square roots: decided exactly at random values at which all roots are real.

A root modulo a prime has no sign, so such lines are tried with real numbers: intervals are made narrower until zero is
outside, or until the difference is nearer to zero than it could be without being zero.
Source of that bound: C. Burnikel, R. Funke, K. Mehlhorn, S. Schirra, S. Schmitt, A separation bound for real
algebraic expressions, Algorithmica 55 (2009), 14-28; from memory.
"""

from __future__ import annotations

from collections.abc import Mapping
from fractions import Fraction
from math import log2

from flint import arb, ctx, fmpq

from derive.check.points import Stream
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
    Root,
    Sum,
)
from derive.expressions.walk import children_of, evaluate, names_of, with_children
from derive.handcheck.names import NameRefused, Names
from derive.handcheck.solved import Solved, TooLarge

POINTS, TRIES = 6, 60
MOST_BITS = 200_000
MOST_ROOTS = 8
Size = tuple[float, float]


def has_root(names: Names, expression: Expression, seen: frozenset[str] = frozenset()) -> bool:
    """Whether a square root stands in an expression, or in what its names are defined by."""
    pending = [expression]
    while pending:
        node = pending.pop()
        if isinstance(node, Root):
            return True
        pending.extend(children_of(node))
    for name in names_of(expression):
        if name in seen:
            continue
        try:
            definition = names.look(name).definition
        except NameRefused:
            continue
        if definition is not None and has_root(names, definition, seen | {name}):
            return True
    return False


def holds_with_roots(
    solved: Solved, text: str, left: Expression, right: Expression
) -> tuple[bool | None, str]:
    """Decide a line with square roots; gives the truth, None where it was not decided, and how or why.

    Raises: NameRefused for a name that may not be used.
    """
    try:
        sides = solved.symbolic(left, right)
    except TooLarge:
        return None, "with a root in it, this line is too long to be decided; give the radicand a name"
    difference = Sum((sides[0], Negative(sides[1])))
    if _roots_in(difference) > MOST_ROOTS:
        return None, f"it has more than {MOST_ROOTS} square roots; give some of them names"
    numbers = Stream(f"roots/{text}")
    agreed = 0
    for _ in range(TRIES):
        if agreed == POINTS:
            break
        try:
            verdict = _at(difference, solved.values(numbers))
        except (ZeroDivisionError, ArithmeticError):
            continue
        if verdict is None:
            continue
        if not verdict:
            return False, "the sides differ at random values at which all roots are real"
        agreed += 1
    if agreed < POINTS:
        return None, "no values were found at which all its square roots are real"
    return True, f"exactly equal at {POINTS} random sets of values at which all roots are real"


def _roots_in(expression: Expression) -> int:
    return isinstance(expression, Root) + sum(map(_roots_in, children_of(expression)))


def _at(difference: Expression, values: Mapping[str, Fraction]) -> bool | None:
    """Whether a difference is zero at these values; None where a root is not real or it is too near to tell."""
    folded = _folded(difference, values)
    if folded is None:
        return None
    if isinstance(folded, Number):
        return folded.value == 0
    upper, lower = _size(folded)
    degree = 2 ** _roots_in(folded)
    limit = int(upper * (degree - 1) + lower) + 8
    if limit > MOST_BITS:
        return None
    before = ctx.prec
    try:
        bits = 128
        while True:
            ctx.prec = bits
            value = evaluate(folded, {}, _ball, _root)
            if not value.contains(0):
                return False
            if value.abs_upper() < arb(2) ** -limit:
                return True
            if bits > 4 * limit + 1024:
                return None
            bits *= 2
    except DeriveError:
        return None
    finally:
        ctx.prec = before


def _ball(value: Fraction) -> arb:
    return arb(fmpq(value.numerator, value.denominator))


def _root(value: arb) -> arb:
    if value < 0:
        raise DeriveError("a root is not real")
    return value.sqrt() if not value.contains(0) else value.abs_upper().sqrt().union(arb(0))


def _folded(node: Expression, values: Mapping[str, Fraction]) -> Expression | None:
    """Put exact numbers for all that holds no root; None where a radicand is negative."""
    if isinstance(node, Name):
        return Number(values[node.text])
    parts = []
    for child in children_of(node):
        part = _folded(child, values)
        if part is None:
            return None
        parts.append(part)
    if isinstance(node, Root) and isinstance(parts[0], Number) and parts[0].value < 0:
        return None
    after = with_children(node, tuple(parts)) if parts else node
    if not isinstance(node, Root) and parts and all(isinstance(part, Number) for part in parts):
        return Number(evaluate(after, {}, Fraction))
    return after


def _size(node: Expression) -> Size:
    """Give the logarithms of the bounds u and l of the source, above and below the fraction line."""
    if isinstance(node, Number):
        return _bits(node.value.numerator), _bits(node.value.denominator)
    parts = [_size(child) for child in children_of(node)]
    if isinstance(node, Sum):
        total = parts[0]
        for part in parts[1:]:
            total = max(total[0] + part[1], part[0] + total[1]) + 1, total[1] + part[1]
        return total
    if isinstance(node, Product):
        return sum(p[0] for p in parts), sum(p[1] for p in parts)
    if isinstance(node, Quotient):
        return parts[0][0] + parts[1][1], parts[0][1] + parts[1][0]
    if isinstance(node, Power):
        up, low = (part * abs(node.exponent) for part in parts[0])
        return (up, low) if node.exponent >= 0 else (low, up)
    if isinstance(node, Parallel):
        low, up = _size(Sum(tuple(Quotient(Number(Fraction(1)), b) for b in node.branches)))
        return up, low
    if isinstance(node, Root):
        up, low = parts[0]
        return ((up + low) / 2, low) if up >= low else (up, (up + low) / 2)
    return parts[0]


def _bits(value: int) -> float:
    return log2(abs(value)) + 0.01 if abs(value) > 1 else 0.01
