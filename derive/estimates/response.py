"""A response at its nominal values, exact: in s, and its squared magnitude as a ratio in x = ω²."""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from typing import Any

from flint import arb, ctx, fmpq_poly

from derive.algebra.rationals import fraction
from derive.algebra.roots import rational_polynomial, roots
from derive.normalise.form import NominalNumbers

# Far beyond a float, so that what is printed is exact to its last digit.
BITS = 256


@dataclass(frozen=True, slots=True, eq=False)
class Response:
    """H(s) = top/bottom in lowest terms, and |H(jω)|² = square_top/square_bottom in x = ω², likewise."""

    top: Any
    bottom: Any
    square_top: Any
    square_bottom: Any

    @property
    def is_level(self) -> bool:
        """Whether the magnitude is the same at all frequencies."""
        return bool(self.square_top.degree() <= 0 and self.square_bottom.degree() <= 0)

    @property
    def square_at_zero(self) -> Fraction | None:
        """|H(0)|²; None where it is infinite."""
        below = self.square_bottom[0]
        return None if below == 0 else fraction(self.square_top[0] / below)

    @property
    def square_at_infinity(self) -> Fraction | None:
        """The limit of |H|² at high frequency; None where it is infinite."""
        above, below = self.square_top.degree(), self.square_bottom.degree()
        if above > below:
            return None
        return fraction(self.square_top[below] / self.square_bottom[below])

    @property
    def rises_from_zero(self) -> bool:
        """Whether the magnitude rises as the frequency leaves zero."""
        return next((value > 0 for value in self.slope.coeffs() if value != 0), False)

    @property
    def slope(self) -> Any:
        """The numerator of the derivative of |H|² by x."""
        top, bottom = self.square_top, self.square_bottom
        return top.derivative() * bottom - top * bottom.derivative()

    @property
    def lowest_corner_is_zero(self) -> bool:
        """Whether a zero lies below every pole; zeros and poles at the origin do not count."""
        zeros, poles = corners(self.top), corners(self.bottom)
        return bool(zeros) and (not poles or zeros[0] < poles[0])

    def square_at(self, x: Any) -> Any:
        """Give |H|² at a ball x, as a ball."""
        return _at(self.square_top, x) / _at(self.square_bottom, x)


@dataclass(frozen=True, slots=True, eq=False)
class PositiveRoot:
    """A positive real root as a ball with a proven radius."""

    ball: Any
    multiplicity: int

    @property
    def hertz(self) -> float:
        """The frequency that belongs to x = ω², in Hz."""
        with ctx.workprec(BITS):
            return float((self.ball.sqrt() / (2 * arb.pi())).mid())


def response_of(numbers: NominalNumbers, power_of_s: int) -> Response | None:
    """Give the response at the nominal values; None where it is zero or undefined."""
    if not any(numbers.top) or not any(numbers.bottom):
        return None
    return make_response(
        rational_polynomial(numbers.top), rational_polynomial(numbers.bottom), power_of_s
    )


def make_response(top: Any, bottom: Any, power_of_s: int) -> Response:
    """Bring s to a power times a ratio of polynomials to lowest terms, and give its squared magnitude too."""
    s = fmpq_poly([0, 1])
    top, bottom = top * s ** max(power_of_s, 0), bottom * s ** max(-power_of_s, 0)
    shared = top.gcd(bottom)
    top, bottom = top // shared, bottom // shared
    square_top, square_bottom = _square(top), _square(bottom)
    shared = square_top.gcd(square_bottom)
    return Response(top, bottom, square_top // shared, square_bottom // shared)


def positive_roots(polynomial: Any) -> list[PositiveRoot]:
    """Give the positive real roots of a rational polynomial, rising."""
    if polynomial.degree() < 1:
        return []
    with ctx.workprec(BITS):
        found = polynomial.numer().complex_roots()
        real = [
            PositiveRoot(ball.real, count) for ball, count in found if ball.imag == 0 and ball.real > 0
        ]
        return sorted(real, key=lambda root: fraction_of(root.ball))


def corners(polynomial: Any) -> list[float]:
    """Give the magnitudes of a polynomial's roots but for those at the origin, rising."""
    found = roots([fraction(value) for value in polynomial.coeffs()])
    return [size for root in found if (size := abs(complex(root.real, root.imaginary))) > 0]


def fraction_of(ball: Any) -> Fraction:
    """Give the middle of a real ball, exactly."""
    mantissa, exponent = ball.mid().man_exp()
    return Fraction(int(mantissa)) * Fraction(2) ** int(exponent)


def parts(polynomial: Any) -> tuple[Any, Any]:
    """Give the even and the odd part with s² = −x, so that p(jω) = even + jω·odd."""
    values = polynomial.coeffs()
    even = fmpq_poly([value * (-1) ** k for k, value in enumerate(values[::2])])
    odd = fmpq_poly([value * (-1) ** k for k, value in enumerate(values[1::2])])
    return even, odd


def _square(polynomial: Any) -> Any:
    """Give |p(jω)|² = E² + x·O² in x = ω², E and O being the even and the odd part."""
    even, odd = parts(polynomial)
    return even * even + fmpq_poly([0, 1]) * odd * odd


def _at(polynomial: Any, x: Any) -> Any:
    total = arb(0)
    for value in reversed(polynomial.coeffs()):
        total = total * x + arb(value)
    return total
