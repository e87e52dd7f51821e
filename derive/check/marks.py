"""A response by its marks: what it starts with at low frequency, its poles and its zeros.

They come from the tableau solved at given values for all s at once.
"""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from fractions import Fraction
from typing import Any

from flint import fmpq, fmpq_poly

from derive.check.excitation import Excitation
from derive.check.solve import NoSolutionError
from derive.check.stamp import assemble
from derive.check.tableau_ratio import exact_ratio
from derive.devices.elements import SmallSignal


@dataclass(frozen=True, slots=True)
class Marks:
    """A response: its polynomials in lowest terms, and gain times s^power with the roots beside the origin.

    Roots stand by rising magnitude, each as often as it occurs.
    """

    ratio: tuple[Any, Any]
    power: int
    gain: Fraction
    zeros: list[complex]
    poles: list[complex]


def marks_of(
    circuit: SmallSignal, excitation: Excitation, values: Mapping[str, Fraction]
) -> Marks | None:
    """Solve a circuit at its values for all s; None where it has no response."""
    try:
        top, bottom = exact_ratio(assemble(circuit, excitation, values.__getitem__))
    except NoSolutionError:
        return None
    if not top:
        return None
    (low_top, above), (low_bottom, below) = _from_lowest(top), _from_lowest(bottom)
    gain = above[0] / below[0]
    return Marks(
        (top, bottom),
        low_top - low_bottom,
        Fraction(int(gain.p), int(gain.q)),
        _roots(above),
        _roots(below),
    )


def roots_of(coefficients: Sequence[Fraction]) -> list[complex]:
    """Give a polynomial's roots by rising magnitude, the lower member of a pair first."""
    return _roots(fmpq_poly([fmpq(value.numerator, value.denominator) for value in coefficients]))


def _from_lowest(polynomial: Any) -> tuple[int, Any]:
    coefficients = polynomial.coeffs()
    lowest = next(power for power, value in enumerate(coefficients) if value)
    return lowest, fmpq_poly(coefficients[lowest:])


def _roots(polynomial: Any) -> list[complex]:
    balls: Any = polynomial.numer().complex_roots() if polynomial.degree() > 0 else ()
    found = [
        complex(float(ball.real.mid()), float(ball.imag.mid()))
        for ball, times in balls
        for _ in range(times)
    ]
    return sorted(found, key=lambda root: (math.hypot(root.real, root.imag), root.real, root.imag))
