"""Puts sums, products, fractions and parallel combinations together in the order in which they are read.

In a product pure numbers and gains stand first, then conductances, resistances, inductances, capacitances,
then what stands in brackets; but 1 + β stands before a resistance. In a sum a bare number stands first, then
what a Miller factor multiplies, then single names, then longer terms. In a parallel combination single
names stand first.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field
from fractions import Fraction

from derive.expressions.polynomials import add, divide, multiply
from derive.expressions.tree import (
    ONE,
    ZERO,
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


@dataclass(frozen=True, slots=True)
class Composer:
    """Knows each name's place in a product; `words` are pure numbers such as β."""

    rank: Mapping[str, int]
    words: frozenset[str]
    # By identity, with the expression itself, so that no other can come to have its address.
    ranks: dict[int, tuple[Expression, int | None, bool]] = field(default_factory=dict)

    def product(self, factors: Sequence[Expression]) -> Expression:
        """Multiply; signs go to the front, divisors share one fraction bar."""
        return self._fraction([(factor, True) for factor in factors])

    def quotient(self, above: Expression, below: Expression) -> Expression:
        """Divide; a divisor that is a fraction itself turns over."""
        return self._fraction([(above, True), (below, False)])

    def _fraction(self, pending: list[tuple[Expression, bool]]) -> Expression:
        """Give the product of what stands above (True) over what stands below (False)."""
        minus = False
        sides: dict[bool, list[Expression]] = {True: [], False: []}
        dividers: list[Quotient] = []
        pending.reverse()
        while pending:
            factor, side = pending.pop()
            kind = type(factor)
            if kind is Name:
                sides[side].append(factor)
            elif isinstance(factor, Negative):
                minus = not minus
                pending.append((factor.operand, side))
            elif isinstance(factor, Product):
                pending += [(inner, side) for inner in reversed(factor.factors)]
            elif isinstance(factor, Quotient):
                if side and is_divider(factor):
                    dividers.append(factor)
                else:
                    pending += [(factor.denominator, not side), (factor.numerator, side)]
            else:
                sides[side].append(factor)
        for factor in [d for d in dividers if _other(d) in sides[True]]:
            # x·y/(x + y) is no divider.
            dividers.remove(factor)
            sides[True].append(factor.numerator)
            sides[False].append(factor.denominator)
        above, below = (self._multiplied(sides[side]) for side in (True, False))
        result = divide(above, below)
        if dividers:
            # A divider is read as one thing, so it stays one: [r_π/(R_S + r_π)]·g_m·R_L.
            rest = result.factors if isinstance(result, Product) else [result] if result != ONE else []
            both = (*dividers, *rest)
            result = both[0] if len(both) == 1 else Product(both)
        return Negative(result) if minus and result != ZERO else result

    def sum(self, terms: Sequence[Expression]) -> Expression:
        """Add; what is read first comes first."""
        flat: list[Expression] = []
        for term in terms:
            flat.extend(term.terms if isinstance(term, Sum) else [term] if term != ZERO else [])
        ordered = sorted(flat, key=self._term_key)
        first = next((k for k, term in enumerate(ordered) if not isinstance(term, Negative)), 0)
        ordered.insert(0, ordered.pop(first)) if ordered else None
        return add(ordered)

    def parallel(self, branches: Sequence[Expression]) -> Expression:
        """Combine in parallel; single names come first."""
        flat: list[Expression] = []
        for branch in branches:
            flat.extend(branch.branches if isinstance(branch, Parallel) else [branch])
        flat.sort(key=lambda branch: (not isinstance(branch, Name), self._rank_of(branch)))
        return flat[0] if len(flat) == 1 else Parallel(tuple(flat))

    def power(self, base: Expression, exponent: int) -> Expression:
        """Raise to a whole power above zero."""
        return base if exponent == 1 else Power(base, exponent)

    def again(self, expression: Expression) -> Expression:
        """Put an expression together anew, from its leaves up."""
        inner = [self.again(child) for child in children_of(expression)]
        if isinstance(expression, Sum):
            return self.sum(inner)
        if isinstance(expression, Product):
            return self.product(inner)
        if isinstance(expression, Quotient):
            return self.quotient(*inner)
        if isinstance(expression, Parallel):
            return self.parallel(inner)
        if isinstance(expression, Power):
            return self.power(inner[0], expression.exponent)
        if isinstance(expression, Negative):
            return inner[0].operand if isinstance(inner[0], Negative) else Negative(inner[0])
        return expression

    def _multiplied(self, factors: list[Expression]) -> Expression:
        if len(factors) < 2:
            return factors[0] if factors else ONE
        return multiply(self._ordered(self._gathered(factors)))

    def _gathered(self, factors: Sequence[Expression]) -> list[Expression]:
        """Write equal factors as one power."""
        counted: dict[str, int] = {}
        number = Fraction(1)
        others: list[Expression] = []
        for factor in factors:
            if isinstance(factor, Name):
                counted[factor.text] = counted.get(factor.text, 0) + 1
            elif isinstance(factor, Number):
                number *= factor.value
            elif isinstance(factor, Power) and isinstance(factor.base, Name):
                counted[factor.base.text] = counted.get(factor.base.text, 0) + factor.exponent
            else:
                others.append(factor)
        kept: list[Expression] = [] if number == 1 else [Number(number)]
        kept += [self.power(Name(name), exponent) for name, exponent in counted.items() if exponent]
        return kept + (_equal_ones_as_powers(others) if len(others) > 1 else others)

    def _ordered(self, factors: Sequence[Expression]) -> list[Expression]:
        return sorted(factors, key=self._factor_key) if len(factors) > 1 else list(factors)

    def _factor_key(self, factor: Expression) -> tuple[int, int]:
        if isinstance(factor, Number):
            return 0, 0
        if isinstance(factor, Power):
            factor = factor.base
        if isinstance(factor, Name):
            words_first = 1 if factor.text in self.words else 2
            return words_first, self.rank.get(factor.text, 0)
        if isinstance(factor, Sum) and self._of_words(factor):
            return 1, len(self.rank)
        if isinstance(factor, Parallel):
            return 3, self._rank_of(factor)
        return 4, self._rank_of(factor)

    def _term_key(self, term: Expression) -> tuple[int, int]:
        if isinstance(term, Negative):
            term = term.operand
        if isinstance(term, Number):
            return 0, 0
        if isinstance(term, Product) and any(map(self._miller, term.factors)):
            return 1, self._rank_of(term)
        if isinstance(term, Name):
            return 2, self._rank_of(term)
        if isinstance(term, Parallel):
            return 3, self._rank_of(term)
        return (4 if isinstance(term, Product) else 5), self._rank_of(term)

    def _miller(self, factor: Expression) -> bool:
        """Whether a factor is 1 + g·R, and not 1 + β alone."""
        if not (isinstance(factor, Sum) and ONE in factor.terms):
            return False
        return not self._of_words(factor)

    def _rank_of(self, expression: Expression) -> int:
        return self._ranked(expression)[1] or 0

    def _of_words(self, expression: Expression) -> bool:
        return self._ranked(expression)[2]

    def _ranked(self, expression: Expression) -> tuple[Expression, int | None, bool]:
        """Give an expression, the rank of its first name, and whether all its names are words."""
        found = self.ranks.get(id(expression))
        if found is None:
            if isinstance(expression, Name):
                rank: int | None = self.rank.get(expression.text, 0)
                found = expression, rank, expression.text in self.words
            else:
                inner = [self._ranked(child) for child in children_of(expression)]
                known = [rank for _, rank, _ in inner if rank is not None]
                found = expression, min(known, default=None), all(words for _, _, words in inner)
            self.ranks[id(expression)] = found
        return found


def is_divider(expression: Quotient) -> bool:
    """Whether this is x/(x + y), which is read as one thing."""
    above, below = expression.numerator, expression.denominator
    return (
        isinstance(below, Sum)
        and len(below.terms) == 2
        and all(isinstance(term, Name | Parallel) for term in below.terms)
        and above in below.terms
    )


def _other(divider: Quotient) -> Expression | None:
    """Give y of a divider x/(x + y)."""
    below = divider.denominator
    if not isinstance(below, Sum):
        return None
    return next((term for term in below.terms if term != divider.numerator), None)


def _equal_ones_as_powers(factors: Sequence[Expression]) -> list[Expression]:
    counted: dict[Expression, int] = {}
    for factor in factors:
        base, exponent = (factor.base, factor.exponent) if isinstance(factor, Power) else (factor, 1)
        counted[base] = counted.get(base, 0) + exponent
    return [
        base if exponent == 1 else Power(base, exponent) for base, exponent in counted.items() if exponent
    ]
