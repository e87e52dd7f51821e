"""The corners of the tolerances: every toleranced part at one end of its range, in every combination.

With up to MOST_FULL toleranced parts in a result all 2^n corners are worked. With more, those that matter
most for the assumption, by what one end of each alone does to its errors, are taken in every combination,
and each other part at the end where it alone makes the errors larger. Device parameters stay as they are:
a tolerance that moves the operating point is not followed. Magnitude and phase are worked at SAMPLES_A_DECADE
frequencies a decade (no more than MOST_SAMPLES).
"""

from __future__ import annotations

import math
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass
from fractions import Fraction
from itertools import product
from typing import Any

import numpy as np
import numpy.typing as npt

from derive.algebra.ring import Polynomial
from derive.approximate.space import Ratio, Space
from derive.devices.elements import Coupling, Inductor
from derive.expressions.walk import evaluate
from derive.quantities.words import listed

MOST_FULL = 8
SAMPLES_A_DECADE = 20
MOST_SAMPLES = 200
# Terms times corners in one go; beyond it the corners are worked in portions.
PORTION = 2_000_000
Array = npt.NDArray[np.float64]


@dataclass(frozen=True, slots=True, eq=False)
class Corners:
    """Corners to be looked at: `shifts` holds, a row a corner, by what each toleranced part is multiplied.

    `factors` gives the same for every name of the ring, merged parts and mutual inductances included.
    """

    names: tuple[str, ...]
    tolerances: tuple[Fraction, ...]
    shifts: Array
    factors: Mapping[str, Array]

    @property
    def count(self) -> int:
        """The number of corners."""
        return int(self.shifts.shape[0])

    def said(self, place: int) -> tuple[str, ...]:
        """Say which corner it is: ("R_1 +1 %", "R_2 −1 %")."""
        row = self.shifts[place]
        return tuple(
            f"{name} {'+' if factor > 1 else '−'}{float(100 * tolerance):g} %"
            for name, factor, tolerance in zip(self.names, row, self.tolerances, strict=True)
            if factor != 1
        )


@dataclass(frozen=True, slots=True, eq=False)
class Found:
    """The errors at every corner: of the gain (None where powers of s differ), in dB and in degrees."""

    gain: Array | None
    magnitude_db: Array
    phase_deg: Array


def toleranced(space: Space, ratio: Ratio) -> tuple[tuple[str, ...], tuple[Fraction, ...]]:
    """Give the parts with a tolerance that a ratio depends on, and their tolerances."""
    used = set(space.names(ratio))
    for merged in reversed(space.merged):
        if merged.name in used:
            used |= set(merged.parts)
    coils = {e.name: e.inductance for e in space.band.unmerged.elements if isinstance(e, Inductor)}
    for element in space.band.unmerged.elements:
        if isinstance(element, Coupling) and element.mutual in used:
            used |= {element.coefficient, *(coils[coil] for coil in element.coils)}
    found = [
        (symbol.name, symbol.tolerance)
        for symbol in space.band.unmerged.symbols
        if symbol.tolerance and symbol.value and symbol.name in used
    ]
    return tuple(name for name, _ in found), tuple(tolerance for _, tolerance in found)


def corners_at(
    space: Space, names: Sequence[str], tolerances: Sequence[Fraction], signs: Sequence[Sequence[int]]
) -> Corners:
    """Give the corners with these signs, a row a corner: +1 and −1 for the ends, 0 for nominal."""
    ends = np.array([float(tolerance) for tolerance in tolerances])
    shifts = 1 + np.array(signs, dtype=float).reshape(len(signs), len(names)) * ends
    count = len(signs)
    factors: dict[str, Array] = {name: np.ones(count) for name in space.ring.names}
    for place, name in enumerate(names):
        factors[name] = shifts[:, place]
    values = space.values or {}
    for merged in space.merged:
        if merged.name in factors and values:
            own = {name: float(values[name]) * factors[name] for name in merged.parts}
            there = evaluate(merged.definition, own, lambda value: np.full(count, float(value)))
            factors[merged.name] = there / float(values[merged.name])
    coils = {e.name: e.inductance for e in space.band.unmerged.elements if isinstance(e, Inductor)}
    for element in space.band.unmerged.elements:
        if isinstance(element, Coupling):
            one, other = (factors[coils[coil]] for coil in element.coils)
            factors[element.mutual] = factors[element.coefficient] * np.sqrt(one * other)
    return Corners(tuple(names), tuple(tolerances), shifts, factors)


def choose_corners(
    space: Space,
    names: Sequence[str],
    tolerances: Sequence[Fraction],
    usage: Callable[[Corners], Array],
) -> Corners:
    """Give all corners, or, of more than MOST_FULL parts, those that the module's text describes.

    Given: `usage` says for each corner how much of the limits is used.
    """
    count = len(names)
    if count <= MOST_FULL:
        return corners_at(space, names, tolerances, list(product((-1, 1), repeat=count)))
    single = [
        tuple(sign if k == place else 0 for k in range(count))
        for place in range(count)
        for sign in (-1, 1)
    ]
    used = usage(corners_at(space, names, tolerances, single)).reshape(count, 2)
    influence = np.round(np.max(used, axis=1), 9)
    worse = [1 if high >= low else -1 for low, high in np.round(used, 9)]
    ranked = sorted(range(count), key=lambda place: (-influence[place], place))[:MOST_FULL]
    signs = []
    for ends in product((-1, 1), repeat=MOST_FULL):
        row = list(worse)
        for place, end in zip(sorted(ranked), ends, strict=True):
            row[place] = end
        signs.append(row)
    return corners_at(space, names, tolerances, signs)


def corners_say(names: Sequence[str]) -> str:
    """Say which corners are looked at."""
    fixed = "device parameters and parts without a tolerance at their nominal values"
    if not names:
        return "no part of this result has a tolerance: nominal values only"
    if len(names) <= MOST_FULL:
        count = 2 ** len(names)
        return f"all {count} corners of the tolerances of {listed(names)}; {fixed}"
    return (
        f"the {2**MOST_FULL} corners of those {MOST_FULL} of the {len(names)} toleranced parts that matter most, each "
        f"other part at its worse end; {fixed}"
    )


def sampled_hz(range_hz: tuple[float, float], more: Sequence[float]) -> list[float]:
    """Give the frequencies at which corners are worked: spaced evenly over the range, and some more."""
    low, high = range_hz
    if high <= low:
        return [low]
    count = min(MOST_SAMPLES, max(2, math.ceil(SAMPLES_A_DECADE * math.log10(high / low)) + 1))
    spaced = [low * (high / low) ** (k / (count - 1)) for k in range(count)]
    return sorted({*spaced, high, *(hertz for hertz in more if low <= hertz <= high)})


def errors_at(
    space: Space, reduced: Ratio, exact: Ratio, corners: Corners, frequencies: Sequence[float]
) -> Found:
    """Give the errors of a reduced ratio at every corner, the worst of each over the frequencies."""
    omegas = 2 * np.pi * np.array(frequencies)
    middle = float(np.exp(np.mean(np.log(omegas))))
    parts = [
        _coefficients(space, polynomial, corners, middle)
        for polynomial in (reduced.top, exact.bottom, reduced.bottom, exact.top)
    ]
    scale = parts[0][1] + parts[1][1] - parts[2][1] - parts[3][1]
    turn = 1j * omegas / middle
    with np.errstate(all="ignore"):
        values = [sum(c[:, None] * turn[None, :] ** k for k, c in found.items()) for found, _ in parts]
        error: Any = values[0] * values[1] / (values[2] * values[3]) * math.exp(scale)
        magnitude = 20 * np.log10(np.abs(error))
        phase = np.degrees(np.angle(error))
        gain = _gain(parts, scale)
    return Found(gain, _worst(magnitude), _worst(phase))


def _gain(parts: list[tuple[dict[int, Array], float]], scale: float) -> Array | None:
    """Give the relative error of the gain, None where the powers of s in front differ."""
    lowest = [min(found) for found, _ in parts]
    if lowest[0] + lowest[1] != lowest[2] + lowest[3]:
        return None
    a, b, c, d = (found[min(found)] for found, _ in parts)
    error: Array = a * b / (c * d) * math.exp(scale) - 1
    return error


def _worst(values: Array) -> Array:
    """Give of each row the value of the largest size; not-a-number counts as infinite."""
    clean = np.where(np.isnan(values), np.inf, values)
    places = np.argmax(np.abs(clean), axis=1)
    worst: Array = clean[np.arange(clean.shape[0]), places]
    return worst


def ratio_at(space: Space, above: Polynomial, below: Polynomial, corners: Corners) -> Array:
    """Give the size of a ratio of polynomials without s at every corner."""
    (top, up), (bottom, down) = (_coefficients(space, p, corners, 1.0) for p in (above, below))
    with np.errstate(all="ignore"):
        found: Array = np.abs(top[0] / bottom[0]) * math.exp(up - down)
    return found


def _coefficients(
    space: Space, polynomial: Polynomial, corners: Corners, omega: float
) -> tuple[dict[int, Array], float]:
    """Give a polynomial's coefficients at every corner, each times omega to its power, over exp(scale).

    Terms are sized by logarithms first, so that no product of small capacitances leaves a float's range.
    """
    values = space.values or {}
    names = space.ring.names
    s = names.index("s")
    exponents = np.array([tuple(map(int, e)) for e in polynomial.monoms()], dtype=float)
    weights = np.array([float(int(c)) for c in polynomial.coeffs()])
    sizes = [omega if k == s else float(values.get(name, 1)) for k, name in enumerate(names)]
    used = exponents.any(axis=0)
    alive = np.ones(len(weights), dtype=bool)
    logs = np.log(np.abs(weights))
    signs = np.sign(weights)
    for place in np.flatnonzero(used):
        size, powers = sizes[place], exponents[:, place]
        if size == 0:
            alive &= powers == 0
            continue
        logs += powers * math.log(abs(size))
        if size < 0:
            signs *= np.where(powers % 2, -1.0, 1.0)
    scale = float(np.max(logs[alive], initial=-np.inf))
    if not math.isfinite(scale):
        return {0: np.zeros(corners.count)}, 0.0
    nominal = np.where(alive, signs * np.exp(np.where(alive, logs, scale) - scale), 0.0)
    powers_of_s = exponents[:, s].astype(int)
    found = {int(power): np.zeros(corners.count) for power in sorted(set(powers_of_s[alive].tolist()))}
    moving = [k for k in np.flatnonzero(used) if k != s and np.any(corners.factors[names[k]] != 1)]
    step = max(1, PORTION // max(1, corners.count))
    for begin in range(0, len(weights), step):
        chunk = slice(begin, begin + step)
        terms = np.repeat(nominal[chunk, None], corners.count, axis=1)
        for k in moving:
            powers = exponents[chunk, k]
            for power in set(powers.tolist()) - {0.0}:
                terms[powers == power] *= corners.factors[names[k]] ** power
        for power in found:
            found[power] += terms[powers_of_s[chunk] == power].sum(axis=0)
    return found, scale
