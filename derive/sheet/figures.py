"""Numbers of a result as the sheet words them."""

from __future__ import annotations

import math
from fractions import Fraction

from derive.bias.operating_point import NewtonCheck
from derive.normalise.form import CertifiedRoot
from derive.quantities.dimension import FREQUENCY, RATIO, TIME, Dimension
from derive.quantities.format import engineering


def figure(value: Fraction | float | None, dimension: Dimension, digits: int = 5) -> str:
    """Word a value with its unit; "not finite" where there is none."""
    if value is None:
        return "not finite at these values"
    return engineering(value, dimension, digits)


def decibels(value: Fraction | None) -> str:
    """Word the magnitude of a pure ratio in decibels."""
    if value is None or value == 0:
        return ""
    # Logarithms of the integers, because a quotient of huge integers need not fit a float.
    size = math.log10(abs(value.numerator)) - math.log10(value.denominator)
    # Rounded first, so that no level reads −0.00 dB.
    return f"{round(20 * size, 2) + 0.0:.2f} dB".replace("-", "−")


def root_in_hertz(root: CertifiedRoot) -> str:
    """Word a root's distance from the origin as a frequency."""
    return engineering(root.hertz, RATIO / TIME, 5, unit="Hz")


def root_value(root: CertifiedRoot) -> str:
    """Word a root in rad/s; a pair as "a ± jb"."""
    real = engineering(root.real, RATIO / TIME, 6)
    if root.imaginary == 0:
        return real
    imaginary = engineering(abs(root.imaginary), RATIO / TIME, 6)
    if root.real == 0:
        return f"±j {imaginary}"
    return f"{real} ± j {imaginary}"


def error_bound(root: CertifiedRoot) -> str:
    """Word how far a root can be from the truth, relative to its size."""
    if root.radius == 0 or root.magnitude == 0:
        return "exact" if root.radius == 0 else f"{root.radius:.0e} rad/s"
    return _power_of_ten(root.radius / root.magnitude, 0)


def _power_of_ten(value: float, decimals: int) -> str:
    mantissa, _, exponent = f"{value:.{decimals}e}".partition("e")
    raised = str(int(exponent)).translate(str.maketrans("-0123456789", "⁻⁰¹²³⁴⁵⁶⁷⁸⁹"))
    return f"{mantissa} × 10{raised}"


def newton_difference(check: NewtonCheck) -> str:
    """Word how far Newton's method is from the current derived by hand."""
    if not math.isfinite(check.difference):
        return "not compared: no convergence"
    # Rounded first, so that no difference reads −0.00 %.
    return f"{round(100 * check.difference, 2) + 0.0:+.2f} %".replace("-", "−")


def percent(share: float | None) -> str:
    """Word a share in two figures: 0.7531 is "75 %"; a dash where there is none."""
    if share is None or not math.isfinite(share):
        return "–"
    if share and abs(share) < 1e-4:
        return "< 0.01 %"
    # From 99.5 % on two figures would round to 100, which stands for the whole.
    digits = 2 if abs(share) < 0.995 else 3
    return f"{engineering(100 * share, RATIO, digits)} %"


def signed_percent(error: float) -> str:
    """Word a relative error with its sign, in three figures: −0.15013 is "−15 %"."""
    if not math.isfinite(error):
        return "not finite"
    if abs(error) < 1e-9:
        return "0 %"
    return f"{'+' if error > 0 else ''}{engineering(100 * error, RATIO, 3)} %"


def hertz(value: float, digits: int = 4) -> str:
    """Word a frequency: "790.5 kHz"."""
    return engineering(value, FREQUENCY, digits, unit="Hz")


def complex_figure(value: complex, dimension: Dimension, digits: int = 4) -> str:
    """Word a complex number with its unit: "−4.97 Mrad/s", "−3 rad/s + j 4 rad/s"."""
    if not value.imag:
        return engineering(value.real, dimension, digits)
    turned = f"j {engineering(abs(value.imag), dimension, digits)}"
    if not value.real:
        return f"−{turned}" if value.imag < 0 else turned
    sign = "−" if value.imag < 0 else "+"
    return f"{engineering(value.real, dimension, digits)} {sign} {turned}"


def times(ratio: float) -> str:
    """Word a ratio in two figures: "0.18", "24", "4.6 × 10⁵"."""
    if ratio == 0 or 0.01 <= abs(ratio) < 1000:
        # From 99.5 on two figures would round to 100, which the format writes as 1e+02.
        return f"{ratio:.2g}" if abs(ratio) < 99.5 else f"{ratio:.0f}"
    return _power_of_ten(ratio, 1)


def side(root: CertifiedRoot) -> str:
    """Say in which half-plane a root lies."""
    if root.real == 0:
        return "on the imaginary axis" if root.imaginary else "at the origin"
    return "left half-plane" if root.real < 0 else "right half-plane"
