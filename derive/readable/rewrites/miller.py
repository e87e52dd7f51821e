"""A Miller factor kept visible: R·(1 + g·R_L) + R_L, for what a capacitor between input and output sees.

Q = R + R_L·(1 + g·R) knows R twice; written as R·(1 + g·R_L) + R_L it stands once, however long it is. g may be a
transconductance or a ratio such as α/(R_E + r_e).
"""

from __future__ import annotations

from collections.abc import Iterator

from derive.algebra.ratio import lowest_terms
from derive.expressions.tree import ONE, Expression, Name
from derive.readable.rewrites.series import splits
from derive.readable.search import Proposal, Search
from derive.readable.workspace import Ratio

NAME = "Miller factor"
ORDER = 15


def propose(ratio: Ratio, search: Search) -> Iterator[Proposal]:
    """Write rest + name·(1 + g·rest) with the rest once, wherever g is simple."""
    space, composer = search.space, search.composer
    for name, rest, slope in splits(ratio, search):
        if slope.minus or rest.minus or len(rest.top) == 0:
            continue
        # g = (slope - 1)/rest; above and below share only what one fraction has above and the other below.
        above, under = lowest_terms(space.ring, slope.top - slope.bottom, rest.top)
        over, below = lowest_terms(space.ring, rest.bottom, slope.bottom)
        gain = space.signed(above * over, below * under)
        if gain.top == 0 or gain.length >= slope.length:
            continue

        def build(rest: Expression, gain: Expression, name: str = name) -> Expression:
            factor = composer.sum([ONE, composer.product([gain, Name(name)])])
            return composer.sum([composer.product([rest, factor]), Name(name)])

        yield Proposal((rest, gain), build, _bonus(name, gain, search))


def _bonus(name: str, gain: Ratio, search: Search) -> int:
    """Prefer the load at the output of g in the bracket, where lengths are equal."""
    gains = set(search.space.names(gain.top, gain.bottom)) & set(search.output_side)
    return 1 if any(name in search.output_side[found] for found in gains) else 0
