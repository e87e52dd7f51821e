"""Limits of an exact ratio: a symbol goes to infinity or to zero, another one takes its place."""

from __future__ import annotations

from collections.abc import Mapping

from derive.algebra.ratio import coefficients
from derive.algebra.ring import Polynomial, Ring
from derive.approximate.space import Ratio, Space
from derive.expressions.tree import Expression


def leading(ring: Ring, polynomial: Polynomial, weights: Mapping[str, int]) -> tuple[int, Polynomial]:
    """Give the highest weight of a polynomial's terms, and the terms that have it.

    A term weighs the sum over its names of power times weight.
    """
    places = [(ring.names.index(name), weight) for name, weight in weights.items()]
    heaviest: int | None = None
    kept: dict[tuple[int, ...], int] = {}
    for exponents, coefficient in polynomial.to_dict().items():
        weight = sum(int(exponents[place]) * each for place, each in places)
        if heaviest is None or weight > heaviest:
            heaviest, kept = weight, {}
        if weight == heaviest:
            kept[tuple(map(int, exponents))] = int(coefficient)
    return heaviest or 0, ring.context.from_dict(kept)


def limit(space: Space, ratio: Ratio, weights: Mapping[str, int]) -> tuple[Ratio | None, int]:
    """Give the limit of a ratio as λ → ∞ with every name multiplied by λ to the power of its weight.

    Gives: the limit and 0; or None and 1 where it is infinite, None and −1 where it is zero.
    """
    above, top = leading(space.ring, ratio.top, weights)
    below, bottom = leading(space.ring, ratio.bottom, weights)
    if above != below:
        return None, 1 if above > below else -1
    return space.ratio(top, bottom), 0


def replaced(space: Space, ratio: Ratio, name: str, by: Expression) -> Ratio | None:
    """Put an expression in the place of a name; None where that leaves zero over zero or the like."""
    above, below = space.polynomials_of(by)
    return replaced_by(space, ratio, name, above, below)


def replaced_by(
    space: Space, ratio: Ratio, name: str, above: Polynomial, below: Polynomial
) -> Ratio | None:
    """Put above/below in the place of a name."""
    place = space.ring.names.index(name)
    degree = max(int(p.degrees()[place]) for p in (ratio.top, ratio.bottom) if p != 0)
    powers = [(above**k) * (below ** (degree - k)) for k in range(degree + 1)]
    top, bottom = (_composed(space.ring, p, name, powers) for p in (ratio.top, ratio.bottom))
    if bottom == 0 or top == 0:
        return None
    return space.ratio(top, bottom)


def _composed(ring: Ring, polynomial: Polynomial, name: str, powers: list[Polynomial]) -> Polynomial:
    total = ring.zero
    for power, part in coefficients(ring, polynomial, name).items():
        total = total + part * powers[power]
    return total


def unmerged(space: Space, ratio: Ratio, name: str) -> Ratio:
    """Write out the merged names that a part stands in, so that the part itself stands in the ratio."""
    for merged in reversed(space.merged):
        if merged.name in space.names(ratio) and name in _members(space, merged.name):
            found = replaced(space, ratio, merged.name, merged.definition)
            ratio = ratio if found is None else found
    return ratio


def _members(space: Space, name: str) -> set[str]:
    """Give every name that a merged name is made of, directly or through others."""
    found: set[str] = set()
    for merged in space.merged:
        if merged.name == name:
            for part in merged.parts:
                found |= {part} | _members(space, part)
    return found
