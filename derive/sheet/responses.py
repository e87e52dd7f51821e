"""The responses of one quantity as the plots show them: the whole circuit, its bands, what assumptions leave of it."""

from __future__ import annotations

import math
from dataclasses import dataclass
from fractions import Fraction
from functools import lru_cache

from derive.bands.restrict import find_in, restrict
from derive.check.verdict import Outcome, Solution
from derive.devices.elements import SmallSignal
from derive.normalise.exact_response import ExactResponse, exact_response
from derive.quantities.dimension import Dimension
from derive.response.curves import curve_of, range_of
from derive.response.tolerance import tolerance_span
from derive.response.traces import Span, Trace
from derive.sheet.view import View, gain_dimension, views
from derive.topology.topology import Find

WHOLE = "whole circuit"
SPAN_POINTS = 61
# A number with more figures than a float has been rounded long before it is drawn.
LARGEST = 1e300


@dataclass(frozen=True, slots=True)
class Shown:
    """One quantity's traces, the exact one first; None for a span where no part has a tolerance.

    `edges` are the −3 dB frequencies in Hz, `mid_hz` a frequency in the pass band.
    """

    name: str
    find: Find
    dimension: Dimension
    traces: tuple[Trace, ...]
    span: Span | None
    edges: tuple[float, ...]
    mid_hz: float

    @property
    def whole(self) -> ExactResponse:
        """The exact response of the whole circuit."""
        return self.traces[0].response


def shown_responses(outcome: Outcome) -> tuple[Shown, ...]:
    """Give the responses of every quantity that has one at the nominal values, in the order of the file."""
    found = []
    for find in outcome.circuit.topology.finds:
        own = [view for view in views(outcome) if view.name == find.name]
        whole = _whole(outcome.circuit, find) if own else None
        if whole is not None and not whole.is_zero and _sized(whole):
            found.append(_shown(outcome, find, own, whole))
    return tuple(found)


@lru_cache(maxsize=16)
def _whole(circuit: SmallSignal, find: Find) -> ExactResponse | None:
    # The supplies are signal ground in the full band; nothing else of the circuit is changed there.
    full = restrict(circuit, "full")
    return exact_response(full.unmerged, find_in(full, find))


@lru_cache(maxsize=16)
def _span(circuit: SmallSignal, find: Find, hertz: tuple[float, ...]) -> Span | None:
    full = restrict(circuit, "full")
    return tolerance_span(full.unmerged, find_in(full, find), hertz)


def _sized(response: ExactResponse) -> bool:
    """Say whether every coefficient has a size that can be drawn."""
    return all(
        not value or 1 / LARGEST < abs(value) < LARGEST for value in (*response.top, *response.bottom)
    )


def _shown(outcome: Outcome, find: Find, own: list[View], whole: ExactResponse) -> Shown:
    edges = [_edges(view.result.solution) for view in own]
    lows = [low for low, _ in edges if low]
    highs = [high for _, high in edges if high]
    low_edge = min(lows, default=None)
    high_edge = max(highs, default=None)
    span = range_of([(low_edge, high_edge)], (), whole.corners_hz)
    mid = _mid(outcome, span, low_edge, high_edge)
    responses = [(WHOLE, whole, False), *((n, r, True) for n, r in _others(own))]
    traces = tuple(
        Trace(name, response, curve_of(response, span, mid), approximate)
        for name, response, approximate in responses
        if not response.is_zero and _sized(response)
    )
    ratio = span[1] / span[0]
    hertz = tuple(span[0] * ratio ** (k / (SPAN_POINTS - 1)) for k in range(SPAN_POINTS))
    return Shown(
        find.name,
        find,
        gain_dimension(own[0], -own[0].result.solution.form.power_of_s),
        traces,
        _span(outcome.circuit, find, hertz),
        tuple(edge for edge in (low_edge, high_edge) if edge),
        mid,
    )


def _edges(solution: Solution) -> tuple[float | None, float | None]:
    found = solution.estimates.bandwidth if solution.estimates else None
    return (found.low_hz, found.high_hz) if found else (None, None)


def _mid(outcome: Outcome, span: tuple[float, float], low: float | None, high: float | None) -> float:
    """Give a frequency in the pass band, where phases are counted from."""
    if low and high:
        return math.sqrt(low * high)
    report = outcome.bands
    begin, end = (report.edges.mid_from, report.edges.mid_to) if report else (None, None)
    if begin and end:
        return math.sqrt(begin * end)
    return span[1] if low or begin else span[0]


def _others(own: list[View]) -> list[tuple[str, ExactResponse]]:
    """Give what is held against the exact response: bands, what assumptions leave, and the shortest model."""
    found = []
    for view in own:
        numbers = view.result.solution.numbers
        if (view.banded or len(own) > 1) and numbers is not None and numbers.bottom:
            found.append((f"{view.band} band", _response(view, numbers.top, numbers.bottom)))
    for view in own:
        found += _assumed(view)
        found += _short(view)
    return found


def _response(view: View, top: tuple[Fraction, ...], bottom: tuple[Fraction, ...]) -> ExactResponse:
    """Give a response whose lowest powers of s were taken out in front."""
    power = view.result.solution.form.power_of_s
    zeros = (Fraction(0),)
    return ExactResponse(zeros * max(power, 0) + tuple(top), zeros * max(-power, 0) + tuple(bottom))


def _assumed(view: View) -> list[tuple[str, ExactResponse]]:
    register = view.result.solution.register
    entries = register.entries if register else ()
    where = f", {view.band} band" if view.banded else ""
    found = []
    for entry in entries:
        numbers = entry.reduced.numbers
        # Each stands on top of those before it: of many, the last says it all.
        if numbers is None or not numbers.bottom or (len(entries) > 2 and entry is not entries[-1]):
            continue
        power = entry.reduced.form.power_of_s
        zeros = (Fraction(0),)
        top, bottom = zeros * max(power, 0) + numbers.top, zeros * max(-power, 0) + numbers.bottom
        first = entries[0].number
        words = (
            f"assumption {first}" if entry.number == first else f"assumptions {first} to {entry.number}"
        )
        found.append((f"{words}{where}", ExactResponse(top, bottom)))
    return found


def _short(view: View) -> list[tuple[str, ExactResponse]]:
    """Give the model of gain and dominant pole, where short forms of both were found."""
    values = {s.question.kind: s.value for s in view.result.solution.simplified if s.form is not None}
    gain, pole = values.get("low-frequency gain"), values.get("dominant pole")
    if not gain or not pole:
        return []
    where = f", {view.band} band" if view.banded else ""
    bottom = (Fraction(1), 1 / Fraction(abs(pole)))
    return [(f"short forms of gain and dominant pole{where}", ExactResponse((Fraction(gain),), bottom))]
