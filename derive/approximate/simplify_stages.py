"""A response at zero frequency as a product of stages, cut at nodes through which all of the signal goes.

At such a node the gain from the drive to it, times the gain from it to the output with the node held by a
source, is the whole gain. Each stage is one gain, or a transfer to a short times a resistance.
"""

from __future__ import annotations

from collections.abc import Collection, Iterable, Iterator
from dataclasses import dataclass
from math import prod

import numpy as np

from derive.approximate.simplify_network import NOWHERE, Network
from derive.approximate.simplify_quantities import Quantity, Short, short_quantity, thinned
from derive.approximate.simplify_trials import Change, Floats, matrices

# The product of the gains before and behind a cut is the whole gain but for this part of the limit.
CUT_PART = 0.05
# Of more nodes at which the signal might be cut, those of the highest resistance count.
MOST_CUTS = 4
# How many cuts a stage may pass over.
SPAN = 2
# The parts of the limit at which a quantity of a stage is written.
PARTS = (1.0, 0.7, 0.45, 0.25, 0.12)
# What moves the whole gain by less than this part of the limit is left out at once.
THIN_PART = 0.01
# A line of more terms is not read.
LONGEST_LINE = 16
# What a line costs a reader beyond its terms, and how much more a long line costs than two short ones.
LINE, POWER = 2.0, 2.0
# Errors of the stages so far are told apart to this part of the limit.
STEP = 0.05
# Rounding must not pass the limit.
TOTAL_PART = 0.98


@dataclass(frozen=True, slots=True, eq=False)
class Way:
    """A stage from one cut to the next, written as a product of quantities.

    Its ends are nodes, None for the circuit's own drive and for what the question reads.
    """

    start: int | None
    end: int | None
    quantities: tuple[Quantity, ...]
    shorts: tuple[Short, ...]

    @property
    def error(self) -> float:
        """The signed relative error of its gain."""
        return prod(1 + short.error for short in self.shorts) - 1

    @property
    def cost(self) -> float:
        """What there is to read."""
        pieces = [piece for short in self.shorts for piece in short.pieces]
        return float(sum(piece.terms**POWER + LINE for piece in pieces))


@dataclass(frozen=True, slots=True, eq=False)
class _Track:
    """The stages so far, what they cost a reader, and their error together."""

    cost: float
    error: float
    ways: tuple[Way, ...]


@dataclass(frozen=True, slots=True, eq=False)
class Solved:
    """What cuts are judged by: gains from the drive [node], and between nodes [held, node]."""

    gain: float
    from_drive: Floats
    between: dict[int, Floats]
    to_output: dict[int, float]
    resistance: dict[int, float]


def solved(network: Network) -> Solved | None:
    """Solve a network at zero frequency, as it is and with each node held; None where it has no solution."""
    constant, _, right, pick = matrices(network)
    try:
        inverse = np.linalg.inv(constant)
    except np.linalg.LinAlgError:
        return None
    state = inverse @ right
    between, to_output, resistance = {}, {}, {}
    for place, (kind, _) in enumerate(network.labels):
        own = inverse[place, place]
        # A node that a drive holds has no resistance.
        if kind != "node" or not abs(own) > 0 or not np.isfinite(own):
            continue
        held = inverse[:, place] / own
        between[place], resistance[place] = held, float(own)
        to_output[place] = float(pick @ held)
    return Solved(float(pick @ state), state, between, to_output, resistance)


@dataclass(frozen=True, slots=True, eq=False)
class Stages:
    """The stages of a network, and what was left out of it before they were looked at."""

    network: Network
    changes: tuple[Change, ...]
    ways: tuple[Way, ...]


def staged(network: Network, limit: float, through: Collection[int] = ()) -> Stages | None:
    """Give the stages of a network at zero frequency, the shortest to write of those within a limit; None for none.

    Given: nodes at which it is to be cut where that is possible.
    """
    try:
        thin, changes = thinned(network, THIN_PART * limit)
    except np.linalg.LinAlgError:
        return None
    known = solved(thin)
    if known is None or not known.gain:
        return None
    end = thin.wanted[0] if thin.wanted[1] == NOWHERE else None
    if end is not None and thin.labels[end][0] != "node":
        end = None
    places = (None, *_in_order(known, _cuts(thin, known, limit, end), limit), end)
    inner = limit * (1 - THIN_PART)
    for asked in dict.fromkeys((frozenset(through).intersection(places), frozenset[int]())):
        ways = _shortest(thin, known, places, inner, asked)
        if ways:
            return Stages(network, changes, ways)
    return None


def _cuts(network: Network, known: Solved, limit: float, end: int | None) -> list[int]:
    found = []
    for place, after in known.to_output.items():
        before = float(known.from_drive[place])
        near = abs(before * after / known.gain - 1) <= CUT_PART * limit
        # Where the voltage is that of the drive, or of the output, there is nothing before or behind it.
        trivial = min(abs(abs(before) - 1), abs(abs(after) - 1)) <= limit / 2
        if near and not trivial and place != end:
            found.append(place)
    found.sort(key=lambda place: -abs(known.resistance[place]))
    return sorted(found[:MOST_CUTS])


def _in_order(known: Solved, places: Iterable[int], limit: float) -> list[int]:
    """Order cuts along the signal: one is before another if the signal goes on from it to the other."""
    chosen = list(places)
    before = {
        place: sum(_passes(known, other, place, limit) for other in chosen if other != place)
        for place in chosen
    }
    return sorted(chosen, key=lambda place: (before[place], place))


def _passes(known: Solved, one: int, other: int, limit: float) -> bool:
    with np.errstate(all="ignore"):
        product = known.from_drive[one] * known.between[one][other] * known.to_output[other] / known.gain
    return bool(abs(product - 1) <= 2 * CUT_PART * limit)


def _shortest(
    network: Network,
    known: Solved,
    places: tuple[int | None, ...],
    limit: float,
    through: Collection[int | None],
) -> tuple[Way, ...]:
    """Give the stages from the first place to the last that are the shortest to write, errors told apart."""
    last = len(places) - 1
    best: list[dict[int, _Track]] = [{} for _ in places]
    best[0][0] = _Track(0.0, 0.0, ())
    for index in range(1, last + 1):
        for before in range(max(0, index - SPAN), index):
            start, end = places[before], places[index]
            inner = before > 0 and index < last
            if any(place in through for place in places[before + 1 : index]):
                continue
            if not best[before] or (inner and not _passes(known, start or 0, end or 0, limit)):
                continue
            for way in _ways(network, start, end, limit):
                _go_on(best[before], best[index], way, limit)
    within = [track for track in best[last].values() if abs(track.error) <= TOTAL_PART * limit]
    if not within:
        return ()
    return min(within, key=lambda track: (track.cost, abs(track.error))).ways


def _go_on(tracks: dict[int, _Track], onward: dict[int, _Track], way: Way, limit: float) -> None:
    """Take each track one stage further; of those with about the same error the cheapest is kept."""
    for track in list(tracks.values()):
        error = (1 + track.error) * (1 + way.error) - 1
        new = _Track(track.cost + way.cost, error, (*track.ways, way))
        if abs(error) > 2 * limit:
            continue
        step = round(error / (STEP * limit))
        if step not in onward or new.cost < onward[step].cost:
            onward[step] = new


def _ways(network: Network, start: int | None, end: int | None, limit: float) -> Iterator[Way]:
    """Give each way to write a stage, at each part of the limit."""
    gain = Quantity("gain", start, end)
    for short in _written(network, gain, limit):
        yield Way(start, end, (gain,), (short,))
    if end is None:
        return
    both = Quantity("transfer", start, end), Quantity("resistance", start, end)
    resistances = _written(network, both[1], limit)
    transfers = _written(network, both[0], limit) if resistances else []
    for transfer in transfers:
        for resistance in resistances:
            yield Way(start, end, both, (transfer, resistance))


def _written(network: Network, quantity: Quantity, limit: float) -> list[Short]:
    """Write a quantity at each part of the limit, as long as its lines are short enough."""
    found: list[Short] = []
    for part in PARTS:
        short = short_quantity(network, quantity, part * limit)
        if short is None or short.longest > LONGEST_LINE:
            break
        if not found or short.error != found[-1].error:
            found.append(short)
    return found
