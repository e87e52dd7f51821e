"""Take out and short elements one after the other, the least harmful first, within a part of the budget."""

from __future__ import annotations

import numpy as np

from derive.approximate.simplify_measures import Measure
from derive.approximate.simplify_trials import Bench, Change

# A response that moves by less than this part of itself has not moved: rounding moves it by as much.
UNMOVED = 1e-9


def reduce_elements(bench: Bench, measure: Measure, limit: float) -> tuple[Change, ...]:
    """Change the bench element by element while the error stays below `limit` parts of the budget.

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
        measure.accept(factors[:, which])
        bench.apply(place, shorted=bool(kind))
        done.append(Change(place, bool(kind), moved < UNMOVED, error))
