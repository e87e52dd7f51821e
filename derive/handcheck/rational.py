"""Lines as polynomials in some of their names, the other names having values: modulo the prime, or exactly."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from fractions import Fraction
from typing import Any

from flint import fmpq, fmpq_mpoly_ctx, nmod_mpoly_ctx

from derive.algebra.modular import PRIME
from derive.algebra.unreduced import Unreduced
from derive.check.solve import residue
from derive.expressions.tree import ZERO, Expression, Name, Number, Power, Product, Sum
from derive.expressions.walk import children_of, evaluate, evaluate_modulo, names_of, with_children

Polynomial = Any  # flint.nmod_mpoly, which has no type stubs
# A polynomial of more terms is not followed up: no hand derivation has such a line in its unknowns.
MOST_TERMS = 400
MOST_EXPONENT = 8


class TooLongError(Exception):
    """Raised where a line has too many terms in its unknowns."""


class _Pair(Unreduced):
    """A fraction of polynomials that is given up where it grows too long."""

    __slots__ = ()

    def __post_init__(self) -> None:
        if len(self.top) > MOST_TERMS or len(self.bottom) > MOST_TERMS:
            raise TooLongError

    def __pow__(self, exponent: int) -> _Pair:
        if exponent > MOST_EXPONENT and max(len(self.top), len(self.bottom)) > 2:
            raise TooLongError
        return Unreduced.__pow__(self, exponent)


class Unknowns:
    """The ring of polynomials in the names that are unknown, modulo the prime or over the rationals."""

    def __init__(self, names: Sequence[str], *, exact: bool = False) -> None:
        self.names = tuple(dict.fromkeys(names))
        self.exact = exact
        variables = self.names or ("nothing",)
        self._context: Any = (
            fmpq_mpoly_ctx.get(variables) if exact else nmod_mpoly_ctx.get(variables, modulus=PRIME)
        )
        self._generators = dict(zip(self.names, self._context.gens(), strict=False))
        self.zero: Polynomial = self._context.constant(0)
        self.one: Polynomial = self._context.constant(1)

    def place(self, name: str) -> int:
        """Give the place of a name among the variables."""
        return self.names.index(name)

    def polynomial(self, terms: Mapping[tuple[int, ...], Any]) -> Polynomial:
        """Give a polynomial by its terms."""
        return self._context.from_dict(terms) if terms else self.zero

    def written(self, polynomial: Polynomial) -> Expression:
        """Write a polynomial with rational coefficients as an expression."""
        terms: list[Expression] = []
        for powers, value in polynomial.to_dict().items():
            factors: list[Expression] = [Number(Fraction(int(value.p), int(value.q)))]
            factors += [
                Power(Name(name), int(power))
                for name, power in zip(self.names, powers, strict=True)
                if power
            ]
            terms.append(Product(tuple(factors)))
        return Sum(tuple(terms)) if terms else ZERO

    def numerator(self, left: Expression, right: Expression, values: Mapping[str, Any]) -> Polynomial:
        """Give the numerator of left − right; it is zero where the sides are equal.

        Raises: ZeroDivisionError, TooLongError; DeriveError for a root or a name without a value.
        """
        pair = self._pair(left, values) + -self._pair(right, values)
        return stripped(self, pair.top)

    def _pair(self, node: Expression, values: Mapping[str, Any]) -> _Pair:
        lookup = {
            name: _Pair(self._generators[name], self.one)
            for name in names_of(node)
            if name in self._generators
        }
        return evaluate(self._folded(node, values), lookup, self._number)

    def _number(self, value: Fraction) -> _Pair:
        exact = fmpq(value.numerator, value.denominator) if self.exact else residue(value, PRIME)
        return _Pair(self._context.constant(exact), self.one)

    def _folded(self, node: Expression, values: Mapping[str, Any]) -> Expression:
        """Put a number in the place of every largest subtree that holds no unknown: long lines then cost little."""
        if not any(name in self._generators for name in names_of(node)):
            if self.exact:
                return Number(evaluate(node, values, Fraction))
            return Number(Fraction(evaluate_modulo(node, values, PRIME)))
        children = tuple(self._folded(child, values) for child in children_of(node))
        return with_children(node, children) if children else node


def stripped(ring: Unknowns, polynomial: Polynomial) -> Polynomial:
    """Take out of a polynomial the powers of unknowns that all its terms share: no unknown is zero."""
    if polynomial == 0:
        return polynomial
    terms = polynomial.to_dict()
    lowest = tuple(min(powers) for powers in zip(*terms, strict=True))
    if not any(lowest):
        return polynomial
    return ring.polynomial(
        {tuple(e - low for e, low in zip(powers, lowest, strict=True)): c for powers, c in terms.items()}
    )


@dataclass(frozen=True, slots=True, eq=False)
class Pivot:
    """name = −rest/factor, where neither holds the name, nor the names of pivots before it."""

    name: str
    factor: Polynomial
    rest: Polynomial


def solve_for_one(ring: Unknowns, polynomial: Polynomial, prefer: Sequence[str] = ()) -> Pivot | None:
    """Solve an equation for a name in which it is of first degree; None where there is none."""
    if polynomial == 0 or polynomial.is_constant():
        return None
    degrees = polynomial.degrees()
    best: Pivot | None = None
    order = [*(n for n in prefer if n in ring.names), *(n for n in ring.names if n not in prefer)]
    for name in order:
        if degrees[ring.place(name)] != 1:
            continue
        pivot = split(ring, polynomial, name)
        if best is None or len(pivot.factor) < len(best.factor):
            best = pivot
    return best


def split(ring: Unknowns, polynomial: Polynomial, name: str) -> Pivot:
    """Write a polynomial of first degree in a name as factor·name + rest."""
    place = ring.place(name)
    factor: dict[tuple[int, ...], Any] = {}
    rest: dict[tuple[int, ...], Any] = {}
    for powers, value in polynomial.to_dict().items():
        if powers[place]:
            factor[(*powers[:place], 0, *powers[place + 1 :])] = value
        else:
            rest[powers] = value
    return Pivot(name, ring.polynomial(factor), ring.polynomial(rest))


def put_in(ring: Unknowns, polynomial: Polynomial, pivot: Pivot) -> Polynomial:
    """Put a pivot's solution for its name into a polynomial, cleared of fractions and shared powers."""
    place = ring.place(pivot.name)
    by_power: dict[int, dict[tuple[int, ...], Any]] = {}
    for powers, value in polynomial.to_dict().items():
        rest = (*powers[:place], 0, *powers[place + 1 :])
        by_power.setdefault(powers[place], {})[rest] = value
    highest = max(by_power, default=0)
    if not highest:
        return polynomial
    total: Any = ring.zero
    for power, terms in by_power.items():
        part = ring.polynomial(terms) * (-pivot.rest) ** power * pivot.factor ** (highest - power)
        total = total + part
        if len(total) > 4 * MOST_TERMS:
            raise TooLongError
    if total != 0 and not pivot.factor.is_constant():
        shared = total.gcd(pivot.factor)
        while not shared.is_constant():
            total = total / shared
            shared = total.gcd(shared)
    return stripped(ring, total)
