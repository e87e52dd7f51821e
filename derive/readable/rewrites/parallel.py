"""A part in parallel: Z = R ∥ rest, also with a factor before it."""

from __future__ import annotations

from collections.abc import Iterator

from derive.expressions.tree import Expression, Name
from derive.quantities.dimension import INDUCTANCE, RESISTANCE
from derive.readable.search import CERTAIN, Proposal, Search
from derive.readable.workspace import Ratio

NAME = "part in parallel"
ORDER = 20


def propose(ratio: Ratio, search: Search) -> Iterator[Proposal]:
    """Split off every resistance that multiplies all above the bar and part of what is below."""
    composer = search.composer
    splits = list(_splits(ratio, search))
    for name, factor, branch in splits:
        if factor.top == factor.bottom and not factor.minus:
            yield Proposal(
                (branch,), lambda branch, name=name: composer.parallel([Name(name), branch]), CERTAIN
            )
    for name, factor, branch in splits:

        def build(factor: Expression, branch: Expression, name: str = name) -> Expression:
            return composer.product([factor, composer.parallel([Name(name), branch])])

        yield Proposal((factor, branch), build)


def _splits(ratio: Ratio, search: Search) -> Iterator[tuple[str, Ratio, Ratio]]:
    """Give (name, factor, branch) with ratio = factor·(name ∥ branch)."""
    space = search.space
    for name in space.names(ratio.bottom):
        if search.dimensions.get(name) not in (RESISTANCE, INDUCTANCE):
            continue
        split = space.split(ratio.top, name)
        below = space.split(ratio.bottom, name)
        if split is None or below is None or split[0] != 0 or 0 in below:
            continue
        # top = name·others, bottom = apart + name·with_it: (others/apart)·(name ∥ apart/with_it)
        others, (apart, with_it) = split[1], below
        factor = space.ratio(others, apart)
        branch = space.ratio(apart, with_it)
        # (R_1 ∥ R_2)/R_1 says less than the divider R_2/(R_1 + R_2).
        repeated = set(space.names(factor.bottom)) & {name, *space.names(branch.top, branch.bottom)}
        if len(factor.bottom) == 1 and not repeated:
            yield name, factor, branch
