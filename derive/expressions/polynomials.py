"""Trees of polynomials and ratios, with factors and terms in the order in which engineers write them.

Factors stand in the order of the names given. Of the terms of a sum those with fewer factors come
first, then those whose factors come first; a sum begins with a positive term if it has one.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from fractions import Fraction

from derive.algebra.ring import Polynomial, Ring
from derive.expressions.tree import (
    ONE,
    ZERO,
    Expression,
    Name,
    Negative,
    Number,
    Power,
    Product,
    Quotient,
    Sum,
)

Term = tuple[tuple[int, ...], int]


@dataclass(frozen=True, slots=True, eq=False)
class Writer:
    """Writes polynomials over a ring without inverted names.

    `order` lists the names as factors are to stand; `degree_name` is collected in powers.
    """

    ring: Ring
    order: tuple[str, ...]
    degree_name: str = "s"

    def polynomial(self, polynomial: Polynomial) -> Expression:
        """Write a polynomial multiplied out, sorted but not collected."""
        return self._sum(_terms(polynomial))

    def collected(self, polynomial: Polynomial) -> Expression:
        """Write a polynomial collected: c_0 + s·(c_1) + s²·(c_2) and so on."""
        parts: list[Expression] = []
        for power, terms in sorted(self.by_degree(polynomial).items()):
            parts.append(_times_power(self._sum(terms), Name(self.degree_name), power))
        return add(parts)

    def coefficients(self, polynomial: Polynomial) -> dict[int, Expression]:
        """Give the coefficients of the powers of the degree name that occur."""
        grouped = self.by_degree(polynomial)
        return {power: self._sum(terms) for power, terms in sorted(grouped.items())}

    def by_degree(self, polynomial: Polynomial) -> dict[int, list[Term]]:
        """Give the terms of each power of the degree name, that power taken off."""
        place = self.ring.names.index(self.degree_name)
        grouped: dict[int, list[Term]] = {}
        for exponents, coefficient in _terms(polynomial):
            rest = (*exponents[:place], 0, *exponents[place + 1 :])
            grouped.setdefault(exponents[place], []).append((rest, coefficient))
        return grouped

    def ratio(self, numerator: Polynomial, denominator: Polynomial) -> Expression:
        """Write a ratio of polynomials, its sign in front and no fraction over 1."""
        return divide(self.collected(numerator), self.collected(denominator))

    def _sum(self, terms: Sequence[Term]) -> Expression:
        rank = {self.ring.names.index(name): place for place, name in enumerate(self.order)}
        names = [Name(name) for name in self.ring.names]
        keyed = []
        for exponents, coefficient in terms:
            powers = sorted((rank[place], place, power) for place, power in enumerate(exponents) if power)
            weight = sum(power for _, _, power in powers)
            keyed.append(((weight, [r for r, _, p in powers for _ in range(p)]), powers, coefficient))
        keyed.sort(key=lambda entry: entry[0])
        first = next((k for k, (_, _, coefficient) in enumerate(keyed) if coefficient > 0), 0)
        keyed.insert(0, keyed.pop(first)) if keyed else None
        return add([_term(names, powers, coefficient) for _, powers, coefficient in keyed])


def add(terms: Sequence[Expression]) -> Expression:
    """Give the sum; that of no terms is 0, that of one term the term, and zeros are left out."""
    kept: list[Expression] = []
    for term in terms:
        if isinstance(term, Sum):
            kept.extend(term.terms)
        elif term != ZERO:
            kept.append(term)
    if not kept:
        return ZERO
    if all(isinstance(term, Negative) for term in kept) and len(kept) > 1:
        return Negative(add([term.operand for term in kept if isinstance(term, Negative)]))
    return kept[0] if len(kept) == 1 else Sum(tuple(kept))


def multiply(factors: Sequence[Expression]) -> Expression:
    """Give the product, its sign in front, without factors of 1."""
    kept: list[Expression] = []
    negative = False
    for factor in factors:
        bare = factor
        if isinstance(bare, Negative):
            negative, bare = not negative, bare.operand
        if isinstance(bare, Product):
            kept.extend(bare.factors)
        elif bare != ONE:
            kept.append(bare)
    if ZERO in kept:
        return ZERO
    product: Expression = ONE if not kept else kept[0] if len(kept) == 1 else Product(tuple(kept))
    return Negative(product) if negative else product


def divide(numerator: Expression, denominator: Expression) -> Expression:
    """Give the quotient, its sign in front, and no fraction over 1."""
    negative = False
    if isinstance(numerator, Negative):
        negative, numerator = not negative, numerator.operand
    if isinstance(denominator, Negative):
        negative, denominator = not negative, denominator.operand
    if numerator == ZERO:
        return ZERO
    result = numerator if denominator == ONE else Quotient(numerator, denominator)
    return Negative(result) if negative else result


def negate(expression: Expression) -> Expression:
    """Give the expression with its sign changed, without a double sign."""
    if isinstance(expression, Negative):
        return expression.operand
    return ZERO if expression == ZERO else Negative(expression)


def subtract(left: Expression, right: Expression) -> Expression:
    """Give left − right as a sum of two."""
    if right == ZERO:
        return left
    if left == ZERO:
        return negate(right)
    return Sum((left, negate(right)))


def writing_order(ring: Ring, ranks: Mapping[str, int]) -> tuple[str, ...]:
    """Order a ring's names by rank, and by their place in the ring within a rank."""
    return tuple(sorted(ring.names, key=lambda name: (ranks.get(name, 9), ring.names.index(name))))


def _terms(polynomial: Polynomial) -> list[Term]:
    return [
        (tuple(map(int, exponents)), int(coefficient))
        for exponents, coefficient in polynomial.to_dict().items()
    ]


def _term(names: list[Name], powers: list[tuple[int, int, int]], coefficient: int) -> Expression:
    factors: list[Expression] = []
    if abs(coefficient) != 1 or not powers:
        factors.append(Number(Fraction(abs(coefficient))))
    for _, place, power in powers:
        factors.append(names[place] if power == 1 else Power(names[place], power))
    product: Expression = factors[0] if len(factors) == 1 else Product(tuple(factors))
    return Negative(product) if coefficient < 0 else product


def _times_power(expression: Expression, name: Name, power: int) -> Expression:
    if power == 0:
        return expression
    base: Expression = name if power == 1 else Power(name, power)
    if isinstance(expression, Negative):
        return Negative(_times_power(expression.operand, name, power))
    if isinstance(expression, Sum):
        return Product((base, expression))
    return multiply([base, expression])
