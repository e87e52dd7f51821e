"""Which terms came into a ratio and which went out of it, exactly."""

from __future__ import annotations

from collections import Counter
from dataclasses import dataclass
from fractions import Fraction

from derive.expressions.polynomials import multiply
from derive.expressions.text import to_text
from derive.expressions.tree import (
    ONE,
    Expression,
    Name,
    Negative,
    Number,
    Power,
    Product,
    Quotient,
    Sum,
)
from derive.expressions.walk import names_of

# Names with their powers; what is no name stands with its own text.
Monomial = tuple[tuple[str, int], ...]
_MOST_TRIED = 200


@dataclass(frozen=True, slots=True)
class Terms:
    """A ratio as two sums: each term's names with its coefficient, and how it is written."""

    above: dict[Monomial, Fraction]
    below: dict[Monomial, Fraction]


@dataclass(frozen=True, slots=True)
class TermChanges:
    """What came in and went out above and below the bar.

    `scaled` multiplies the old ratio above and below, `scaled_new` the new one, before they are compared: a
    part that comes in multiplies every term, and says nothing by that.
    """

    scaled: Expression
    scaled_new: Expression
    came_above: tuple[Expression, ...]
    went_above: tuple[Expression, ...]
    came_below: tuple[Expression, ...]
    went_below: tuple[Expression, ...]


def same_value(old: Expression, new: Expression) -> bool:
    """Say whether two ratios have the same terms, whatever their order."""
    return old == new or terms_of(old) == terms_of(new)


def term_changes(old: Expression, new: Expression) -> TermChanges:
    """Give the terms that differ between two ratios of sums."""
    before, after = terms_of(old), terms_of(new)
    scale = _scale(before, after)
    up: Monomial = tuple((name, power) for name, power in scale if power > 0)
    down: Monomial = tuple((name, -power) for name, power in scale if power < 0)
    before = Terms(*(_times(side, up) for side in (before.above, before.below)))
    after = Terms(*(_times(side, down) for side in (after.above, after.below)))
    writer = _Writer((*names_of(new), *names_of(old)))
    return TermChanges(
        writer.term(up, Fraction(1)),
        writer.term(down, Fraction(1)),
        writer.missing(after.above, before.above),
        writer.missing(before.above, after.above),
        writer.missing(after.below, before.below),
        writer.missing(before.below, after.below),
    )


def terms_of(expression: Expression) -> Terms:
    """Give a ratio as the terms above and below its bar."""
    sign, rest = 1, expression
    while isinstance(rest, Negative):
        sign, rest = -sign, rest.operand
    above, below = (rest.numerator, rest.denominator) if isinstance(rest, Quotient) else (rest, ONE)
    return Terms(_collected(above, sign), _collected(below, 1))


def _collected(expression: Expression, sign: int) -> dict[Monomial, Fraction]:
    parts = expression.terms if isinstance(expression, Sum) else (expression,)
    found: dict[Monomial, Fraction] = {}
    for part in parts:
        coefficient, powers = Fraction(sign), Counter[str]()
        waiting: list[Expression] = [part]
        while waiting:
            factor = waiting.pop()
            match factor:
                case Negative(operand):
                    coefficient = -coefficient
                    waiting.append(operand)
                case Number(value):
                    coefficient *= value
                case Product(factors):
                    waiting += factors
                case Name(text):
                    powers[text] += 1
                case Power(Name(text), exponent):
                    powers[text] += exponent
                case _:
                    powers[f"({to_text(factor)})"] += 1
        key = tuple(sorted((name, power) for name, power in powers.items() if power))
        found[key] = found.get(key, Fraction(0)) + coefficient
    return {key: value for key, value in found.items() if value}


def _scale(before: Terms, after: Terms) -> Monomial:
    """Give what the old ratio is to be multiplied by, above and below, to share most terms with the new one."""
    found: Counter[Monomial] = Counter()
    for old, new in ((before.above, after.above), (before.below, after.below)):
        firsts, seconds = list(old)[:_MOST_TRIED], list(new)[:_MOST_TRIED]
        for first in firsts:
            for second in seconds:
                if old[first] == new[second]:
                    found[_ratio(second, first)] += 1
    # The most shared terms; of equals the shortest, and none rather than some.
    return max(found, key=lambda ratio: (found[ratio], -sum(abs(p) for _, p in ratio), ratio), default=())


def _ratio(above: Monomial, below: Monomial) -> Monomial:
    powers = Counter(dict(above))
    powers.subtract(dict(below))
    return tuple(sorted((name, power) for name, power in powers.items() if power))


def _times(side: dict[Monomial, Fraction], factor: Monomial) -> dict[Monomial, Fraction]:
    if not factor:
        return side
    divisor = tuple((name, -power) for name, power in factor)
    return {_ratio(key, divisor): value for key, value in side.items()}


class _Writer:
    """Writes terms with their factors in the order in which the ratios themselves have them."""

    def __init__(self, names: tuple[str, ...]) -> None:
        self._rank = {name: place for place, name in reversed(list(enumerate(names)))}

    def missing(
        self, side: dict[Monomial, Fraction], other: dict[Monomial, Fraction]
    ) -> tuple[Expression, ...]:
        """Give the terms of one side that the other does not have."""
        return tuple(self.term(key, value) for key, value in side.items() if other.get(key) != value)

    def term(self, key: Monomial, coefficient: Fraction) -> Expression:
        """Give a term as an expression."""
        ordered = sorted(key, key=lambda factor: (self._rank.get(factor[0], len(self._rank)), factor[0]))
        factors = [Name(name) if power == 1 else Power(Name(name), power) for name, power in ordered]
        size = [Number(abs(coefficient))] if abs(coefficient) != 1 or not factors else []
        made = multiply([*size, *factors])
        return Negative(made) if coefficient < 0 else made
