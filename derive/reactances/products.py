"""Coefficients as sums of products of time constants, and of time and transfer constants.

b_k is the sum over sets of k states of τ_i·τ_j^i·…, each time constant with those before it turned
(Cochrun and Grabel 1973); a_k the same with each product times what the response at low frequency
becomes with those states turned, over what it is with all at rest (Hajimiri 2010). Both papers from memory.
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import replace
from itertools import combinations

from derive.algebra.ring import Polynomial
from derive.expressions.polynomials import divide, multiply
from derive.expressions.tree import Expression, Name
from derive.reactances.cancel import multiplied
from derive.reactances.expansion import Expansion
from derive.reactances.reader import Reader, shares, times
from derive.reactances.time_constants import Coefficient, Product

# A coefficient of more products than this is no longer read product by product.
PRODUCT_LIMIT = 60
# Terms of all ratios together: reading costs some milliseconds for each.
COST_LIMIT = 180
# Up to this power products are given in any case, beyond the limit as ratios multiplied out.
ALWAYS = 2
HIGHEST = 4
# What cancels within a product is written anew where both its polynomials have no more terms than this.
SHORT = 6


def denominator_coefficients(reader: Reader, expansion: Expansion, base: int) -> Iterator[Coefficient]:
    """Give b_1, b_2, … up to b_4, as far as each is a sum of few enough products."""
    groups = expansion.bottom
    for power, sets, read in _sets(expansion, groups, base):
        products = []
        for mask in sets:
            order = order_of(expansion, base, mask)
            term = _term(reader, expansion, groups, base, mask)
            readable = term
            if read and order is not None:
                readable, cancels = multiplied(list(_chain(reader, expansion, base, order)))
                if cancels and len(groups[base | mask]) + len(groups[base]) <= SHORT:
                    readable = _whole(reader, expansion, groups, base, mask)
            elif read:
                readable = _whole(reader, expansion, groups, base, mask)
            products.append(Product(_symbols(expansion, mask, order), term, readable, None))
        yield _with_shares(reader, f"b_{power}", products)


def numerator_coefficients(reader: Reader, expansion: Expansion, base: int) -> Iterator[Coefficient]:
    """Give a_1, a_2, … up to a_4 likewise, from the response with the states of `base` turned.

    Given: what every term of the numerator has. Where that is what every term of the denominator has, the
    terms are products of time constants with the response's change; else they are the zeros' own.
    """
    groups = expansion.top
    for power, sets, read in _sets(expansion, groups, base):
        products = []
        for mask in sets:
            order = order_of(expansion, base, mask)
            term = _term(reader, expansion, groups, base, mask)
            readable = _whole(reader, expansion, groups, base, mask) if read else term
            products.append(Product(_symbols(expansion, mask, order), term, readable, None))
        yield _with_shares(reader, f"a_{power}", products)


def _symbols(expansion: Expansion, mask: int, order: tuple[int, ...] | None) -> tuple[str, ...]:
    if order is None:
        return tuple(state.symbol for state in expansion.among(mask))
    return tuple(expansion.states[place].symbol for place in order)


def order_of(expansion: Expansion, base: int, mask: int) -> tuple[int, ...] | None:
    """Give the first order of a set in which no time constant is zero, infinite or not fixed."""
    if not mask:
        return ()
    for place in reversed([place for place in range(len(expansion.states)) if mask >> place & 1]):
        rest = mask ^ 1 << place
        if base | rest in expansion.bottom and base | mask in expansion.bottom:
            before = order_of(expansion, base, rest)
            if before is not None:
                return (*before, place)
    return None


def highest_power(groups: Mapping[int, Polynomial], base: int) -> int:
    """Give the highest power of s beyond those that every term has, but four at most."""
    return min(max(mask.bit_count() for mask in groups) - base.bit_count(), HIGHEST)


def _sets(
    expansion: Expansion, groups: Mapping[int, Polynomial], base: int
) -> Iterator[tuple[int, list[int], bool]]:
    """Give each power with its sets, and whether its products are few enough to be written for reading."""
    free = [place for place in range(len(expansion.states)) if not base >> place & 1]
    cost = 0
    for power in range(1, highest_power(groups, base) + 1):
        masks = [sum(1 << place for place in chosen) for chosen in combinations(free, power)]
        sets = [mask for mask in masks if base | mask in groups]
        cost += sum(len(groups[base | mask]) + len(groups[base]) for mask in sets)
        if len(sets) > PRODUCT_LIMIT or (power > ALWAYS and cost > COST_LIMIT):
            return
        # The first are read in any case: they stand in the table of time constants.
        yield power, sets, power == 1 or cost <= COST_LIMIT


def _chain(
    reader: Reader, expansion: Expansion, base: int, order: tuple[int, ...]
) -> Iterator[Expression]:
    before = base
    for place in order:
        yield reader.time_constant(expansion, before, place)
        before |= 1 << place


def _term(
    reader: Reader, expansion: Expansion, groups: Mapping[int, Polynomial], base: int, mask: int
) -> Expression:
    above = expansion.with_symbols(groups[base | mask], mask)
    return reader.raw(*expansion.ratio(above, groups[base]))


def _whole(
    reader: Reader, expansion: Expansion, groups: Mapping[int, Polynomial], base: int, mask: int
) -> Expression:
    """Write a set's term as one ratio times its symbols."""
    found = reader.readable(*expansion.ratio(groups[base | mask], groups[base]))
    above = [Name(state.symbol) for state in expansion.among(mask) if state.kind != "op amp"]
    below = [Name(state.symbol) for state in expansion.among(mask) if state.kind == "op amp"]
    return divide(times(multiply(above), found), multiply(below))


def _with_shares(reader: Reader, name: str, products: list[Product]) -> Coefficient:
    parts = shares([reader.number(product.term) for product in products])
    return Coefficient(
        name,
        tuple(replace(product, share=share) for product, share in zip(products, parts, strict=True)),
    )
