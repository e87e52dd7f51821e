"""The exchange of inverted generators for the names that they stand for."""

from __future__ import annotations

from collections.abc import Sequence

from derive.algebra.ring import Polynomial, Ring


def exchange(ring: Ring, polynomials: Sequence[Polynomial]) -> tuple[list[Polynomial], Polynomial]:
    """Multiply polynomials by the least monomial that leaves no reciprocal, and write them so.

    Given: polynomials over `ring`. Gives: polynomials over `ring.plain()`, in the same order, and
    the monomial, over `ring.plain()`, that they were multiplied by.
    """
    places = [index for index, name in enumerate(ring.names) if name in ring.inverted]
    highest = dict.fromkeys(places, 0)
    for polynomial in polynomials:
        if polynomial != 0:
            degrees = polynomial.degrees()
            for place in places:
                highest[place] = max(highest[place], degrees[place])
    monomial = ring.monomial({ring.names[place]: power for place, power in highest.items()})
    if not any(highest.values()):
        return list(polynomials), monomial
    turned = [place for place, power in highest.items() if power]
    return [_turn(ring, polynomial, turned, highest) for polynomial in polynomials], monomial


def _turn(ring: Ring, polynomial: Polynomial, places: list[int], highest: dict[int, int]) -> Polynomial:
    terms = {}
    for exponents, coefficient in polynomial.to_dict().items():
        turned = list(exponents)
        for place in places:
            turned[place] = highest[place] - exponents[place]
        terms[tuple(turned)] = int(coefficient)
    return ring.context.from_dict(terms)
