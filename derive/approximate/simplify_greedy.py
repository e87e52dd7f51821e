"""Take out and short elements one after the other, the least harmful first, within a part of the budget."""

from __future__ import annotations

from collections.abc import Callable
from copy import copy

import numpy as np

from derive.approximate.simplify_measures import Measure
from derive.approximate.simplify_trials import Bench, Change

# A response that moves by less than this part of itself has not moved: rounding moves it by as much.
UNMOVED = 1e-9


class Reduction:
    """One way down, element by element, of which every limit is met by a part: the order does not depend on it."""

    def __init__(self, bench: Bench, measure: Measure) -> None:
        self.bench = bench
        self.measure = measure
        self.changes: list[Change] = []
        self.states = [(bench.there.copy(), bench.group.copy())]

    def to(self, limit: float) -> tuple[Bench, tuple[Change, ...]]:
        """Give the bench with all changes made that a limit lets, and these; it is for expansion alone."""
        if all(change.error <= limit for change in self.changes):
            for change in reduce_elements(self.bench, self.measure, limit, self._note):
                self.changes.append(change)
        count = 0
        while count < len(self.changes) and self.changes[count].error <= limit:
            count += 1
        bench = copy(self.bench)
        bench.there, bench.group = self.states[count]
        return bench, tuple(self.changes[:count])

    def _note(self) -> None:
        self.states.append((self.bench.there.copy(), self.bench.group.copy()))


def reduce_elements(
    bench: Bench, measure: Measure, limit: float, note: Callable[[], None] = lambda: None
) -> tuple[Change, ...]:
    """Change the bench element by element while the error stays below `limit` parts of the budget.

    Given: what is told of each change made.
    Raises: LinAlgError where what is left is singular, and the bench is refreshed now and then only.
    Gives the changes in order. Of changes that cost the same, an element is sooner taken out than shorted,
    and the one that stands first in the circuit goes first.
    """
    done: list[Change] = []
    while True:
        places = bench.at_work
        if not len(places):
            return tuple(done)
        trials = bench.trials(places)
        # Both kinds side by side, in one go.
        found, factors = np.concatenate(trials.responses, axis=1), np.concatenate(trials.factors, axis=1)
        costs = measure.errors(found, factors)
        which = int(np.argmin(costs))
        kind, column = divmod(which, len(places))
        error = float(costs[which])
        if not error <= limit:
            return tuple(done)
        moved = float(np.abs(found[:, which] - bench.response).max() / np.abs(bench.response).max())
        place = int(places[column])
        try:
            bench.apply(place, shorted=bool(kind))
        except np.linalg.LinAlgError:
            # Found out at once, it is this change that may not be made; else it may be one before.
            if bench.refresh_after > 1:
                raise
            bench.keep(place)
            continue
        measure.accept(factors[:, which])
        note()
        done.append(Change(place, bool(kind), moved < UNMOVED, error))
