"""Responses against frequency, each value from the exact polynomials; phases without jumps."""

from __future__ import annotations

import cmath
import math
from collections.abc import Sequence

from derive.algebra.roots import roots
from derive.normalise.exact_response import ExactResponse, ratio_at
from derive.response.traces import Point

POINTS = 200
# Around a pair of roots, at these multiples of its half-width: a narrow peak or notch falls between points.
NEAR = (-4.0, -2.0, -1.0, -0.5, 0.0, 0.5, 1.0, 2.0, 4.0)
# Shown beyond the edges: what falls, falls by decades.
BEYOND_EDGE = 30.0
BEYOND_OPEN = 1000.0
# Seen in the mid band, a response that inverts stands at −180°, one that does not at 0°.
LEAST_DEGREES = -225.0
Edges = tuple[float | None, float | None]


def range_of(
    edges: Sequence[Edges], unity_hz: Sequence[float], corners: Sequence[float]
) -> tuple[float, float]:
    """Give the range of frequency in which responses are shown: whole decades around their edges.

    Given: the low and high edge of each, the frequencies at which gains may have fallen to one, and the
    corners of all, which decide where there are no edges.
    """
    lows = [low for low, _ in edges if low]
    highs = [high for _, high in edges if high]
    seen = [*lows, *highs] or list(corners) or [1e3]
    low = min(seen) / (BEYOND_EDGE if lows or not highs else BEYOND_OPEN)
    high = max(
        [max(seen) * (BEYOND_EDGE if highs or not lows else BEYOND_OPEN), *(3 * f for f in unity_hz)]
    )
    return 10.0 ** math.floor(math.log10(low)), 10.0 ** math.ceil(math.log10(high))


def curve_of(response: ExactResponse, span: tuple[float, float], mid_hz: float) -> tuple[Point, ...]:
    """Give a response over a range of frequency, its phase without jumps.

    Given: the frequency at which the phase is counted between −225° and 135°. A frequency at which the
    response vanishes or is infinite has no point.
    """
    if response.is_zero:
        return ()
    values = [(hertz, ratio_at((response,), (), hertz)) for hertz in _frequencies(response, span)]
    found = [(hertz, value) for hertz, value in values if value]
    degrees = _unwrapped([value for _, value in found])
    if not found:
        return ()
    nearest = min(range(len(found)), key=lambda k: abs(math.log(found[k][0] / _within(mid_hz, span))))
    turns = 360.0 * math.floor((degrees[nearest] - LEAST_DEGREES) / 360.0)
    return tuple(
        Point(hertz, 20 * math.log10(abs(value)), angle - turns)
        for (hertz, value), angle in zip(found, degrees, strict=True)
    )


def _within(hertz: float, span: tuple[float, float]) -> float:
    return min(max(hertz, span[0]), span[1])


def _frequencies(response: ExactResponse, span: tuple[float, float]) -> list[float]:
    step = math.log(span[1] / span[0]) / (POINTS - 1)
    found = {span[0] * math.exp(k * step) for k in range(POINTS)}
    for root in (*roots(response.top), *roots(response.bottom)):
        if root.imaginary > 0:
            middle, width = root.imaginary / (2 * math.pi), abs(root.real) / (2 * math.pi)
            found |= {middle + k * (width or middle / 1000) for k in NEAR}
    return sorted(hertz for hertz in found if span[0] <= hertz <= span[1] * (1 + 1e-12))


def _unwrapped(values: Sequence[complex]) -> list[float]:
    """Give the angles in degrees, each within half a turn of the one before."""
    found: list[float] = []
    for value in values:
        angle = math.degrees(cmath.phase(value))
        if found:
            angle -= 360.0 * round((angle - found[-1]) / 360.0)
        found.append(angle)
    return found
