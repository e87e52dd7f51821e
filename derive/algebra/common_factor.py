"""Removal of the factors that a numerator and a denominator share."""

from __future__ import annotations

from functools import reduce
from typing import Any

from flint import fmpz_poly

from derive.algebra.ring import Polynomial, Ring


def remove_common_monomial(
    numerator: Polynomial, denominator: Polynomial
) -> tuple[Polynomial, Polynomial]:
    """Divide both by their common monomial and number, and make the denominator's lead positive."""
    common = numerator.term_content().gcd(denominator.term_content())
    if denominator.leading_coefficient() < 0:
        common = -common
    if common == 1:
        return numerator, denominator
    return numerator / common, denominator / common


def remove_common_content(
    ring: Ring, numerator: Polynomial, denominator: Polynomial, name: str
) -> tuple[Polynomial, Polynomial]:
    """Divide both by their common monomial, and by their common factor in one generator alone."""
    numerator, denominator = remove_common_monomial(numerator, denominator)
    index = ring.names.index(name)
    # What divides a polynomial divides the coefficient of every monomial in the other generators.
    hint = _leading_content(numerator, index).gcd(_leading_content(denominator, index))
    if hint.degree() < 1:
        return numerator, denominator
    shared = _content(numerator, index).gcd(_content(denominator, index))
    if shared.degree() < 1:
        return numerator, denominator
    factor = _from_univariate(ring, shared, index)
    return numerator / factor, denominator / factor


def remove_common_factor(numerator: Polynomial, denominator: Polynomial) -> tuple[Polynomial, Polynomial]:
    """Divide both by their greatest common divisor; the denominator's lead becomes positive."""
    numerator, denominator = remove_common_monomial(numerator, denominator)
    return remove_bounded_factor(numerator, denominator, *bounds(numerator, denominator))


def remove_bounded_factor(
    numerator: Polynomial, denominator: Polynomial, one: Polynomial, other: Polynomial
) -> tuple[Polynomial, Polynomial]:
    """Divide both by their greatest common divisor, which must divide `one` and `other` too."""
    if len(one) > 1 and len(other) > 1:
        common = one.gcd(other)
        if len(common) > 1:
            common = common.gcd(numerator).gcd(denominator)
            return remove_common_monomial(numerator / common, denominator / common)
    return numerator, denominator


def bounds(one: Polynomial, other: Polynomial) -> tuple[Polynomial, Polynomial]:
    """Give two shorter polynomials that every common divisor of the two divides.

    A common divisor is free of a generator that only one of them has, and so divides every coefficient
    of it. Only generators to the first power are used: there the coefficient is the derivative.
    """
    while True:
        degrees = list(enumerate(zip(one.degrees(), other.degrees(), strict=True)))
        shorter = _coefficient(one, [index for index, pair in degrees if pair == (1, 0)])
        others = _coefficient(other, [index for index, pair in degrees if pair == (0, 1)])
        if shorter is one and others is other:
            return one, other
        one, other = shorter, others


def _coefficient(polynomial: Polynomial, indices: list[int]) -> Polynomial:
    """Give the coefficient of a product of generators, leaving out those that drop out on the way."""
    for index in indices:
        polynomial = polynomial.derivative(index) or polynomial
    return polynomial


def _leading_content(polynomial: Polynomial, index: int) -> Any:
    """Give the coefficient of the leading monomial in the other generators, as a polynomial in one."""
    exponents = list(polynomial.monomial(0))
    powers = []
    for power in range(polynomial.degrees()[index] + 1):
        exponents[index] = power
        powers.append(int(polynomial[tuple(exponents)]))
    # Without its power of the generator: monomials in common have been removed already.
    lowest = next(power for power, value in enumerate(powers) if value)
    return fmpz_poly(powers[lowest:])


def _content(polynomial: Polynomial, index: int) -> Any:
    """Give the greatest common divisor of the coefficients, as polynomials in one generator."""
    grouped: dict[tuple[int, ...], dict[int, int]] = {}
    for exponents, coefficient in polynomial.to_dict().items():
        others = exponents[:index] + exponents[index + 1 :]
        grouped.setdefault(others, {})[exponents[index]] = int(coefficient)
    dense = (
        fmpz_poly([powers.get(power, 0) for power in range(max(powers) + 1)])
        for powers in grouped.values()
    )
    return reduce(lambda a, b: a.gcd(b), dense)


def _from_univariate(ring: Ring, polynomial: Any, index: int) -> Polynomial:
    width = max(len(ring.names), 1)
    terms = {}
    for power, coefficient in enumerate(polynomial.coeffs()):
        if coefficient != 0:
            exponents = [0] * width
            exponents[index] = power
            terms[tuple(exponents)] = int(coefficient)
    return ring.context.from_dict(terms)
