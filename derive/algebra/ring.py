"""A ring of integer polynomials over named generators, on FLINT."""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from functools import reduce
from typing import Any

from flint import Ordering, fmpz_mpoly_ctx

# FLINT's polynomials come without type stubs. They can be neither pickled nor hashed.
Polynomial = Any


@dataclass(frozen=True, slots=True, eq=False)
class Ring:
    """Integer polynomials in `names`, in that order.

    A name in `inverted` is a generator that stands for the reciprocal of the name: with R in
    `inverted`, the generator of R is 1/R.
    """

    names: tuple[str, ...]
    inverted: frozenset[str]
    context: Any

    @property
    def zero(self) -> Polynomial:
        """The polynomial 0."""
        return self.context.constant(0)

    @property
    def one(self) -> Polynomial:
        """The polynomial 1."""
        return self.context.constant(1)

    def generator(self, name: str) -> Polynomial:
        """Give the generator that stands for `name` (for 1/name where it is inverted)."""
        return self.context.gen(self.names.index(name))

    def constant(self, value: int) -> Polynomial:
        """Give a constant polynomial."""
        return self.context.constant(value)

    def monomial(self, powers: dict[str, int]) -> Polynomial:
        """Give the product of generators to the powers stated."""
        exponents = [0] * max(len(self.names), 1)
        for name, power in powers.items():
            exponents[self.names.index(name)] = power
        return self.context.from_dict({tuple(exponents): 1})

    def plain(self) -> Ring:
        """Give the ring of the same polynomials in which no name is inverted."""
        return Ring(self.names, frozenset(), self.context)


def ring(
    names: Iterable[str], inverted: Iterable[str] = (), numbers: Mapping[str, int] | None = None
) -> Ring:
    """Make a ring; any text will do for a name, and the first name is the most significant.

    Given: `numbers` of the names, where polynomials of several rings are to have the same text if they are equal.
    """
    ordered = tuple(names)
    # FLINT does not check generator names, and prints them: give it harmless ones of our own.
    places = range(len(ordered)) if numbers is None else [numbers[name] for name in ordered]
    safe = [f"x{place}" for place in places] or ["x0"]
    return Ring(ordered, frozenset(inverted), fmpz_mpoly_ctx.get(safe, Ordering.lex))


def used_names(ring: Ring, polynomials: Iterable[Polynomial]) -> tuple[str, ...]:
    """Give the names that occur in any of the polynomials, in the ring's order."""
    degrees = reduce(
        lambda so_far, more: [max(a, b) for a, b in zip(so_far, more, strict=True)],
        (polynomial.degrees() for polynomial in polynomials if polynomial != 0),
        [0] * max(len(ring.names), 1),
    )
    return tuple(name for name, degree in zip(ring.names, degrees, strict=False) if degree > 0)


def common_monomial(polynomials: Iterable[Polynomial]) -> Polynomial:
    """Give the greatest term, with its whole-number factor, that divides all of the polynomials."""
    contents = [polynomial.term_content() for polynomial in polynomials if polynomial != 0]
    return reduce(lambda a, b: a.gcd(b), contents)


def negative(polynomial: Polynomial) -> bool:
    """Whether most terms are negative; on a draw, whether the leading one is."""
    signs = [1 if coefficient > 0 else -1 for coefficient in polynomial.coeffs()]
    return sum(signs) < 0 or (sum(signs) == 0 and bool(signs) and signs[0] < 0)


def moved(polynomial: Polynomial, source: Ring, target: Ring) -> Polynomial:
    """Give a polynomial over another ring that has all the names it uses."""
    places = [target.names.index(name) if name in target.names else -1 for name in source.names]
    width = max(len(target.names), 1)
    terms = {}
    for exponents, coefficient in polynomial.to_dict().items():
        there = [0] * width
        for place, power in zip(places, exponents, strict=False):
            if power:
                there[place] = int(power)
        terms[tuple(there)] = int(coefficient)
    return target.context.from_dict(terms)
