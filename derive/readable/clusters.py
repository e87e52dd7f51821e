"""Parts that a ratio knows only as their sum, or only as their parallel combination, become one name.

A ratio Q depends on x and y through x + y alone if ∂Q/∂x = ∂Q/∂y, and through x ∥ y alone if
x²·∂Q/∂x = y²·∂Q/∂y. Both are first tried at a point modulo a prime and then proved as polynomials.
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import dataclass

from derive.algebra.modular import PRIME, residues
from derive.algebra.ring import Polynomial
from derive.quantities.dimension import (
    CAPACITANCE,
    CONDUCTANCE,
    INDUCTANCE,
    RESISTANCE,
    Dimension,
)
from derive.readable.workspace import Ratio, Workspace

# Longer ratios are not searched: the proofs would multiply them with one another.
LONGEST = 300


@dataclass(frozen=True, slots=True)
class Cluster:
    """From here on `kept` stands for kept + gone ("series") or kept ∥ gone ("parallel")."""

    kept: str
    gone: str
    way: str


def clustered(
    space: Workspace, ratio: Ratio, dimensions: Mapping[str, Dimension]
) -> tuple[Ratio, tuple[Cluster, ...]]:
    """Give the ratio with clusters as single names, and the clusters in the order in which they were made."""
    made: list[Cluster] = []
    while ratio.length <= LONGEST:
        found = next(_next(space, ratio, dimensions), None)
        if found is None:
            break
        made.append(found[0])
        ratio = found[1]
    return ratio, tuple(made)


def _next(
    space: Workspace, ratio: Ratio, dimensions: Mapping[str, Dimension]
) -> Iterator[tuple[Cluster, Ratio]]:
    names = [name for name in space.names(ratio.top, ratio.bottom) if name in dimensions]
    point = residues(max(len(space.ring.names), 1), "clusters")
    slopes = {name: _slope_at(space, ratio, name, point) for name in names}
    where = dict(zip(space.ring.names, point, strict=False))
    for index, kept in enumerate(names):
        for gone in names[index + 1 :]:
            kind = dimensions[kept]
            if kind != dimensions[gone]:
                continue
            one, other = slopes[kept], slopes[gone]
            if kind in (RESISTANCE, CAPACITANCE, INDUCTANCE, CONDUCTANCE) and one == other:
                if _same_slope(space, ratio, kept, gone, squared=False):
                    yield Cluster(kept, gone, "series"), _without(space, ratio, gone, top=False)
            elif kind in (RESISTANCE, INDUCTANCE):
                squares = (one * where[kept] ** 2 - other * where[gone] ** 2) % PRIME
                if squares == 0 and _same_slope(space, ratio, kept, gone, squared=True):
                    yield Cluster(kept, gone, "parallel"), _without(space, ratio, gone, top=True)


def _slope_at(space: Workspace, ratio: Ratio, name: str, point: list[int]) -> int:
    """Give top'·bottom − top·bottom' at a point modulo the prime."""
    index = space.ring.names.index(name)
    top, bottom = int(ratio.top(*point)), int(ratio.bottom(*point))
    first = int(ratio.top.derivative(index)(*point))
    second = int(ratio.bottom.derivative(index)(*point))
    return (first * bottom - top * second) % PRIME


def _same_slope(space: Workspace, ratio: Ratio, one: str, other: str, *, squared: bool) -> bool:
    def slope(name: str) -> Polynomial:
        index = space.ring.names.index(name)
        above, below = ratio.top.derivative(index), ratio.bottom.derivative(index)
        found = above * ratio.bottom - ratio.top * below
        return found * space.ring.generator(name) ** 2 if squared else found

    return bool(slope(one) == slope(other))


def _without(space: Workspace, ratio: Ratio, gone: str, *, top: bool) -> Ratio:
    """Give the ratio with a name at zero, or (`top`) at infinity."""
    index = space.ring.names.index(gone)
    degree = max(int(p.degrees()[index]) for p in (ratio.top, ratio.bottom)) if top else 0

    def part(polynomial: Polynomial) -> Polynomial:
        terms = {}
        for exponents, coefficient in polynomial.to_dict().items():
            if int(exponents[index]) == degree:
                terms[(*exponents[:index], 0, *exponents[index + 1 :])] = int(coefficient)
        return space.ring.context.from_dict(terms)

    return space.ratio(part(ratio.top), part(ratio.bottom), ratio.minus)
