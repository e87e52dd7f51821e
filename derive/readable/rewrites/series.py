"""A part in series, as often as it counts: Z = R + rest, or r_π + (1 + β)·R_E."""

from __future__ import annotations

from collections.abc import Iterator

from derive.expressions.tree import Expression, Name
from derive.quantities.dimension import CAPACITANCE, INDUCTANCE
from derive.readable.search import CERTAIN, Proposal, Search
from derive.readable.workspace import Ratio

NAME = "part in series"
ORDER = 10


def propose(ratio: Ratio, search: Search) -> Iterator[Proposal]:
    """Split off every name that stands above the fraction bar only, to the first power."""
    composer = search.composer
    found = list(splits(ratio, search))
    for name, rest, slope in found:
        if slope.top == slope.bottom and not slope.minus:
            yield Proposal((rest,), lambda rest, name=name: composer.sum([Name(name), rest]), CERTAIN)
    for name, rest, slope in found:

        def build(slope: Expression, rest: Expression, name: str = name) -> Expression:
            return composer.sum([composer.product([Name(name), slope]), rest])

        yield Proposal((slope, rest), build, _miller_bonus(slope, search))


def splits(ratio: Ratio, search: Search) -> Iterator[tuple[str, Ratio, Ratio]]:
    """Give (name, rest, slope) with ratio = rest + name·slope; reactances before resistances."""
    space = search.space
    below = set(space.names(ratio.bottom))
    above = [name for name in space.names(ratio.top) if name not in below]
    reactances = [name for name in above if search.dimensions.get(name) in (CAPACITANCE, INDUCTANCE)]
    for name in reactances or above:
        split = space.split(ratio.top, name)
        if split is not None and split[0] != 0:
            yield (
                name,
                space.ratio(split[0], ratio.bottom),
                space.ratio(split[1], ratio.bottom),
            )


def _miller_bonus(slope: Ratio, search: Search) -> int:
    """Prefer R·(1 + g_m·R_L) + R_L, with the load at the output of g_m in the bracket, where lengths are equal."""
    names = set(search.space.names(slope.top, slope.bottom))
    for gain in search.output_side:
        if gain in names and names - {gain} <= search.output_side[gain]:
            return 1
    return 0
