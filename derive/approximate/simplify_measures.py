"""What a change costs, for each kind of question: its error in parts of the budget, for all trials at once."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Protocol

import numpy as np
import numpy.typing as npt

from derive.approximate.simplify_network import Network
from derive.approximate.simplify_trials import Bench, Complex, Floats

# Points on the circle about a pole: far more than the powers that matter within a third of its radius.
CIRCLE = 16
RADIUS = 0.3
TURNS = np.exp(2j * np.pi * (np.arange(CIRCLE) + 0.5) / CIRCLE)
NEWTON_STEPS = 8
FOLLOWING = 8
# A change after which hardly any response is left removes the pole's response, not an influence on it.
VANISHING = 1e-6


class Measure(Protocol):
    """Gives errors in parts of the budget: 1 is all of it, infinity what cannot be."""

    def errors(self, responses: Complex, factors: Complex) -> Floats:
        """Give the error of each trial [sample, trial]; `factors` are those of the determinant."""

    def accept(self, factors: Complex) -> None:
        """Note that the change with these factors [sample] was carried out."""


@dataclass(slots=True)
class InBand:
    """Magnitude and phase at every sample: the worst in parts of what each may be.

    Errors are divided by `slack` where it is given, sample by sample.
    """

    reference: Complex
    magnitude_db: float
    phase_deg: float
    slack: Floats | None = None

    def errors(self, responses: Complex, factors: Complex) -> Floats:
        """Give the worst error of each trial."""
        with np.errstate(all="ignore"):
            ratio = responses / self.reference[:, None]
            decibels = np.abs(np.log(np.abs(ratio))) * (20 / np.log(10) / self.magnitude_db)
            degrees = np.abs(np.angle(ratio, deg=True)) / self.phase_deg
        return _worst(np.maximum(decibels, degrees), self.slack)

    def accept(self, factors: Complex) -> None:
        """Nothing to note: errors are counted from the original."""


@dataclass(slots=True)
class Level:
    """The response's relative error at every sample: of its value, or of its size alone."""

    reference: Complex
    limit: float
    size_only: bool = False
    slack: Floats | None = None

    def errors(self, responses: Complex, factors: Complex) -> Floats:
        """Give the worst error of each trial."""
        with np.errstate(all="ignore"):
            ratio = responses / self.reference[:, None]
            off = np.abs(ratio) - 1 if self.size_only else ratio - 1
            return _worst(np.abs(off) / self.limit, self.slack)

    def accept(self, factors: Complex) -> None:
        """Nothing to note: errors are counted from the original."""


@dataclass(slots=True)
class RootOfRatio:
    """The relative error of a value that is a ratio (`root` = 1, with its sign) or the root of its size."""

    target: float
    root: int
    limit: float

    def errors(self, responses: Complex, factors: Complex) -> Floats:
        """Give the error of each trial; there is one sample only."""
        with np.errstate(all="ignore"):
            found = responses.real if self.root == 1 else np.abs(responses) ** (1 / self.root)
            return _worst(np.abs(found / self.target - 1) / self.limit, None)

    def accept(self, factors: Complex) -> None:
        """Nothing to note: errors are counted from the original."""


class AtPoles:
    """How far poles move, each followed as a root of the determinant within a circle about it.

    The determinant is a polynomial in s: its values on a circle give its coefficients about the centre. The
    bench's samples are the circles one after the other.
    """

    def __init__(self, bench: Bench, limits: Sequence[float]) -> None:
        sign, logarithm = bench.determinants()
        blocks = logarithm.reshape(len(limits), CIRCLE)
        self.determinant: Complex = sign * np.exp(blocks - blocks.max(axis=1)[:, None]).reshape(-1)
        response = np.abs(bench.response).reshape(len(limits), CIRCLE)
        # Another pole close to a point of the circle must not set the scale.
        self.least = VANISHING * np.median(response, axis=1)
        self.limits = np.array(limits)

    def errors(self, responses: Complex, factors: Complex) -> Floats:
        """Give the worst distance by which each trial moves a pole, against its limit."""
        count = len(self.limits)
        values = (self.determinant[:, None] * factors).reshape(count, CIRCLE, -1)
        sizes = np.abs(responses).reshape(values.shape)
        moved, lost = _root(values)
        with np.errstate(all="ignore"):
            lost |= ~(np.nan_to_num(sizes, nan=0.0).max(axis=1) >= self.least[:, None])
            lost |= np.isnan(sizes).any(axis=1)
            costs = np.abs(moved) * RADIUS / self.limits[:, None]
        return _worst(np.where(lost, np.inf, costs), None)

    def accept(self, factors: Complex) -> None:
        """Take the change into the determinant from which the next trials start."""
        values = (self.determinant * factors).reshape(len(self.limits), CIRCLE)
        self.determinant = (values / np.abs(values).max(axis=1)[:, None]).reshape(-1)


def circle(pole: complex) -> Complex:
    """Give the values of s on a circle about a pole; none is real where the pole is, as others may be."""
    found: Complex = pole + RADIUS * abs(pole) * TURNS
    return found


def followed(network: Network, pole: complex, factors: Floats) -> complex | None:
    """Give where a pole goes as the values are varied by factors; None where it is lost."""
    start = pole
    for _ in range(FOLLOWING):
        bench = Bench(network, circle(pole), np.broadcast_to(factors, (CIRCLE, len(factors))))
        sign, logarithm = bench.determinants()
        values = sign * np.exp(logarithm - logarithm.max())
        moved, lost = _root(values.reshape(1, CIRCLE, 1))
        step = complex(moved[0, 0])
        if not abs(step) < 10:
            return None
        if not lost[0, 0] and abs(step) < 1e-9:
            return pole
        # Outside of the circle its coefficients mislead: go no farther than its edge at once.
        pole += RADIUS * abs(pole) * step / max(1.0, abs(step))
        if start.imag == 0:
            pole = complex(pole.real)
    return None


def _root(values: Complex) -> tuple[Complex, npt.NDArray[np.bool_]]:
    """Give, for values on circles [circle, point, trial], the root near the centre, in radii; and if none."""
    with np.errstate(all="ignore"):
        scale = np.abs(values).max(axis=1)
        coefficients = np.moveaxis(np.fft.fft(values / scale[:, None, :], axis=1) / CIRCLE, 1, 0)
        # The first point is half a step behind the real axis.
        coefficients = coefficients / TURNS[0] ** np.arange(CIRCLE)[:, None, None]
        z = np.zeros(coefficients.shape[1:], dtype=complex)
        for _ in range(NEWTON_STEPS):
            value, slope = _with_slope(coefficients, z)
            z = z - value / slope
        value, _ = _with_slope(coefficients, z)
        return z, ~(np.abs(z) < 1) | ~(np.abs(value) < 1e-9)


def _with_slope(coefficients: Complex, z: Complex) -> tuple[Complex, Complex]:
    value = np.zeros_like(z)
    slope = np.zeros_like(z)
    for coefficient in coefficients[::-1]:
        slope = slope * z + value
        value = value * z + coefficient
    return value, slope


def _worst(errors: Floats, slack: Floats | None) -> Floats:
    if slack is not None:
        errors = errors / slack[:, None]
    found: Floats = np.where(np.isnan(errors), np.inf, errors).max(axis=0)
    return found
