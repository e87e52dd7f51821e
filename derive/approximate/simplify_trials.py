"""Every element taken out, and every one shorted, on trial and at once: changes of rank one.

With A⁻¹ known at some values of s, adding d·u·vᵀ to A changes the response cᵀA⁻¹b by
−d·(cᵀA⁻¹u)(vᵀA⁻¹b)/(1 + d·vᵀA⁻¹u), and the determinant by the factor 1 + d·vᵀA⁻¹u
(Sherman and Morrison 1950; matrix determinant lemma; both from memory). An element is taken out by d = −x
and shorted by letting d grow without limit.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np
import numpy.typing as npt

from derive.approximate.simplify_network import NOWHERE, Network

Complex = npt.NDArray[np.complexfloating[Any, Any]]
Floats = npt.NDArray[np.float64]
Whole = npt.NDArray[np.intp]

# A change whose denominator cancels further than this leaves the circuit singular, or nearly so.
SINGULAR = 1e-10
# After as many changes the inverse is worked afresh, so that rounding does not add up.
REFRESH = 16


@dataclass(frozen=True, slots=True)
class Change:
    """An element taken out (its value to zero in the matrix), or shorted.

    `place` is its stamp. `idle` says that the response did not change by it: a consequence, no assumption.
    `error` is the error of the response after it, in parts of the budget.
    """

    place: int
    shorted: bool
    idle: bool
    error: float


@dataclass(frozen=True, slots=True)
class Trials:
    """Responses and factors of the determinant, [taken out or shorted, sample, stamp]; NaN where singular."""

    responses: Complex
    factors: Complex


class Bench:
    """A network at sampled values of s, which is changed element by element.

    `factors` [sample, stamp] varies the stamps' values from sample to sample.
    """

    def __init__(self, network: Network, samples: Complex, factors: Floats | None = None) -> None:
        self.network = network
        self.samples = samples
        stamps = network.stamps
        size = network.size
        self.rows = _places([stamp.rows for stamp in stamps], size)
        self.columns = _places([stamp.columns for stamp in stamps], size)
        self.values = np.array(network.sizes)
        powers = np.array([stamp.power for stamp in stamps])
        self.at_samples: Complex = self.values * np.where(powers == 1, samples[:, None], 1)
        if factors is not None:
            self.at_samples = self.at_samples * factors
        self.there = np.ones(len(stamps), dtype=bool)
        self.removable = np.array([stamp.removable for stamp in stamps])
        self.shortable = np.array([stamp.shortable for stamp in stamps])
        self.group: Whole = np.arange(size + 1)
        self.right = np.zeros(size + 1)
        for row, value in network.right:
            self.right[row] = float(value)
        self.wanted = tuple(size if place == NOWHERE else place for place in network.wanted)
        self.changes = 0
        self.refresh_after = REFRESH
        self.refresh()

    def refresh(self) -> None:
        """Work the inverse afresh from what is left."""
        size, group, there = self.network.size, self.group, self.there
        leaders = np.unique(group[group < size])
        leaders = leaders[leaders != group[size]]
        place = np.full(size + 1, len(leaders))
        place[leaders] = np.arange(len(leaders))
        place = place[group]
        width = len(leaders) + 1
        matrix = np.zeros((len(self.samples), width * width), dtype=complex)
        rows, columns = place[self.rows[:, there]], place[self.columns[:, there]]
        values = self.at_samples[:, there]
        for one, first in ((0, 1), (1, -1)):
            for other, second in ((0, 1), (1, -1)):
                flat = rows[one] * width + columns[other]
                _add_at(matrix, flat, first * second * values)
        cut = matrix.reshape(-1, width, width)[:, :-1, :-1]
        inverse = np.zeros((len(self.samples), width, width), dtype=complex)
        inverse[:, :-1, :-1] = np.linalg.inv(cut)
        self.inverse: Complex = inverse[:, place[:, None], place[None, :]]
        self._read()

    def _read(self) -> None:
        plus, minus = self.wanted
        self.across: Complex = self.inverse[:, plus, :] - self.inverse[:, minus, :]
        self.solution: Complex = self.inverse @ self.right
        self.response: Complex = self.solution[:, plus] - self.solution[:, minus]

    @property
    def at_work(self) -> Whole:
        """The stamps that may still be taken out or shorted."""
        return np.flatnonzero(self.there & (self.removable | self.shortable))

    def trials(self, places: Whole) -> Trials:
        """Try every change of the stamps at `places`."""
        inverse = self.inverse
        (a, b), (c, d) = self.rows[:, places], self.columns[:, places]
        driving = self.across[:, a] - self.across[:, b]
        sensing = self.solution[:, c] - self.solution[:, d]
        loop = inverse[:, c, a] - inverse[:, c, b] - inverse[:, d, a] + inverse[:, d, b]
        x = self.at_samples[:, places]
        product = driving * sensing
        out, shorted = 1 - x * loop, x * loop
        with np.errstate(all="ignore"):
            responses = np.stack(
                [self.response[:, None] + x * product / out, self.response[:, None] - product / loop]
            )
        factors = np.stack([out, shorted])
        bad = (np.abs(factors) < SINGULAR).any(axis=1)
        bad |= ~np.stack([self.removable[places], self.shortable[places]])
        responses = np.where(bad[:, None, :], np.nan, responses)
        return Trials(responses, factors)

    def apply(self, place: int, *, shorted: bool) -> None:
        """Carry out one change; what a short leaves between two joined nodes goes with it.

        Raises: LinAlgError where what is left turns out to be singular; the bench is then as it was.
        """
        (a, b), (c, d) = self.rows[:, place], self.columns[:, place]
        driven = self.inverse[:, :, a] - self.inverse[:, :, b]
        sensed = self.inverse[:, c, :] - self.inverse[:, d, :]
        loop = driven[:, c] - driven[:, d]
        x = self.at_samples[:, place]
        factor = -1 / loop if shorted else x / (1 - x * loop)
        before = self.there.copy(), self.group.copy()
        self.there[place] = False
        if shorted:
            joined = sorted((int(self.group[c]), int(self.group[d])))
            # Ground, the last of all, leads every group that it is in.
            leader = joined[1] if joined[1] == self.group[self.network.size] else joined[0]
            self.group[(self.group == joined[0]) | (self.group == joined[1])] = leader
            self._leave_out_the_dead()
        self.changes += 1
        if self.changes % self.refresh_after == 0:
            try:
                self.refresh()
            except np.linalg.LinAlgError:
                self.there, self.group = before
                raise
            return
        self.inverse = self.inverse + factor[:, None, None] * driven[:, :, None] * sensed[:, None, :]
        self._read()

    def keep(self, place: int) -> None:
        """Try no more changes of a stamp."""
        self.removable[place] = self.shortable[place] = False

    def _leave_out_the_dead(self) -> None:
        rows, columns = self.group[self.rows], self.group[self.columns]
        dead = (rows[0] == rows[1]) | (columns[0] == columns[1])
        self.there &= ~dead

    def determinants(self) -> tuple[Complex, Floats]:
        """Give the determinant of what is left at each sample, as a sign and a logarithm of its size."""
        size, there = self.network.size, self.there
        matrix = np.zeros((len(self.samples), (size + 1) ** 2), dtype=complex)
        for one, first in ((0, 1), (1, -1)):
            for other, second in ((0, 1), (1, -1)):
                flat = self.rows[one, there] * (size + 1) + self.columns[other, there]
                _add_at(matrix, flat, first * second * self.at_samples[:, there])
        cut = matrix.reshape(-1, size + 1, size + 1)[:, :-1, :-1]
        sign, logarithm = np.linalg.slogdet(cut)
        return sign, logarithm


def _places(pairs: list[tuple[int, int]], size: int) -> Whole:
    """Give the first and the second of each pair, ground as the last place of all."""
    table = np.array(pairs, dtype=np.intp).reshape(-1, 2).T
    return np.where(table == NOWHERE, size, table)


def _add_at(matrix: Complex, flat: Whole, values: Complex) -> None:
    """Add columns of values to columns of the matrix, several to one where they meet."""
    order = np.argsort(flat, kind="stable")
    places, starts = np.unique(flat[order], return_index=True)
    if len(places):
        matrix[:, places] += np.add.reduceat(values[:, order], starts, axis=1)


def matrices(network: Network) -> tuple[Floats, Floats, Floats, Floats]:
    """Give constant and rising part of a network's matrix, its right side, and what picks the response."""
    size = network.size
    width = size + 1
    rows = _places([stamp.rows for stamp in network.stamps], size)
    columns = _places([stamp.columns for stamp in network.stamps], size)
    values = np.array(network.sizes)
    rising = np.array([stamp.power == 1 for stamp in network.stamps], dtype=bool)
    parts: list[Floats] = []
    for chosen in (~rising, rising):
        flat: Complex = np.zeros((1, width * width), dtype=complex)
        for one, first in ((0, 1), (1, -1)):
            for other, second in ((0, 1), (1, -1)):
                places = rows[one, chosen] * width + columns[other, chosen]
                _add_at(flat, places, first * second * values[None, chosen])
        parts.append(np.real(flat).astype(np.float64).reshape(width, width)[:-1, :-1])
    right, pick = np.zeros(size), np.zeros(width)
    for row, value in network.right:
        right[row] = float(value)
    for place, sign in zip(network.wanted, (1, -1), strict=True):
        pick[place] += sign
    return parts[0], parts[1], right, pick[:-1]


def responses(network: Network, samples: Complex) -> Complex:
    """Give a network's response at each sample, by one stack of equations.

    Raises: LinAlgError where it is singular.
    """
    constant, rising, right, pick = matrices(network)
    stack: Complex = constant + samples[:, None, None] * rising
    solution = np.linalg.solve(stack, right[:, None])[:, :, 0]
    result: Complex = solution @ pick
    return result
