"""The worst difference of two responses over a range of frequencies, bounded everywhere in it.

E = H'/H, the reduced response over the exact one, is a ratio of polynomials in s. Its squared magnitude is a
ratio in x = ω², so between the ends of the range it is extreme only at positive roots of a derivative. Its
phase is the argument of A(x) + jω·B(x), which is extreme only where (B + 2x·B')·A − 2x·B·A' is zero, or where
B is zero and it turns from +180 to −180 degrees. All these roots are found with proven bounds, so nothing is
missed between points. Above LARGEST_DEGREE the range is sampled instead, DENSE points a decade.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Any

from flint import fmpq, fmpq_poly

from derive.algebra.rationals import fraction
from derive.algebra.roots import rational_polynomial
from derive.estimates.response import Response, make_response, parts, positive_roots
from derive.normalise.form import NominalNumbers

LARGEST_DEGREE = 40
DENSE = 100
EXACTLY = "worst values at the ends of the range and wherever the error is stationary between them"
SAMPLED = f"worst values of {DENSE} frequencies a decade"


@dataclass(frozen=True, slots=True, eq=False)
class Difference:
    """E = H'/H at the nominal values, with the frequencies at which its size and phase may be extreme."""

    response: Response
    places_hz: tuple[float, ...]
    sampled: bool

    def at(self, hertz: float) -> tuple[float, float]:
        """Give the error in dB and in degrees at a frequency (±infinite where a response is zero)."""
        omega = fmpq(*(2 * math.pi * hertz).as_integer_ratio())
        square = omega * omega
        even_top, odd_top = (part(square) for part in parts(self.response.top))
        even_bottom, odd_bottom = (part(square) for part in parts(self.response.bottom))
        above, below = even_top**2 + square * odd_top**2, even_bottom**2 + square * odd_bottom**2
        if not above or not below:
            return (-math.inf if not above else math.inf), 0.0
        real = even_top * even_bottom + square * odd_top * odd_bottom
        imaginary = omega * (odd_top * even_bottom - even_top * odd_bottom)
        return 10 * _log10(above / below), math.degrees(_angle(imaginary, real))

    def worst(self, range_hz: tuple[float, float]) -> tuple[float, float]:
        """Give the errors of the largest size over a range, in dB and in degrees, each with its sign."""
        low, high = range_hz
        inside = [hertz for hertz in self.places_hz if low < hertz < high]
        if self.sampled:
            count = max(2, math.ceil(DENSE * math.log10(high / low)) + 1)
            inside = [low * (high / low) ** (k / (count - 1)) for k in range(1, count - 1)]
        found = [self.at(hertz) for hertz in (low, *inside, high)]
        return max((m for m, _ in found), key=abs), max((p for _, p in found), key=abs)


def difference(reduced: NominalNumbers, exact: NominalNumbers, power: int) -> Difference | None:
    """Give E for two responses; None where one of them is zero or undefined at these values.

    Given: `power` of s by which the reduced response has more than the exact one.
    """
    if not all(any(values) for n in (reduced, exact) for values in (n.top, n.bottom)):
        return None
    top = rational_polynomial(reduced.top) * rational_polynomial(exact.bottom)
    bottom = rational_polynomial(reduced.bottom) * rational_polynomial(exact.top)
    response = make_response(top, bottom, power)
    slope = response.slope
    turning = [*_phase_places(response)]
    if max(slope.degree(), *(p.degree() for p in turning), 0) > LARGEST_DEGREE:
        return Difference(response, (), True)
    places = [root.hertz for p in (slope, *turning) if p.degree() > 0 for root in positive_roots(p)]
    return Difference(response, tuple(sorted(places)), False)


def _phase_places(response: Response) -> tuple[Any, Any]:
    """Give polynomials in x = ω² whose roots hold every extreme of the phase of E."""
    even_top, odd_top = parts(response.top)
    even_bottom, odd_bottom = parts(response.bottom)
    x = fmpq_poly([0, 1])
    # (E_t + jω·O_t)·(E_b − jω·O_b) = A + jω·B
    a = even_top * even_bottom + x * odd_top * odd_bottom
    b = odd_top * even_bottom - even_top * odd_bottom
    turning = (b + 2 * x * b.derivative()) * a - 2 * x * b * a.derivative()
    return turning, b


def _log10(value: fmpq) -> float:
    """Give the logarithm of a rational that may be beyond a float's range."""
    return math.log10(int(value.p)) - math.log10(int(value.q))


def _angle(imaginary: fmpq, real: fmpq) -> float:
    size = max(abs(imaginary), abs(real))
    return math.atan2(float(fraction(imaginary / size)), float(fraction(real / size)))
