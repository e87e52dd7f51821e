"""How much there is to read: the measure of simplicity that every rewrite must make fall.

A name counts four, so that the smaller things that tire a reader (a fraction bar, a bracket, a sign, a
bare 1) can count less than one name each.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field
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
    return Ruler(weights or {}).measure(expression)


@dataclass(slots=True, eq=False)
class Ruler:
    """Measures many expressions that share their parts: each part is measured once."""

    weights: Mapping[str, int]
    # By identity, with the part itself, so that no other can come to have its address.
    known: dict[int, tuple[Expression, int, bool]] = field(default_factory=dict)

    def measure(self, expression: Expression) -> int:
        """Give the length of an expression for a reader."""
        return self._measured(expression)[1]

    def _measured(self, expression: Expression) -> tuple[Expression, int, bool]:
        """Give an expression, its length, and whether there is a fraction in it."""
        found = self.known.get(id(expression))
        if found is None:
            kind = type(expression)
            if kind is Name:
                length, fraction = self.weights.get(expression.text, NAME), False  # type: ignore[union-attr]
            elif kind is Number:
                length, fraction = UNIT if expression == ONE else NUMBER, False
            else:
                inner = [self._measured(child) for child in children_of(expression)]
                fraction = kind is Quotient or any(has for _, _, has in inner)
                length = sum(part for _, part, _ in inner) + _marks(expression, inner)
            found = self.known[id(expression)] = expression, length, fraction
        return found


def _marks(expression: Expression, inner: Sequence[tuple[Expression, int, bool]]) -> int:
    """Give what an expression adds to the lengths of its operands."""
    kind = type(expression)
    if kind is Product:
        return MARK * sum(type(factor) is Sum for factor, _, _ in inner)
    if kind is Quotient:
        # Fractions within fractions are what makes a formula hard to read.
        (_, _, above), (under, _, below) = inner
        if is_divider(expression):  # type: ignore[arg-type]
            return -2 * MARK
        return MARK * (1 + isinstance(under, Sum | Product) + 4 * below + 2 * above)
    if kind is Power:
        return 2 * MARK
    if kind is Parallel and all(type(branch) is Name for branch, _, _ in inner):
        # R_1 ∥ R_2 is read as one resistance.
        return -2 * MARK * (len(inner) - 1)
    return MARK if kind in (Negative, Parallel) else 0


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
