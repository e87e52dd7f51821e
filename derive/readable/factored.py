"""Polynomials in s that come apart over the rationals, factor by factor: sections that do not load one another."""

from __future__ import annotations

from derive.algebra.ratio import coefficients, lowest_terms
from derive.algebra.ring import Polynomial, Ring
from derive.eliminate.derivation import Derivation
from derive.expressions.tree import ONE, ZERO, Expression
from derive.readable.readable import read_ratio
from derive.readable.vocabulary import Vocabulary

Factor = tuple[Expression, ...]

# Factoring of longer polynomials may take seconds.
MOST_TERMS = 400


def factored(
    derivation: Derivation, vocabulary: Vocabulary
) -> tuple[tuple[Factor, ...], tuple[Factor, ...]]:
    """Give the factors 1 + c_1·s + … of numerator and denominator; () for one that does not come apart.

    Gives: coefficients by rising power, in the fewest signs; factors of low degree first.
    """
    ring = derivation.system.ring.plain()
    if derivation.numerator == 0:
        return (), ()
    top, bottom = (
        _factors(ring, polynomial, vocabulary)
        for polynomial in (derivation.numerator, derivation.denominator)
    )
    return top, bottom


def _factors(ring: Ring, polynomial: Polynomial, vocabulary: Vocabulary) -> tuple[Factor, ...]:
    place = ring.names.index("s")
    if len(polynomial) > MOST_TERMS or polynomial.degrees()[place] < 2:
        return ()
    found: list[Factor] = []
    for factor, count in polynomial.factor()[1]:
        by_power = coefficients(ring, factor, "s")
        if max(by_power) == 0 or list(by_power) == [1]:
            # Without s, or s itself, which the normal form keeps apart.
            continue
        found += [_read(ring, by_power, vocabulary)] * int(count)
    return tuple(sorted(found, key=len)) if len(found) > 1 else ()


def _read(ring: Ring, by_power: dict[int, Polynomial], vocabulary: Vocabulary) -> Factor:
    lowest = by_power[0]
    return tuple(
        ONE
        if power == 0
        else read_ratio(ring, *lowest_terms(ring, by_power[power], lowest), vocabulary)
        if power in by_power
        else ZERO
        for power in range(max(by_power) + 1)
    )
