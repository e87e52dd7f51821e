"""A ratio close to one as 1/(1 + small), and an amplifier's ideal result times its correction."""

from __future__ import annotations

from collections.abc import Iterator

from derive.expressions.tree import ONE, Expression, Name
from derive.readable.search import AMPLIFIER_BONUS, Proposal, Search
from derive.readable.workspace import Ratio

NAME = "one plus a rest"
ORDER = 40


def propose(ratio: Ratio, search: Search) -> Iterator[Proposal]:
    """Write x/(x + y) as 1/(1 + y/x), (x + y)/x as 1 + y/x, and A·x/(y + A·z) as (x/z)/(1 + y/(A·z))."""
    space, composer = search.space, search.composer
    rest = ratio.bottom - ratio.top
    if len(rest) == len(ratio.bottom) - len(ratio.top):
        small = space.ratio(rest, ratio.top)
        yield Proposal((small,), lambda small: composer.quotient(ONE, composer.sum([ONE, small])))
    elif len(rest) == len(ratio.top) - len(ratio.bottom):
        more = space.ratio(-rest, ratio.bottom)
        yield Proposal((more,), lambda more: composer.sum([ONE, more]))
    for name in space.names(ratio.top, ratio.bottom):
        if name not in search.amplifiers:
            continue
        above, below = space.split(ratio.top, name), space.split(ratio.bottom, name)
        if above is None or below is None or above[0] != 0 or 0 in (*below, above[1]):
            continue

        def ideal(ideal: Expression, inverse: Expression, name: str = name) -> Expression:
            correction = composer.sum([ONE, composer.quotient(inverse, Name(name))])
            return composer.quotient(ideal, correction)

        parts = space.ratio(above[1], below[1]), space.ratio(below[0], below[1])
        yield Proposal(parts, ideal, AMPLIFIER_BONUS)
