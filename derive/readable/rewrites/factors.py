"""Factors that belong together: divider times stage, and ratios of like quantities such as 1 + R_2/R_1."""

from __future__ import annotations

from collections.abc import Iterator

from derive.algebra.ring import Polynomial
from derive.expressions.tree import Expression
from derive.readable.search import CERTAIN, Proposal, Search
from derive.readable.workspace import Ratio

NAME = "factors that belong together"
ORDER = 30


def propose(ratio: Ratio, search: Search) -> Iterator[Proposal]:
    """Write one factor above over one below as a ratio by itself, and the rest beside it."""
    space = search.space
    seen = set()

    def product(rest: Expression, part: Expression) -> Expression:
        return search.composer.product([rest, part])

    for top, bottom in _pairs(ratio, search):
        # Factors of what shares nothing share nothing, and nor does what is left.
        part = space.signed(top, bottom)
        if part.key in seen or part.top == part.bottom:
            continue
        rest = space.signed(ratio.top / part.top, ratio.bottom / part.bottom, part.minus)
        if rest.top == rest.bottom:
            continue
        if part.length >= ratio.length and rest.length >= ratio.length:
            continue
        seen.add(part.key)
        apart = not set(space.names(part.top, part.bottom)) & set(space.names(rest.top, rest.bottom))
        yield Proposal((rest, part), product, CERTAIN if apart else 0)


def _pairs(ratio: Ratio, search: Search) -> Iterator[tuple[Polynomial, Polynomial]]:
    space = search.space
    above, below = space.pieces(ratio.top), space.pieces(ratio.bottom)
    one = space.ring.one
    for top in above.sums:
        names = space.names(top)
        for name in below.powers:
            if name in names:
                yield top, space.ring.generator(name)
        for bottom in below.sums:
            if set(names) & set(space.names(bottom)):
                yield top, bottom
    for bottom in below.sums:
        for name in above.powers:
            if name in space.names(bottom):
                yield space.ring.generator(name), bottom
        if len(below.sums) > 1 or below.powers:
            yield one, bottom
    if below.powers and (above.sums or below.sums):
        for name in below.powers:
            yield one, space.ring.generator(name)
