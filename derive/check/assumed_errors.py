"""The errors of a reduced response once more: from the circuit's tableau and the printed form alone."""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from fractions import Fraction
from typing import Any

import numpy as np
import numpy.typing as npt
from flint import fmpq, fmpq_poly

from derive.approximate.register import Errors, RootError, Worst
from derive.check.excitation import excite
from derive.check.merged import with_merged_exact
from derive.check.reading import value_exact
from derive.check.stamp import assemble
from derive.check.tableau_ratio import exact_ratio
from derive.check.verdict import Solution
from derive.devices.elements import SmallSignal
from derive.normalise.form import NormalForm

SAMPLES_A_DECADE = 100
MOST_SAMPLES = 3000
# Between samples the worst value is closed in on by so many rounds.
ROUNDS = 6
MOST_PEAKS = 12
# So near to half a turn a phase goes from +180 to −180 degrees between two frequencies.
HALF_TURN = 179.5
SLACK = 1e-5
FLOOR = 1e-7
Array = npt.NDArray[np.float64]


@dataclass(frozen=True, slots=True, eq=False)
class Pair:
    """H' and H, each as (top, bottom) rational polynomials in s, powers of s in front included."""

    reduced: tuple[Any, Any]
    exact: tuple[Any, Any]

    def at(self, hertz: float) -> tuple[float, float]:
        """Give the error in dB and in degrees at a frequency."""
        magnitude, phase = self.over([hertz])
        return float(magnitude[0]), float(phase[0])

    def over(self, frequencies: Sequence[float]) -> tuple[Array, Array]:
        """Give the errors in dB and in degrees at frequencies."""
        above, below = self.reduced[0] * self.exact[1], self.reduced[1] * self.exact[0]
        (top, up), (bottom, down) = (_swept(polynomial, frequencies) for polynomial in (above, below))
        with np.errstate(all="ignore"):
            error = top / bottom
            return 20 * (np.log10(np.abs(error)) + up - down), np.degrees(np.angle(error))

    @property
    def gain(self) -> float | None:
        """The relative error of the gain; None where the powers of s in front differ."""
        powers, values = [], []
        for polynomial in (*self.reduced, *self.exact):
            coefficients = polynomial.coeffs()
            power = next(k for k, value in enumerate(coefficients) if value != 0)
            powers.append(power)
            values.append(coefficients[power])
        if powers[0] - powers[1] != powers[2] - powers[3]:
            return None
        error = values[0] * values[3] / (values[1] * values[2]) - 1
        return float(Fraction(int(error.p), int(error.q)))

    def worst(self, low: float, high: float) -> tuple[float, float]:
        """Give the largest errors over a range, in dB and in degrees."""
        count = min(MOST_SAMPLES, max(2, math.ceil(SAMPLES_A_DECADE * math.log10(high / low)) + 1))
        places = {low * (high / low) ** (k / (count - 1)) for k in range(count)}
        for polynomial in (*self.reduced, *self.exact):
            for root in roots_of(polynomial):
                places |= {
                    hertz
                    for part in (abs(root), abs(root.imag))
                    if low < (hertz := part / (2 * math.pi)) < high
                }
        ordered = sorted(places | {low, high})
        return self._largest(ordered, 0), self._largest(ordered, 1)

    def _largest(self, places: list[float], which: int) -> float:
        """Give the largest error around any of the highest samples."""
        sizes = np.abs(self.over(places)[which])
        last = len(places) - 1
        peaks = [
            k for k in range(last + 1) if sizes[k] >= max(sizes[max(0, k - 1)], sizes[min(last, k + 1)])
        ]
        highest = sorted(peaks, key=lambda k: -sizes[k])[:MOST_PEAKS]
        found = [self._closed_in(places[max(0, k - 1) : k + 2], which) for k in highest]
        return max(found, key=abs)

    def _closed_in(self, places: list[float], which: int) -> float:
        """Give the largest error of some frequencies and of those around it, closer and closer."""
        for _ in range(ROUNDS):
            best = int(np.argmax(np.abs(self.over(places)[which])))
            near = places[max(0, best - 1)], places[min(len(places) - 1, best + 1)]
            spaced = [near[0] * (near[1] / near[0]) ** (k / 12) for k in range(13)]
            places = sorted({*spaced, places[best]})
        found = self.over(places)[which]
        return float(found[int(np.argmax(np.abs(found)))])


def pair_at(solution: Solution, form: NormalForm, values: Mapping[str, Fraction]) -> Pair:
    """Give the two responses at these values of the circuit's symbols.

    Raises: NoSolutionError, ZeroDivisionError where one is not defined there.
    """
    return Pair(
        printed_ratio(form, with_merged_exact(solution, dict(values))),
        tableau_of(solution.judged, solution, values),
    )


def tableau_of(
    circuit: SmallSignal, solution: Solution, values: Mapping[str, Fraction]
) -> tuple[Any, Any]:
    """Give a circuit's response, asked as a solution asks, as rational polynomials."""
    known = {"": Fraction(0), **values}
    top, bottom = exact_ratio(assemble(circuit, excite(solution.derivation.system), known.__getitem__))
    return top, bottom


def printed_ratio(form: NormalForm, known: Mapping[str, Fraction]) -> tuple[Any, Any]:
    """Give a printed form as rational polynomials."""
    gain = value_exact(form.gain, known)
    top = _polynomial([gain * value_exact(value, known) for value in form.numerator])
    bottom = _polynomial([value_exact(value, known) for value in form.denominator])
    s = fmpq_poly([0, 1])
    return top * s ** max(form.power_of_s, 0), bottom * s ** max(-form.power_of_s, 0)


def _polynomial(values: Sequence[Fraction]) -> Any:
    return fmpq_poly([fmpq(value.numerator, value.denominator) for value in values])


def _swept(polynomial: Any, frequencies: Sequence[float]) -> tuple[Any, Array]:
    """Give a polynomial's values at jω over the size of its largest term, and the logarithm of that size."""
    omegas = np.log10(2 * math.pi * np.array(frequencies))
    terms = [(k, value) for k, value in enumerate(polynomial.coeffs()) if value != 0]
    powers = np.array([k for k, _ in terms])
    own = np.array([math.log10(abs(int(v.p))) - math.log10(int(v.q)) for _, v in terms])
    turns = np.array([(1 if value > 0 else -1) * 1j ** (k % 4) for k, value in terms])
    logs = own[:, None] + powers[:, None] * omegas[None, :]
    size = logs.max(axis=0)
    return (turns[:, None] * 10 ** (logs - size)).sum(axis=0), size


def roots_of(polynomial: Any) -> list[complex]:
    """Give the roots that are not zero, each as often as its multiplicity."""
    if polynomial.degree() < 1:
        return []
    found: list[complex] = []
    for ball, count in polynomial.numer().complex_roots():
        root = complex(float(ball.real.mid()), float(ball.imag.mid()))
        found += [root] * count if abs(root) else []
    return found


def differs(errors: Errors, pair: Pair) -> str:
    """Say what of printed errors is not what the two responses give; "" where all agree."""
    gain = pair.gain
    if (gain is None) != (errors.gain is None) or not _close(gain or 0.0, errors.gain or 0.0):
        return "the error of the gain"
    magnitude, phase = pair.worst(*errors.range_hz)
    turned = min(abs(phase), abs(errors.phase_deg)) > HALF_TURN
    if not _close(magnitude, errors.magnitude_db) or not (
        turned or _close(abs(phase), abs(errors.phase_deg))
    ):
        wrong = "magnitude" if not _close(magnitude, errors.magnitude_db) else "phase"
        return f"the worst error of the {wrong}"
    for each in errors.at:
        there = pair.at(each.hertz)
        if not (_close(there[0], each.magnitude_db) and _same_angle(there[1], each.phase_deg)):
            return f"the errors at the {each.name}"
    for kind, place, roots, lost in (
        ("pole", 1, errors.poles, errors.lost_poles),
        ("zero", 0, errors.zeros, errors.lost_zeros),
    ):
        if not _roots_agree(pair, place, roots, lost):
            return f"the {kind}s"
    return _edges(errors, pair)


def _close(one: float, other: float) -> bool:
    if not (math.isfinite(one) and math.isfinite(other)):
        return True
    return abs(one - other) <= FLOOR + SLACK * max(abs(one), abs(other))


def _same_angle(one: float, other: float) -> bool:
    """Whether two angles in degrees agree; +180 and −180 are one."""
    return _close(one, other) or (min(abs(one), abs(other)) > HALF_TURN and _close(abs(one), abs(other)))


def _roots_agree(pair: Pair, place: int, roots: Sequence[RootError], lost: Sequence[complex]) -> bool:
    if not _same_roots([root.approximate for root in roots], roots_of(pair.reduced[place]), 0):
        return False
    exact = [root.exact for root in roots if root.exact is not None]
    # What cancels at the nominal values only is listed, though the ratio of the values does not have it.
    if not _same_roots([*exact, *lost], roots_of(pair.exact[place]), None):
        return False
    for root in roots:
        if root.exact is not None and root.error is not None:
            size = abs(root.approximate) / abs(root.exact) - 1
            real = root.approximate.imag == root.exact.imag == 0
            error = root.approximate.real / root.exact.real - 1 if real else size
            if not _close(error, root.error):
                return False
    return True


def _same_roots(printed: Sequence[complex], true: Sequence[complex], spare: int | None) -> bool:
    """Whether every true root is printed, and no more than `spare` others."""
    left = list(printed)
    for root in true:
        near = min(left, key=lambda other: abs(other - root), default=None)
        # Roots that lie on one another move by a root of the rounding.
        if near is None or abs(near - root) > 1e-6 * abs(root):
            return False
        left.remove(near)
    return spare is None or len(left) <= spare


def _edges(errors: Errors, pair: Pair) -> str:
    """Judge the errors of the −3 dB frequencies that are listed by name."""
    for name, error in (("lower", errors.low_edge), ("upper", errors.high_edge)):
        edge = next((each.hertz for each in errors.at if each.name.startswith(f"{name} −3 dB")), None)
        if edge is None or error is None:
            continue
        moved = edge * (1 + error)
        levels = _levels(pair.reduced, [*_references(pair, moved), moved])
        if not any(abs(abs(level - levels[-1]) - 10 * math.log10(2)) < 5e-5 for level in levels[:-1]):
            return f"the {name} −3 dB frequency"
    return ""


def _levels(ratio: tuple[Any, Any], frequencies: Sequence[float]) -> Array:
    """Give a response's magnitude in dB."""
    (top, up), (bottom, down) = (_swept(polynomial, frequencies) for polynomial in ratio)
    with np.errstate(all="ignore"):
        found: Array = 20 * (np.log10(np.abs(top / bottom)) + up - down)
    return found


def _references(pair: Pair, hertz: float) -> list[float]:
    """Give frequencies far below and above all corners, and where the reduced response peaks."""
    corners = [abs(root) / (2 * math.pi) for p in pair.reduced for root in roots_of(p)] or [hertz]
    low, high = min(corners) * 1e-4, max(corners) * 1e4
    sampled = [low * (high / low) ** (k / 4000) for k in range(4001)]
    best = int(np.argmax(_levels(pair.reduced, sampled)))
    around = sampled[max(0, best - 1)], sampled[min(4000, best + 1)]
    near = [around[0] * (around[1] / around[0]) ** (k / 1000) for k in range(1001)]
    return [low, high, near[int(np.argmax(_levels(pair.reduced, near)))]]


def worst_of(pair: Pair, range_hz: tuple[float, float], frequencies: Sequence[float]) -> Worst:
    """Give the errors of a pair over some frequencies of a range."""
    found = pair.over([*frequencies, *range_hz])
    magnitude, phase = (float(each[int(np.argmax(np.abs(each)))]) for each in found)
    return Worst(None, pair.gain, magnitude, phase)
