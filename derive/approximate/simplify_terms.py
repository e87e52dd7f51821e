"""Drop terms of a numerator and a denominator, the smallest first, as long as the error allows it."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from fractions import Fraction
from typing import Any

import numpy as np
import numpy.typing as npt

from derive.algebra.ring import Polynomial, Ring
from derive.approximate.simplify_measures import Measure
from derive.approximate.simplify_trials import Complex, Floats

Term = tuple[tuple[int, ...], int]
Kept = npt.NDArray[np.bool_]

# Up to this many terms, each is tried on its own; of more, the smallest go together first.
ONE_BY_ONE = 80
# What those that go together may use of the budget, again and again as long as there are more.
TOGETHER = (0.5, 0.7, 0.8, 0.9, 0.95)
# Of so many that are left after that, one less makes nothing readable.
HOPELESS = 400


@dataclass(frozen=True, slots=True, eq=False)
class Terms:
    """The terms of a polynomial: keys, values at nominal, and powers of s."""

    ring: Ring
    keys: tuple[Term, ...]
    values: Floats
    powers: npt.NDArray[np.intp]

    def at(self, samples: Complex) -> Complex:
        """Give each term's value at each sample: [sample, term]."""
        result: Complex = self.values * samples[:, None] ** self.powers
        return result

    def polynomial(self, kept: Kept) -> Polynomial:
        """Give the polynomial of the terms kept."""
        chosen = {key: number for (key, number), keep in zip(self.keys, kept, strict=True) if keep}
        return self.ring.context.from_dict(chosen)


def terms_of(ring: Ring, polynomial: Polynomial, values: Mapping[str, Fraction]) -> Terms:
    """Give a polynomial's terms, by rising powers of s and then as they stand."""
    place = ring.names.index("s")
    keys = sorted(
        ((tuple(map(int, key)), int(number)) for key, number in polynomial.to_dict().items()),
        key=lambda term: term[0][place],
    )
    exponents = np.array([key for key, _ in keys], dtype=float).reshape(len(keys), len(ring.names))
    sizes = np.array([float(values[name]) if name != "s" else 1.0 for name in ring.names])
    numbers = np.array([float(number) for _, number in keys])
    with np.errstate(divide="ignore", invalid="ignore"):
        found = np.where(exponents == 0, 1.0, sizes**exponents).prod(axis=1) * numbers
    return Terms(ring, tuple(keys), found, np.array([key[place] for key, _ in keys], dtype=np.intp))


def drop_terms(
    top: Terms, bottom: Terms, samples: Complex, measure: Measure, limit: float
) -> tuple[Kept, Kept, float]:
    """Give which terms of top/bottom are kept, and the error without the others.

    Given: the values of s at which the measure counts, and the parts of the budget that may be used.
    """
    desk = _Desk(top, bottom, samples, measure)
    for part in TOGETHER:
        if desk.kept.sum() > ONE_BY_ONE:
            desk.drop_together(limit * part)
    if desk.kept.sum() <= HOPELESS:
        desk.drop_one_by_one(limit)
    count = len(top.keys)
    return desk.kept[:count], desk.kept[count:], desk.error(desk.kept)


class _Desk:
    def __init__(self, top: Terms, bottom: Terms, samples: Complex, measure: Measure) -> None:
        self.measure = measure
        self.count = len(top.keys)
        self.parts: Complex = np.concatenate([top.at(samples), bottom.at(samples)], axis=1)
        self.kept = np.ones(self.parts.shape[1], dtype=bool)
        self.above = np.arange(self.parts.shape[1]) < self.count

    def sums(self, kept: Kept) -> tuple[Complex, Complex]:
        above = self.parts[:, kept & self.above].sum(axis=1)
        return above, self.parts[:, kept & ~self.above].sum(axis=1)

    def error(self, kept: Kept) -> float:
        above, below = self.sums(kept)
        with np.errstate(all="ignore"):
            response = (above / below)[:, None]
        return float(self.measure.errors(response, np.ones_like(response))[0])

    def drop_together(self, limit: float) -> None:
        """Drop as many of the smallest terms at once as stay within the limit, found by halving."""
        above, below = self.sums(self.kept)
        whole = np.where(self.above, above[:, None], below[:, None])
        with np.errstate(all="ignore"):
            size = np.nan_to_num(np.abs(self.parts / whole), nan=np.inf).max(axis=0)
        order = np.argsort(np.where(self.kept, size, np.inf), kind="stable")[: self.kept.sum()]
        fewest, most = 0, len(order)
        while fewest < most:
            middle = (fewest + most + 1) // 2
            if self.error(self._without(order[:middle])) <= limit:
                fewest = middle
            else:
                most = middle - 1
        self.kept = self._without(order[:fewest])

    def _without(self, dropped: Any) -> Kept:
        kept = self.kept.copy()
        kept[dropped] = False
        return kept

    def drop_one_by_one(self, limit: float) -> None:
        """Drop the term that costs least, again and again."""
        while True:
            above, below = self.sums(self.kept)
            places = np.flatnonzero(self.kept)
            part = self.parts[:, places]
            with np.errstate(all="ignore"):
                tried = np.where(
                    self.above[places],
                    (above[:, None] - part) / below[:, None],
                    above[:, None] / (below[:, None] - part),
                )
            costs = self.measure.errors(tried, np.ones_like(tried))
            best = int(np.argmin(costs))
            if not costs[best] <= limit:
                return
            self.kept[places[best]] = False
