"""What follows a unit step, exactly but for rounding: the response over s by partial fractions.

H(s)/s is taken apart at its poles, those of several-fold kind included: at a pole p of multiplicity m the first m
coefficients of the series of (s − p)^m·H(s)/s are the residues, and each gives t^k·e^(p·t)/k!. Poles come certified
from exact polynomials; the series are worked to 256 bits, so that residues that nearly cancel keep their figures.
Source: Heaviside's expansion (textbook standard, from memory).
"""

from __future__ import annotations

import cmath
import math
from collections.abc import Callable, Sequence
from dataclasses import dataclass
from fractions import Fraction
from typing import Any

from flint import acb, acb_poly, ctx

from derive.algebra.roots import rational_polynomial
from derive.normalise.exact_response import ExactResponse
from derive.response.traces import Rise, StepCurve

BITS = 256
POINTS = 201
# So many points for one swing of a pair of poles, up to a number that can be drawn.
A_SWING, MOST_POINTS = 16, 1600
LOW, HIGH = 0.1, 0.9
HALVINGS = 60


@dataclass(frozen=True, slots=True)
class StepResponse:
    """y(t) = Σ residue·t^k·e^(p·t)/k!, for t above 0; `terms` holds (pole, k, residue), the pole at 0 included."""

    terms: tuple[tuple[complex, int, complex], ...]

    def __call__(self, seconds: float) -> float:
        """Give the value at a time."""
        total = 0j
        for pole, power, residue in self.terms:
            total += residue * seconds**power / math.factorial(power) * cmath.exp(pole * seconds)
        return total.real

    @property
    def poles(self) -> tuple[complex, ...]:
        """The poles of the response itself; the step's own is not among them."""
        return tuple(dict.fromkeys(pole for pole, _, _ in self.terms if pole))


def step_response(response: ExactResponse) -> StepResponse | None:
    """Give what follows a unit step; None where the response grows with frequency, so that a step is no answer."""
    if response.is_zero:
        return StepResponse(())
    if len(response.top) > len(response.bottom):
        return None
    with ctx.workprec(BITS):
        bottom = (Fraction(0), *response.bottom)
        top = acb_poly(rational_polynomial(response.top))
        below = acb_poly(rational_polynomial(bottom))
        terms = []
        for pole, count in _poles(bottom):
            residues = _residues(top, below, pole, count)
            for power in range(count):
                terms.append((complex(pole), power, complex(residues[count - 1 - power])))
    return StepResponse(tuple(terms))


def _poles(bottom: Sequence[Fraction]) -> list[tuple[acb, int]]:
    """Give the poles with their multiplicities, to the full width of the working numbers."""
    balls: Any = rational_polynomial(bottom).numer().complex_roots()
    return [(ball, count) for ball, count in balls]


def _residues(top: Any, below: Any, pole: Any, count: int) -> list[Any]:
    """Give the first coefficients of (s − p)^count·top/below about a pole of that multiplicity."""
    shift = acb_poly([pole, 1])
    above = [top(shift)[k] for k in range(count)]
    # The lowest coefficients vanish: the pole is known to be one of that multiplicity.
    under = [below(shift)[count + k] for k in range(count)]
    found: list[Any] = []
    for k in range(count):
        rest = sum((found[j] * under[k - j] for j in range(k)), acb(0))
        found.append((above[k] - rest) / under[0])
    return found


def rise_of(step: Callable[[float], float], end: float, window: float) -> Rise | None:
    """Give the rise of a step response towards its end within a window of time; None where it does not get there."""
    if not end:
        return None
    times = [window * k / (POINTS - 1) for k in range(POINTS)]
    shares = [step(t) / end for t in times]
    edges = [_first(step, end, level, times, shares) for level in (LOW, HIGH)]
    if None in edges or shares[0] >= HIGH:
        return None
    begin, finish = (edge for edge in edges if edge is not None)
    return Rise(begin, finish, end, max(0.0, max(shares) - 1.0))


def _first(
    step: Callable[[float], float],
    end: float,
    level: float,
    times: Sequence[float],
    shares: Sequence[float],
) -> float | None:
    """Give when a share of the end is first reached: between two times, by halving."""
    place = next((k for k, share in enumerate(shares) if share >= level), None)
    if place is None:
        return None
    if place == 0:
        return 0.0
    low, high = times[place - 1], times[place]
    for _ in range(HALVINGS):
        middle = (low + high) / 2
        low, high = (low, middle) if step(middle) / end >= level else (middle, high)
    return high


def curve_of_step(name: str, step: StepResponse, window: float) -> StepCurve:
    """Give the curve over a window of time, with points enough for every swing."""
    swings = max((abs(pole.imag) for pole in step.poles), default=0.0) * window / (2 * math.pi)
    count = max(POINTS, min(MOST_POINTS, math.ceil(A_SWING * swings)))
    times = [window * k / (count - 1) for k in range(count)]
    return StepCurve(name, tuple((t, step(t)) for t in times))
