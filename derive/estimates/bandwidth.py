"""Where the response crosses the half-power line, from its exact squared magnitude.

|H|² is a ratio of polynomials in x = ω², so the crossings of |H|² = reference²/2 are the positive real
roots of a polynomial, all of them, with proven bounds: none can be missed between points of a sweep.
−3 dB stands for a factor of 1/√2, which is −3.0103 dB. For an impedance, which may as well rise as fall,
a factor of √2 counts too.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from fractions import Fraction
from typing import Literal

from flint import arb, ctx

from derive.algebra.rationals import rational
from derive.estimates.estimates import Bandwidth
from derive.estimates.response import BITS, PositiveRoot, Response, fraction_of, positive_roots
from derive.estimates.words import decibels, hertz
from derive.normalise.form import CertifiedRoot
from derive.quantities.words import listed
from derive.topology.topology import BandName

Where = Literal["zero", "infinity", "peak"]
# What `reference_says` holds for each place; checks read it there.
AT: dict[Where, str] = {
    "zero": "at zero frequency",
    "infinity": "far above all corners",
    "peak": "at its peak",
}
HALF = Fraction(1, 2)
# Below this a peak is no more than rounding in a drawing: common practice.
PEAK_POWER_RATIO = 10 ** (0.1 / 10)
# A pass band between two ends that both lie 20 dB lower is one, even where what leaks past it at high
# frequency never falls to nothing: a stage's feedthrough capacitance.
PASS_BAND_ABOVE_ENDS = 100

UNSTABLE = "no bandwidth: a pole lies in the right half-plane, so the response never settles"
LEVEL = "no bandwidth: the magnitude is the same at all frequencies"
ENDLESS = "no bandwidth: the magnitude grows without limit at one end and falls to nothing at the other"
UNDAMPED = "no bandwidth: the peak is infinite, as poles lie on the imaginary axis"


@dataclass(frozen=True, slots=True, eq=False)
class Reference:
    """The squared magnitude to count from, and where it is; `peak` is the place of a peak."""

    square: Fraction
    where: Where
    peak: PositiveRoot | None = None


def find_bandwidth(
    response: Response, poles: Sequence[CertifiedRoot], band: BandName, *, impedance: bool
) -> tuple[Bandwidth | None, str]:
    """Give the crossings and the edges of the pass band, or none and the reason in words.

    The reference is, in the low band, the value far above all corners, which is the mid-band value; in
    the high band that at zero frequency; and where there is none such, or for the full circuit, the value
    at zero frequency unless a zero below every pole makes the response rise from there; else the value
    far above all corners unless a pass band stands high above both ends; else the peak.
    """
    if any(pole.real > pole.radius for pole in poles):
        return None, UNSTABLE
    if response.is_level:
        return None, LEVEL
    reference, why = _reference(response, band)
    if reference is None:
        return None, why
    levels = [HALF]
    if impedance and reference.where != "peak":
        levels.append(1 / HALF)
    found = crossings(response, reference.square, levels)
    low, high = _edges(found, reference)
    size = "impedance" if impedance else "gain"
    with ctx.workprec(BITS):
        magnitude = float(arb(rational(reference.square)).sqrt().mid())
    says = f"{size} {AT[reference.where]}; "
    says += "3 dB stands for 1/√2 or √2 times it" if len(levels) > 1 else "−3 dB stands for 1/√2 of it"
    if band == "low" and reference.where == "infinity":
        says = f"mid-band {says}"
    remark = _remark(response, reference, found, low, high, impedance=impedance)
    return Bandwidth(magnitude, says, tuple(root.hertz for root in found), low, high, remark), ""


def crossings(response: Response, square: Fraction, levels: Sequence[Fraction]) -> list[PositiveRoot]:
    """Give every x at which |H|² passes through one of the levels, rising; touching is no crossing."""
    found: list[PositiveRoot] = []
    for level in levels:
        gap = response.square_top - rational(square * level) * response.square_bottom
        found += [root for root in positive_roots(gap) if root.multiplicity % 2]
    return sorted(found, key=lambda root: fraction_of(root.ball))


def _reference(response: Response, band: BandName) -> tuple[Reference | None, str]:
    at_zero, at_infinity = response.square_at_zero, response.square_at_infinity
    if band == "low" and at_infinity:
        return Reference(at_infinity, "infinity"), ""
    if at_zero and (band == "high" or not response.rises_from_zero or not response.lowest_corner_is_zero):
        return Reference(at_zero, "zero"), ""
    if at_zero and at_infinity is not None:
        peak = _peak(response)
        if max(at_infinity, peak.square if peak else 0) <= at_zero / HALF:
            # It rises from zero frequency, but by less than the 3 dB that are counted.
            return Reference(at_zero, "zero"), ""
    if at_infinity:
        peak = None if at_zero is None else _peak(response)
        if peak is not None and peak.square > PASS_BAND_ABOVE_ENDS * max(at_infinity, at_zero or 0):
            return peak, ""
        return Reference(at_infinity, "infinity"), ""
    if at_zero is None or at_infinity is None:
        return (Reference(at_zero, "zero"), "") if at_zero else (None, ENDLESS)
    peak = _peak(response)
    return (None, UNDAMPED) if peak is None else (peak, "")


def _peak(response: Response) -> Reference | None:
    """Give the highest point between zero and infinite frequency; None where it is infinite."""
    if positive_roots(response.square_bottom):
        return None
    best: Reference | None = None
    with ctx.workprec(BITS):
        for root in positive_roots(response.slope):
            square = fraction_of(response.square_at(root.ball))
            if best is None or square > best.square:
                best = Reference(square, "peak", root)
    return best


def _edges(found: Sequence[PositiveRoot], reference: Reference) -> tuple[float | None, float | None]:
    """Give the edges of the pass band around the reference."""
    if reference.where == "zero":
        return None, found[0].hertz if found else None
    if reference.where == "infinity" or reference.peak is None:
        return found[-1].hertz if found else None, None
    top = fraction_of(reference.peak.ball)
    below = [root for root in found if fraction_of(root.ball) < top]
    above = [root for root in found if fraction_of(root.ball) > top]
    return below[-1].hertz if below else None, above[0].hertz if above else None


def _remark(
    response: Response,
    reference: Reference,
    found: Sequence[PositiveRoot],
    low: float | None,
    high: float | None,
    *,
    impedance: bool,
) -> str:
    said = []
    if not found:
        said.append(
            "it does not depart from it by 3 dB anywhere" if impedance else "it never falls by 3 dB"
        )
    elif len(found) > sum(edge is not None for edge in (low, high)):
        line = "levels of 3 dB" if impedance else "line"
        said.append(
            f"it crosses the {line} {len(found)} times: at {listed([hertz(root.hertz) for root in found])}"
        )
    peak = None if impedance or reference.where == "peak" else _peak(response)
    if peak is not None and peak.peak is not None and peak.square > reference.square * PEAK_POWER_RATIO:
        excess = decibels(float(peak.square / reference.square))
        said.append(f"it peaks {excess} above the reference at {hertz(peak.peak.hertz)}")
    return "; ".join(said)
