"""The corners of a response, judged by solving the circuit at them and sweeping the rest."""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence
from itertools import pairwise

import numpy as np
import numpy.typing as npt

from derive.check.excitation import excite
from derive.check.roads.nominal import nominal_values
from derive.check.solve import long_double, solve_frequencies
from derive.check.stamp import assemble
from derive.check.verdict import Solution
from derive.check.words import frequency
from derive.estimates.bandwidth import AT
from derive.estimates.estimates import Bandwidth, Estimates

LEVEL_ERROR = 1e-6
SWEEP_POINTS = 160
REFINEMENTS = 8
PEAKS = 4
# A response this many times beyond its corners is level to the square of the reciprocal.
FAR = 1e6
Sizes = Callable[[Sequence[float]], npt.NDArray[np.float64]]


def judge_bandwidth(solution: Solution, said: Estimates) -> str:
    """Say what is wrong with the bandwidth; "" where nothing is."""
    bandwidth = said.bandwidth
    values = nominal_values(solution.judged)
    if bandwidth is None or values is None:
        if bandwidth is None:
            return "" if said.remark else "there is no bandwidth, and no reason is given"
        return "there is a bandwidth, while a value is open"
    numbers = {name: long_double(value) for name, value in values.items()}
    tableau = assemble(solution.judged, excite(solution.derivation.system), numbers.__getitem__)

    def sizes(hertz: Sequence[float]) -> npt.NDArray[np.float64]:
        sweep = solve_frequencies(tableau, [2 * math.pi * f for f in hertz])
        return np.abs(sweep.responses).astype(np.float64) / bandwidth.reference

    impedance = solution.derivation.system.find.quantity == "impedance"
    levels = [math.sqrt(0.5)]
    if impedance and AT["peak"] not in bandwidth.reference_says:
        levels.append(math.sqrt(2.0))
    corners = _corners(solution) or [1.0]
    hertz = _grid(corners, bandwidth)
    swept = sizes(hertz)
    peak_hz, wrong = _judge_reference(bandwidth, sizes, corners, hertz, swept)
    return (
        wrong
        or _judge_crossings(bandwidth, sizes, levels)
        or _judge_sweep(bandwidth, sizes, levels, hertz, swept)
        or _judge_edges(bandwidth, peak_hz)
    )


def _corners(solution: Solution) -> list[float]:
    numbers = solution.numbers
    roots = (*numbers.zeros, *numbers.poles) if numbers else ()
    return sorted(root.hertz for root in roots if root.magnitude)


def _grid(corners: Sequence[float], bandwidth: Bandwidth) -> list[float]:
    """Give frequencies around all corners, the corners themselves, and one between any two crossings."""
    listed = [*corners, *bandwidth.crossings_hz]
    points = [float(f) for f in np.geomspace(min(listed) / 1e3, max(listed) * 1e3, SWEEP_POINTS)]
    crossings = sorted(bandwidth.crossings_hz)
    between = [math.sqrt(one * other) for one, other in pairwise(crossings)]
    return sorted({*points, *corners, *between})


def _judge_reference(
    bandwidth: Bandwidth,
    sizes: Sizes,
    corners: Sequence[float],
    hertz: Sequence[float],
    swept: npt.NDArray[np.float64],
) -> tuple[float, str]:
    """Give where the reference is in Hz, and what is wrong with it."""
    wrong = "the reference is not the response's size where it is said to be"
    if AT["zero"] in bandwidth.reference_says:
        at = corners[0] / FAR
    elif AT["infinity"] in bandwidth.reference_says:
        at = corners[-1] * FAR
    else:
        at, size = _peak(sizes, hertz, swept)
        return at, "" if abs(size - 1) <= LEVEL_ERROR else wrong
    return at, "" if abs(sizes([at])[0] - 1) <= LEVEL_ERROR else wrong


def _peak(sizes: Sizes, hertz: Sequence[float], swept: npt.NDArray[np.float64]) -> tuple[float, float]:
    """Close in on the highest points of a sweep, and give the highest of all."""
    tops = [
        place for place in range(len(hertz)) if swept[place] == max(swept[max(place - 1, 0) : place + 2])
    ]
    tops.sort(key=lambda place: -float(swept[place]))
    found = [_climbed(sizes, hertz, place) for place in tops[:PEAKS]]
    return max(found, key=lambda peak: peak[1])


def _climbed(sizes: Sizes, hertz: Sequence[float], place: int) -> tuple[float, float]:
    points, top = list(hertz), place
    for _ in range(REFINEMENTS):
        low, high = points[max(top - 1, 0)], points[min(top + 1, len(points) - 1)]
        points = [float(f) for f in np.geomspace(low, high, 13)]
        values = sizes(points)
        top = int(np.argmax(values))
    return points[top], float(values[top])


def _judge_crossings(bandwidth: Bandwidth, sizes: Sizes, levels: Sequence[float]) -> str:
    if list(bandwidth.crossings_hz) != sorted(bandwidth.crossings_hz):
        return "the crossings are out of order"
    if not bandwidth.crossings_hz:
        return ""
    for at, size in zip(bandwidth.crossings_hz, sizes(bandwidth.crossings_hz), strict=True):
        if min(abs(size / level - 1) for level in levels) > LEVEL_ERROR:
            return f"the response does not cross the line at {frequency(at)}"
    return ""


def _judge_sweep(
    bandwidth: Bandwidth,
    sizes: Sizes,
    levels: Sequence[float],
    hertz: Sequence[float],
    swept: npt.NDArray[np.float64],
) -> str:
    """Look for a change of side between neighbours of the sweep where no crossing is listed."""
    crossings = bandwidth.crossings_hz
    at_crossings = sizes(crossings) if crossings else np.zeros(0)
    for level in levels:
        own = [
            f
            for f, size in zip(crossings, at_crossings, strict=True)
            if abs(size / level - 1) <= LEVEL_ERROR
        ]
        clear = [
            (f, size > level)
            for f, size in zip(hertz, swept, strict=True)
            if abs(size / level - 1) > LEVEL_ERROR
        ]
        for (start, was_above), (end, is_above) in pairwise(clear):
            inside = sum(start < f < end for f in own)
            if inside % 2 != (was_above != is_above):
                return f"the crossings near {frequency(start)} are not those of the circuit"
    return ""


def _judge_edges(bandwidth: Bandwidth, at: float) -> str:
    below = [f for f in bandwidth.crossings_hz if f < at]
    above = [f for f in bandwidth.crossings_hz if f > at]
    edges = (below[-1] if below else None, above[0] if above else None)
    if edges != (bandwidth.low_hz, bandwidth.high_hz):
        return "the edges of the pass band are not the crossings next to the reference"
    return ""
