"""A divider before a stage: d = D_1·(x + D_0/D_1), as Thévenin's theorem turns source and bias into one.

R_B·(1 + β)·R_E over (R_S + R_B)·(r_π + (1 + β)·R_E) + R_S·R_B becomes the divider R_B/(R_S + R_B) times
(1 + β)·R_E/(R_S ∥ R_B + r_π + (1 + β)·R_E).
"""

from __future__ import annotations

from collections.abc import Iterator

from derive.expressions.tree import ONE, Expression
from derive.readable.search import Proposal, Search
from derive.readable.workspace import Ratio

NAME = "divider before a stage"
ORDER = 50


def propose(ratio: Ratio, search: Search) -> Iterator[Proposal]:
    """Draw the factor of a name below the bar out of all that is below, where it is a sum."""
    space, composer = search.space, search.composer
    if len(space.pieces(ratio.bottom).sums) != 1:
        return
    tried = set()

    def stage(above: Expression, under: Expression) -> Expression:
        return composer.product([above, composer.quotient(ONE, under)])

    for name in space.names(ratio.bottom):
        below = space.split(ratio.bottom, name)
        if below is None or 0 in below or len(below[1]) < 2:
            continue
        for factor in space.pieces(below[1]).sums:
            key = str(factor)
            if key in tried or len(factor) >= len(ratio.bottom) // 2:
                continue
            tried.add(key)
            parts = space.ratio(ratio.top, factor), space.ratio(ratio.bottom, factor)
            yield Proposal(parts, stage)
