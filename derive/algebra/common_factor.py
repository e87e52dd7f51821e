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
    shared = _content(numerator, index).gcd(_content(denominator, index))
    if shared.degree() < 1:
        return numerator, denominator
    factor = _from_univariate(ring, shared, index)
    return numerator / factor, denominator / factor


def remove_common_factor(numerator: Polynomial, denominator: Polynomial) -> tuple[Polynomial, Polynomial]:
    """Divide both by their greatest common divisor; the denominator's lead becomes positive."""
    numerator, denominator = remove_common_monomial(numerator, denominator)
    if len(numerator) > 1 and len(denominator) > 1:
        common = numerator.gcd(denominator)
        if common != 1:
            return remove_common_monomial(numerator / common, denominator / common)
    return numerator, denominator


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
