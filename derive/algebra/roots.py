"""Roots of polynomials with rational coefficients, each with a proven bound on its error.

The bounds come from FLINT's ball arithmetic (Johansson, Arb: efficient arbitrary-precision
midpoint-radius interval arithmetic, IEEE Trans. Computers 66 (2017) 1281-1292; from memory).
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass, replace
from fractions import Fraction
from typing import Any

from flint import fmpq_poly

from derive.algebra.rationals import fraction, rational


@dataclass(frozen=True, slots=True)
class Root:
    """A root: `real` and `imaginary` are each within `radius` of the truth."""

    real: float
    imaginary: float
    radius: float
    multiplicity: int


def rational_polynomial(coefficients: Sequence[Fraction]) -> fmpq_poly:
    """Make a FLINT polynomial from coefficients by rising power."""
    return fmpq_poly([rational(value) for value in coefficients])


def roots(coefficients: Sequence[Fraction]) -> tuple[Root, ...]:
    """Give the roots by rising magnitude, roots at zero included.

    Given: coefficients by rising power, not all zero. A pair's member with the negative imaginary
    part comes first.
    """
    polynomial = rational_polynomial(coefficients)
    if polynomial.degree() < 1:
        return ()
    balls: Any = polynomial.numer().complex_roots()
    found = [_root(ball, count) for ball, count in balls]
    near = [root for root in found if root.imaginary and abs(root.real) <= root.radius]
    if sum(root.multiplicity for root in near) == 2 * _pairs_on_axis(polynomial):
        found = [replace(root, real=0.0) if root in near else root for root in found]
    return tuple(sorted(found, key=_order))


def _pairs_on_axis(polynomial: fmpq_poly) -> int:
    """Count the pairs of roots that lie exactly on the imaginary axis.

    They are roots of the polynomial and of its mirror image p(−s); what the two share is even or odd,
    so that it is a polynomial in s², and its pairs on the axis are that one's negative real roots.
    """
    mirrored = fmpq_poly([value * (-1) ** power for power, value in enumerate(polynomial.coeffs())])
    shared = polynomial.gcd(mirrored).coeffs()
    in_square = fmpq_poly(list(shared[::2]) if shared[0] != 0 else list(shared[1::2]))
    if in_square.degree() < 1:
        return 0
    balls: Any = in_square.numer().complex_roots()
    return sum(count for ball, count in balls if ball.imag == 0 and ball.real < 0)


def shared_roots(one: Sequence[Fraction], other: Sequence[Fraction]) -> tuple[Root, ...]:
    """Give the roots that both polynomials have, by their exact greatest common divisor."""
    common = rational_polynomial(one).gcd(rational_polynomial(other))
    return roots([fraction(value) for value in common.coeffs()])


def _root(ball: Any, multiplicity: int) -> Root:
    real, real_radius = _float(ball.real)
    imaginary, imaginary_radius = _float(ball.imag)
    return Root(real, imaginary, max(real_radius, imaginary_radius), multiplicity)


def _float(ball: Any) -> tuple[float, float]:
    """Give the nearest float of a ball's middle, and a radius that also covers that rounding."""
    middle = float(ball.mid())
    if ball.is_exact() and abs(middle) < 2**53 and middle.is_integer():
        return middle, 0.0
    return middle, float(ball.rad()) + math.ulp(middle)


def _order(root: Root) -> tuple[float, float, float]:
    return math.hypot(root.real, root.imaginary), root.real, root.imaginary
