"""Compares stages: derives one quantity of each with its checks, and what its two ports look like."""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence
from dataclasses import dataclass, replace
from functools import partial

from derive.check.verdict import Outcome, Solution
from derive.compare.at_mid_band import bandwidth_of, level_at, mid_frequency, response_of
from derive.compare.choose import choose, dimension_of
from derive.compare.comparison import Comparison, Level, Stage
from derive.compare.ports import input_impedance, output_impedance
from derive.normalise.band_edges import response_in
from derive.normalise.exact_response import ExactResponse
from derive.pipeline import derive
from derive.quantities.dimension import RATIO
from derive.response.curves import curve_of, range_of
from derive.topology.topology import BandName, Find, Topology

# The band that stands for the mid band, and those that know the edges: the first that a stage has.
MID: tuple[BandName, ...] = ("mid", "full", "high", "low")
LOW_EDGE: tuple[BandName, ...] = ("low", "full", "mid")
HIGH_EDGE: tuple[BandName, ...] = ("high", "full", "mid")


@dataclass(frozen=True, slots=True)
class _Worked:
    """A stage before its curve, whose range depends on the others, with the response to be drawn."""

    stage: Stage
    response: ExactResponse | None


def compare(
    topologies: Sequence[Topology],
    names: Sequence[str],
    find: str | None = None,
    tell: Callable[[str, str], None] = lambda name, stage: None,
) -> Comparison:
    """Derive and check what is compared of each topology, and set it side by side.

    Given: a `name` for each topology; `find` as in `choose`; `tell` is told each stage of the work.
    Raises: InputError, TooLargeError or SingularError where a topology cannot be compared.
    """
    chosen = choose(topologies, find)
    worked = [
        _work(topology, name, wanted, partial(tell, name))
        for topology, name, wanted in zip(topologies, names, chosen, strict=True)
    ]
    stages = [item.stage for item in worked]
    span = range_of(
        [(stage.low_hz, stage.high_hz) for stage in stages],
        [stage.gain_bandwidth_hz for stage in stages if stage.gain_bandwidth_hz],
        [corner for item in worked if item.response for corner in item.response.corners_hz],
    )
    return Comparison(tuple(_with_curve(item, span) for item in worked), find)


def _work(topology: Topology, name: str, find: Find, tell: Callable[[str], None]) -> _Worked:
    outcome = derive(topology, other_engine=False, only=find.name, hand=False, progress=tell).outcome
    by_band = {result.solution.band_name: result.solution for result in outcome.results}
    main = next(by_band[band] for band in MID if band in by_band)
    at_hertz = mid_frequency(main)
    response = response_of(main)
    gain = None if response is None else level_at(response, at_hertz)
    low, high = _edge(by_band, LOW_EDGE, 0), _edge(by_band, HIGH_EDGE, 1)
    dimension = dimension_of(find, topology)
    tell("deriving its impedances")
    seen, past = input_impedance(outcome.circuit, find, main.band_name, at_hertz)
    stage = Stage(
        name,
        topology,
        outcome,
        find,
        dimension,
        main,
        at_hertz,
        gain,
        low,
        high,
        _product(gain, high) if dimension == RATIO else None,
        seen,
        past,
        output_impedance(outcome.circuit, find, main.band_name, at_hertz),
        remarks=_remarks(outcome, gain, by_band),
    )
    whole = response_in(outcome.circuit, "full", find)
    return _Worked(stage, whole or response)


def _edge(by_band: dict[BandName, Solution], order: Sequence[BandName], side: int) -> float | None:
    """Give an edge of the pass band from the band that knows it."""
    solution = next((by_band[band] for band in order if band in by_band), None)
    bandwidth = None if solution is None else bandwidth_of(solution)
    return None if bandwidth is None else (bandwidth.low_hz, bandwidth.high_hz)[side]


def _product(gain: Level | None, high_hz: float | None) -> float | None:
    if gain is None or high_hz is None or math.isinf(gain.magnitude) or gain.magnitude == 0:
        return None
    return gain.magnitude * high_hz


def _remarks(outcome: Outcome, gain: Level | None, by_band: dict[BandName, Solution]) -> tuple[str, ...]:
    """Say what a reader of the figures must know."""
    found = []
    if any(result.solution.numbers is None for result in outcome.results):
        found.append("a value was left open, so that there are no figures and no curve")
    elif gain is not None and (math.isinf(gain.magnitude) or gain.magnitude == 0):
        found.append("there is no band in which the response is constant")
    for band, solution in by_band.items():
        if band != "mid" and solution.estimates is not None and solution.numbers is not None:
            bandwidth = solution.estimates.bandwidth
            words = bandwidth.remark if bandwidth else solution.estimates.remark
            found += [f"{band} band: {words}" if len(by_band) > 1 else words] if words else []
    return tuple(found)


def _with_curve(item: _Worked, span: tuple[float, float]) -> Stage:
    if item.response is None:
        return item.stage
    return replace(item.stage, curve=curve_of(item.response, span, _middle(item.stage, span)))


def _middle(stage: Stage, span: tuple[float, float]) -> float:
    """Give a frequency within the pass band."""
    low, high = stage.low_hz or span[0], stage.high_hz or span[1]
    return math.sqrt(low) * math.sqrt(high)
