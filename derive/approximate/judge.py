"""Whether an assumption keeps within its limits, at the nominal values and at every corner."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from derive.approximate.comparison import Comparison
from derive.approximate.corners import (
    Array,
    Corners,
    Found,
    choose_corners,
    errors_at,
    ratio_at,
    sampled_hz,
    toleranced,
)
from derive.approximate.errors import Exact
from derive.approximate.register import Errors, Status, Worst
from derive.approximate.space import Ratio, Space
from derive.quantities.words import listed
from derive.topology.topology import Assumption, Budget

OPEN = "a value is left open, so it has no price"
ZERO = "at the nominal values the exact or the reduced response is zero, so it has no price"
# Rounding must not turn an error that is exactly the limit into one above it.
ROOM = 1 + 1e-9


@dataclass(frozen=True, slots=True)
class Judgement:
    """The status of an assumption, the reason for it, and the worst over the corners."""

    status: Status
    reason: str
    worst: Worst | None


def judge(
    space: Space,
    assumption: Assumption,
    comparison: Comparison | None,
    exact: Ratio,
    reduced: tuple[Ratio, Ratio | None],
    errors: tuple[Errors | None, Errors | None],
    budget: Budget,
    reference: Exact | None,
) -> Judgement:
    """Judge an assumption: within the limits together with those before it, and by itself.

    Given: the exact ratio; the ratio after it and those before it, and after it alone; their errors.
    """
    together, alone = errors
    if reference is None:
        return Judgement("not checked", OPEN, None)
    if together is None:
        return Judgement("fails", ZERO, None)
    sized = assumption.form in ("much_greater", "much_less")
    nominal = comparison.nominal(space) if comparison else None
    faults = []
    if sized and nominal is not None and nominal >= 1:
        faults.append(f"the smaller term is {nominal:.3g} times the larger")
    over = over_limits(together, budget)
    if over and alone is not None and not over_limits(alone, budget):
        over = [f"with those before it {listed(over)}"]
    faults += over
    if not faults and alone is not None and alone is not together:
        faults += [f"{words}, by itself" for words in over_limits(alone, budget)]
    names, tolerances = toleranced(space, exact)
    bench = _Bench(space, comparison, exact, reduced, budget, reference, sized)
    corners = choose_corners(space, names, tolerances, bench.usage)
    worst, where = bench.worst(corners)
    if faults:
        return Judgement("fails", listed(faults), worst)
    if where is not None:
        at = corners.said(where)
        worst = Worst(worst.ratio, worst.gain, worst.magnitude_db, worst.phase_deg, at)
        return Judgement("fails at a corner", f"{bench.fault(corners, where)}, at {listed(at)}", worst)
    return Judgement("holds", _room(together, worst, budget), worst)


def over_limits(errors: Errors | Worst, budget: Budget) -> list[str]:
    """Say of every limit that errors break by how much they do."""
    found = []
    if errors.gain is not None and abs(errors.gain) > float(budget.gain) * ROOM:
        found.append(
            f"the gain is {_percent(errors.gain)} off, limit {_percent(float(budget.gain), sign=False)}"
        )
    if abs(errors.magnitude_db) > float(budget.magnitude_db) * ROOM:
        limit = f"{float(budget.magnitude_db):.3g} dB"
        found.append(f"the magnitude is {_signed(errors.magnitude_db)} dB off, limit {limit}")
    if abs(errors.phase_deg) > float(budget.phase_deg) * ROOM:
        limit = f"{float(budget.phase_deg):.3g}°"
        found.append(f"the phase is {_signed(errors.phase_deg)}° off, limit {limit}")
    return found


def _room(errors: Errors, worst: Worst, budget: Budget) -> str:
    """Say which limit is used most, at the nominal values or at the worst corner."""
    shares = [
        (
            max(abs(errors.magnitude_db), abs(worst.magnitude_db)) / float(budget.magnitude_db),
            "magnitude",
        ),
        (max(abs(errors.phase_deg), abs(worst.phase_deg)) / float(budget.phase_deg), "phase"),
    ]
    gains = [abs(each) for each in (errors.gain, worst.gain) if each is not None]
    if gains:
        shares.append((max(gains) / float(budget.gain), "gain"))
    share, name = max(shares)
    return f"uses {100 * share:.2g} % of the limit of the {name}" if share > 1e-9 else "costs nothing"


def _percent(value: float, *, sign: bool = True) -> str:
    return f"{_signed(100 * value) if sign else f'{100 * value:.3g}'} %"


def _signed(value: float) -> str:
    return f"{'−' if value < 0 else '+'}{abs(value):.3g}"


@dataclass(frozen=True, slots=True, eq=False)
class _Bench:
    """One assumption at the corners."""

    space: Space
    comparison: Comparison | None
    exact: Ratio
    reduced: tuple[Ratio, Ratio | None]
    budget: Budget
    reference: Exact
    sized: bool

    def found(self, corners: Corners) -> list[Found]:
        """Give the errors at the corners, of the assumption with those before it, and by itself."""
        named = [hertz for _, hertz in self.reference.named]
        frequencies = sampled_hz(self.reference.range_hz, named)
        together, alone = self.reduced
        ratios = [together] if alone is None or alone is together else [together, alone]
        return [errors_at(self.space, ratio, self.exact, corners, frequencies) for ratio in ratios]

    def ratio(self, corners: Corners) -> Array | None:
        """Give the ratio of smaller to larger at the corners."""
        if self.comparison is None:
            return None
        return ratio_at(self.space, self.comparison.above, self.comparison.below, corners)

    def usage(self, corners: Corners) -> Array:
        """Give for each corner the share used of the limit that is used most."""
        return self._usage(self.found(corners), self.ratio(corners), corners)

    def _usage(self, found: list[Found], ratio: Array | None, corners: Corners) -> Array:
        used = np.zeros(corners.count)
        for each in found:
            used = np.maximum(used, np.abs(each.magnitude_db) / float(self.budget.magnitude_db))
            used = np.maximum(used, np.abs(each.phase_deg) / float(self.budget.phase_deg))
            if each.gain is not None:
                used = np.maximum(used, np.abs(each.gain) / float(self.budget.gain))
        if self.sized and ratio is not None:
            # A term that is not even smaller breaks the assumption, whatever it costs.
            used = np.maximum(used, np.where(ratio >= 1, np.maximum(ratio, 2 * ROOM), 0))
        return used

    def worst(self, corners: Corners) -> tuple[Worst, int | None]:
        """Give the worst of each error over the corners, and the corner that breaks a limit, if any."""
        found, ratio = self.found(corners), self.ratio(corners)
        together = found[0]
        worst = Worst(
            None if ratio is None else float(np.max(ratio)),
            None if together.gain is None else _largest(together.gain),
            _largest(together.magnitude_db),
            _largest(together.phase_deg),
        )
        used = self._usage(found, ratio, corners)
        place = int(np.argmax(np.round(used, 9)))
        return worst, place if used[place] > ROOM else None

    def fault(self, corners: Corners, place: int) -> str:
        """Say which limits a corner breaks."""
        ratio = self.ratio(corners)
        said = []
        if self.sized and ratio is not None and ratio[place] >= 1:
            said.append(f"the smaller term is {float(ratio[place]):.3g} times the larger")
        for index, each in enumerate(self.found(corners)):
            there = Worst(
                None,
                None if each.gain is None else float(each.gain[place]),
                float(each.magnitude_db[place]),
                float(each.phase_deg[place]),
            )
            said += [
                words + (", by itself" if index else "") for words in over_limits(there, self.budget)
            ]
            if said:
                break
        return listed(said)


def _largest(values: Array) -> float:
    return float(values[int(np.argmax(np.abs(values)))])
