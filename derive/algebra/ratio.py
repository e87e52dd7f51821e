"""Ratios of polynomials in lowest terms, and exact values of polynomials."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from fractions import Fraction

from flint import Ordering, fmpq, fmpq_mpoly_ctx

from derive.algebra.common_factor import remove_common_factor, remove_common_monomial
from derive.algebra.coprime import coprime
from derive.algebra.rationals import fraction, rational
from derive.algebra.ring import Polynomial, Ring

# Below this many terms FLINT's greatest common divisor is quicker than the test for its absence.
SMALL = 300


def lowest_terms(
    ring: Ring, numerator: Polynomial, denominator: Polynomial
) -> tuple[Polynomial, Polynomial]:
    """Divide numerator and denominator by all that they share."""
    if numerator == 0:
        return ring.zero, ring.one
    numerator, denominator = remove_common_monomial(numerator, denominator)
    if min(len(numerator), len(denominator)) == 1:
        return numerator, denominator
    if len(numerator) + len(denominator) > SMALL and coprime(ring, numerator, denominator):
        return numerator, denominator
    return remove_common_factor(numerator, denominator)


def coefficients(ring: Ring, polynomial: Polynomial, name: str) -> dict[int, Polynomial]:
    """Give the coefficients of the powers of one generator that occur, by rising power."""
    place = ring.names.index(name)
    grouped: dict[int, dict[tuple[int, ...], int]] = {}
    for exponents, coefficient in polynomial.to_dict().items():
        rest = (*exponents[:place], 0, *exponents[place + 1 :])
        grouped.setdefault(int(exponents[place]), {})[rest] = coefficient
    return {power: ring.context.from_dict(terms) for power, terms in sorted(grouped.items())}


def exact_value(
    ring: Ring,
    polynomial: Polynomial,
    values: Mapping[str, Fraction],
    squares: Mapping[str, Fraction],
) -> Fraction:
    """Give a polynomial's value; the even powers of a name in `squares` are taken from its square.

    A name in `squares` needs an (approximate) entry in `values` only for its odd powers.
    """
    places = {place: squares[name] for place, name in enumerate(ring.names) if name in squares}
    context = fmpq_mpoly_ctx.get([f"x{k}" for k in range(max(len(ring.names), 1))], Ordering.lex)
    terms: dict[tuple[int, ...], fmpq] = {}
    for exponents, coefficient in polynomial.to_dict().items():
        value = fmpq(int(coefficient))
        reduced = exponents
        for place, square in places.items():
            value *= rational(square) ** (exponents[place] // 2)
            reduced = (*reduced[:place], exponents[place] % 2, *reduced[place + 1 :])
        terms[reduced] = terms.get(reduced, fmpq(0)) + value
    whole = context.from_dict({key: value for key, value in terms.items() if value != 0})
    return fraction(whole(*_point(ring, values)))


def _point(ring: Ring, values: Mapping[str, Fraction]) -> Sequence[fmpq]:
    return [rational(values.get(name, Fraction(0))) for name in ring.names] or [fmpq(0)]
