"""Sentences on estimates: whether one may be used here, how it errs, and what is to blame."""

from __future__ import annotations

import math
from dataclasses import dataclass
from itertools import pairwise

from derive.estimates.words import hertz, percent, plain
from derive.normalise.form import CertifiedRoot, NominalNumbers

# Common practice: a tenth is less than the spread of a transistor's capacitances from part to part, so an
# estimate within it decides nothing wrongly. Beyond it the exact value, which stands beside it, is to be used.
USABLE_ERROR = 0.10
# Smaller errors are none: the estimate is the exact value but for rounding.
EXACT_ERROR = 1e-9
# Poles within this ratio of one another share the work, and neither dominates: at 10 the rule errs by 9 %.
CLOSE_RATIO = 10.0
# A zero or a pair of poles within this factor of the corner still bends the response there by 5 % (√(1 + 1/9)).
NEAR = 3.0


@dataclass(frozen=True, slots=True)
class Scene:
    """The poles and zeros that an estimate is judged against, each as often as it occurs, rising."""

    poles: tuple[CertifiedRoot, ...]
    zeros: tuple[CertifiedRoot, ...]
    coincident: tuple[CertifiedRoot, ...]

    @classmethod
    def of(cls, numbers: NominalNumbers) -> Scene:
        """Give the scene of a response at its nominal values."""
        return cls(_each(numbers.poles), _each(numbers.zeros), numbers.coincident)

    @property
    def unstable(self) -> bool:
        """Whether a pole lies in the right half-plane."""
        return any(pole.real > pole.radius for pole in self.poles)


def judge_pole(scene: Scene, index: int, error: float) -> tuple[bool, str]:
    """Say whether an estimate of the pole of this place may be used."""
    off = f"off by {percent(error)}" if abs(error) > EXACT_ERROR else "exact here"
    if scene.unstable:
        return (
            False,
            f"not to be used: a pole lies in the right half-plane, the stage is unstable ({off})",
        )
    ratio, other = _nearest(scene, index)
    equal = ratio < 1 + EXACT_ERROR
    apart = f"a factor of {plain(ratio)} lies between it and the {other}"
    if equal:
        apart = f"it lies as far out as the {other}"
    if abs(error) <= USABLE_ERROR:
        return True, f"may be used: {apart}, and it is {off}"
    if ratio > CLOSE_RATIO:
        where = "in" if index and index + 1 == len(scene.poles) else "out"
        return False, f"not to be used: {off}, for poles further {where} have their share as well"
    return False, f"not to be used: {'' if equal else 'only '}{apart}; {off}"


def no_real_pole(scene: Scene, *, low: bool) -> str:
    """Say that the rules for real poles do not apply, or one of them; "" where both may be tried."""
    if not scene.poles:
        return ""
    first, last = scene.poles[0], scene.poles[-1]
    if first.imaginary:
        pair = f"the lowest poles are a pair with Q = {_quality(first)}"
        return f"No real pole dominates: {pair}. Rules for real poles do not apply."
    if low and last.imaginary:
        pair = f"The highest poles are a pair with Q = {_quality(last)}"
        return f"{pair}: the rule for a highest real pole does not apply."
    if not low and len(scene.poles) > 1 and scene.poles[1].imaginary:
        pair = f"The next poles are a pair with Q = {_quality(scene.poles[1])}"
        return f"{pair}: the rule for a second real pole does not apply."
    return ""


def _quality(pole: CertifiedRoot) -> str:
    return "infinite" if pole.quality is None else plain(pole.quality)


def _nearest(scene: Scene, index: int) -> tuple[float, str]:
    """Give the ratio to the pole next in size, and which one that is."""
    sizes = [pole.magnitude for pole in scene.poles]
    ratios = []
    if index + 1 < len(sizes):
        ratios.append((sizes[index + 1] / sizes[index], "next pole"))
    if index:
        ratios.append((sizes[index] / sizes[index - 1], "pole before"))
    return min(ratios)


def judge_frequency(scene: Scene, error: float, exact_hz: float, *, low: bool) -> tuple[bool, str]:
    """Say whether an estimate of a corner frequency may be used."""
    chance = _by_chance(scene, exact_hz)
    if abs(error) <= EXACT_ERROR:
        return True, f"may be used: it is exact here{chance}"
    if low:
        safe = error > 0
        way = f"a low corner {percent(error)} {'above' if safe else 'below'} the true one"
    else:
        safe = error < 0
        way = f"{percent(error)} {'less' if safe else 'more'} bandwidth than there is"
    gives = f"it {'gives' if safe else 'promises'} {way}{', the safe side' if safe else ''}"
    if abs(error) <= USABLE_ERROR:
        return True, f"may be used: {gives}{chance}"
    reasons = _reasons(scene, exact_hz)
    return False, f"not to be used: {gives}" + (f"; {reasons}" if reasons else "")


def _near_pair(scene: Scene, exact_hz: float) -> str:
    """Name the complex pair that shapes the corner; "" where none does."""
    span = (exact_hz / NEAR, exact_hz * NEAR)
    for pole in scene.poles:
        if pole.imaginary > 0 and span[0] <= pole.hertz <= span[1]:
            return f"a complex pair (Q = {_quality(pole)}) shapes the corner"
    return ""


def _by_chance(scene: Scene, exact_hz: float) -> str:
    pair = _near_pair(scene, exact_hz)
    return f", by the chance of these values only: {pair}" if pair else ""


def _reasons(scene: Scene, exact_hz: float) -> str:
    said = []
    pairs = _near_pair(scene, exact_hz)
    if pairs:
        said.append(f"{pairs}, where the sum means nothing")
    real = sorted(pole.hertz for pole in scene.poles if not pole.imaginary)
    close = [(one, other) for one, other in pairwise(real) if other < CLOSE_RATIO * one]
    if close and not pairs:
        equal = all(math.isclose(one, other, rel_tol=1e-9) for one, other in close)
        said.append("poles are equal" if equal else "no pole dominates: some lie close together")
    bending = [zero for zero in scene.zeros if zero.hertz <= exact_hz * NEAR]
    bending = [zero for zero in bending if zero.hertz not in {root.hertz for root in scene.coincident}]
    if bending:
        said.append(
            f"a zero at {hertz(bending[0].hertz)} bends the response, which the sum knows nothing of"
        )
    if scene.coincident:
        at = hertz(scene.coincident[0].hertz)
        said.append(f"a pole at {at} is cancelled by a zero at these values, and the sum counts it still")
    return "; ".join(said)


def _each(roots: tuple[CertifiedRoot, ...]) -> tuple[CertifiedRoot, ...]:
    return tuple(root for root in roots if root.magnitude for _ in range(root.multiplicity))
