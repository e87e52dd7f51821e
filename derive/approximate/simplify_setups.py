"""Each question made ready for trials: where the response is sampled, and by what measure it is judged.

Beside the nominal values, neighbouring ones are looked at, where twice the error is allowed: an assumption that
holds at the nominal values by coincidence alone does not pass.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from derive.approximate.questions import Question
from derive.approximate.simplify_matched import varied
from derive.approximate.simplify_measures import CIRCLE, AtPoles, InBand, Level, Measure, circle, followed
from derive.approximate.simplify_network import Network
from derive.approximate.simplify_original import Original, slope
from derive.approximate.simplify_trials import Bench, Complex, Floats
from derive.topology.topology import Budget

NEIGHBOURS = 2
SLACK = 2.0
BAND_SAMPLES, NEIGHBOUR_SAMPLES = 40, 14
# Around the unity-gain frequency, so that the response keeps its slope there.
NEARBY = (0.8, 1.0, 1.25)
# Where the circuit cannot be solved at zero frequency, so far below its lowest corner.
BELOW = 1e-5
AGREES = 1e-6


@dataclass(frozen=True, slots=True)
class Setup:
    """A bench, its measure, and the samples at nominal values."""

    bench: Bench
    measure: Measure
    samples: Complex


def pole_asked(question: Question, original: Original) -> complex | None:
    """Give the pole that a question asks for; None where there is none."""
    place = 0 if question.kind == "dominant pole" else 1
    return original.poles[place] if len(original.poles) > place else None


def low_frequency(original: Original, budget: Budget) -> Setup:
    """Sample at zero frequency, or far below all corners where there is no response there."""
    network = original.network
    gain, power = original.low_gain or (0.0, 0)
    samples = np.zeros(1, dtype=complex)
    bench = _bench_at_zero(network, samples) if power == 0 else None
    if bench is None or not abs(bench.response[0] / gain - 1) < AGREES:
        samples = np.array([BELOW * (original.corners_rad_per_s or (1.0,))[0]], dtype=complex)
        bench = _varied_bench(network, samples, samples)
    reference, slack = bench.response.copy(), _slack(bench, 1)
    return Setup(bench, Level(reference, float(budget.gain), slack=slack), samples)


def _bench_at_zero(network: Network, samples: Complex) -> Bench | None:
    try:
        return _varied_bench(network, samples, samples)
    except np.linalg.LinAlgError:
        return None


def unity(original: Original, question: Question, omega: float) -> Setup:
    """Sample about the unity-gain frequency; an error of the size moves it by the error over the slope."""
    samples = 1j * omega * np.array(NEARBY)
    bench = _varied_bench(original.network, samples, samples)
    slack = np.full(len(bench.samples), SLACK)
    slack[NEARBY.index(1.0)] = 1
    limit = float(question.corner_limit) * max(abs(slope(original.at, omega)), 0.1)
    return Setup(bench, Level(bench.response.copy(), limit, size_only=True, slack=slack), samples)


def in_band(original: Original, budget: Budget, range_hz: tuple[float, float]) -> Setup:
    """Sample over a range of frequencies, evenly in decades."""
    samples = 2j * np.pi * np.geomspace(*range_hz, BAND_SAMPLES)
    fewer = 2j * np.pi * np.geomspace(*range_hz, NEIGHBOUR_SAMPLES)
    bench = _varied_bench(original.network, samples, fewer)
    limits = float(budget.magnitude_db), float(budget.phase_deg)
    slack = _slack(bench, len(samples))
    return Setup(bench, InBand(bench.response.copy(), *limits, slack=slack), samples)


def at_pole(original: Original, question: Question, pole: complex) -> Setup:
    """Sample on a circle about a pole, and about where it goes at neighbouring values."""
    network = original.network
    limit = float(question.corner_limit)
    circles, factors, limits = [circle(pole)], [np.ones(len(network.stamps))], [limit]
    for turn in range(NEIGHBOURS):
        factor = varied(network, turn)
        moved = followed(network, pole, factor)
        if moved is not None:
            circles.append(circle(moved))
            factors.append(factor)
            limits.append(SLACK * limit)
    table = np.repeat(np.array(factors), CIRCLE, axis=0)
    bench = Bench(network, np.concatenate(circles), table)
    return Setup(bench, AtPoles(bench, limits), circles[0])


def _varied_bench(network: Network, samples: Complex, fewer: Complex) -> Bench:
    """Set up the nominal values at `samples`, and each set of neighbouring ones at `fewer`."""
    factors: list[Floats] = [np.ones((len(samples), len(network.stamps)))]
    for turn in range(NEIGHBOURS):
        factors.append(np.tile(varied(network, turn), (len(fewer), 1)))
    places = np.concatenate([samples, *([fewer] * NEIGHBOURS)])
    return Bench(network, places, np.concatenate(factors))


def _slack(bench: Bench, nominal: int) -> Floats:
    slack = np.full(len(bench.samples), SLACK)
    slack[:nominal] = 1
    return slack
