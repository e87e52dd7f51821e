"""How good the separation into bands is: H_low·H_high/H_mid against the full circuit's response."""

from __future__ import annotations

import cmath
import math
from collections.abc import Sequence
from dataclasses import dataclass

from derive.devices.elements import SmallSignal
from derive.normalise.band_edges import edges_of, response_in
from derive.normalise.exact_response import ExactResponse, ratio_at
from derive.topology.topology import BandName, Find

POINTS = 400
DECADES = 2
# Smaller errors are rounding, and would differ from machine to machine.
NOISE = 1e-9


@dataclass(frozen=True, slots=True)
class SeparationAt:
    """The product of the bands' responses over the full one at a frequency, in dB and degrees."""

    hertz: float
    decibels: float
    degrees: float


@dataclass(frozen=True, slots=True)
class Separation:
    """The errors of the separation: the worst in dB and in degrees, and those at the two corners.

    `range_hz` reaches two decades beyond the extreme corners; `at_low_corner` is at the highest
    low-frequency corner, `at_high_corner` at the lowest high-frequency corner; None where there is none.
    """

    range_hz: tuple[float, float]
    points: int
    worst_decibels: SeparationAt
    worst_degrees: SeparationAt
    at_low_corner: SeparationAt | None
    at_high_corner: SeparationAt | None


def separation(circuit: SmallSignal, find: Find) -> Separation | None:
    """Give the errors of a quantity's separation into low, mid and high band at nominal values.

    Given: the circuit before any band's changes, and the find as the user wrote it. Gives None where a
    value is left open, where a band's response is zero or cannot be worked, or where there is no corner.
    """
    bands: tuple[BandName, ...] = ("low", "mid", "high", "full")
    found = [response_in(circuit, band, find) for band in bands]
    responses = [response for response in found if response is not None and not response.is_zero]
    if len(responses) < len(bands):
        return None
    low, mid, high, full = responses
    corners = (*low.corners_hz, *high.corners_hz)
    if not corners:
        return None
    span = (min(corners) / 10**DECADES, max(corners) * 10**DECADES)
    steps = math.log(span[1] / span[0]) / (POINTS - 1)
    above, below = (low, high), (mid, full)
    errors = [
        error
        for k in range(POINTS)
        if (error := _error(above, below, span[0] * math.exp(k * steps))) is not None
    ]
    if not errors:
        return None
    edges = edges_of(circuit, (find,))
    from_hz, to_hz = edges.mid_from, edges.mid_to
    return Separation(
        span,
        len(errors),
        max(errors, key=lambda error: abs(error.decibels)),
        max(errors, key=lambda error: abs(error.degrees)),
        None if from_hz is None else _error(above, below, from_hz),
        None if to_hz is None else _error(above, below, to_hz),
    )


def _error(
    above: Sequence[ExactResponse], below: Sequence[ExactResponse], hertz: float
) -> SeparationAt | None:
    ratio = ratio_at(above, below, hertz)
    if ratio is None:
        return None
    decibels, degrees = 20 * math.log10(abs(ratio)), math.degrees(cmath.phase(ratio))
    return SeparationAt(hertz, _settled(decibels), _settled(degrees))


def _settled(value: float) -> float:
    return 0.0 if abs(value) < NOISE else value
