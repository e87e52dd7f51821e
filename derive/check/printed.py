"""The printed numbers against the printed expressions: gain, coefficients, poles and zeros.

The roads judge the expressions. A figure on the sheet is only as good as its agreement with them.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from fractions import Fraction

from derive.normalise.form import CertifiedRoot, NominalNumbers

# Roots are printed as floats, so that what they multiply out to is rounded too.
TOLERANCE = 1e-9
Complex = tuple[Fraction, Fraction]


def wrong_number(
    numbers: NominalNumbers,
    gain: Fraction,
    top: Sequence[Fraction],
    bottom: Sequence[Fraction],
) -> str:
    """Name the printed number that disagrees with the printed expressions; "" where none does.

    Given: the values of the form's gain and coefficients. A response without a finite gain at these
    values prints no normalised numbers, and none is judged.
    """
    if numbers.gain is None or not numbers.top or not numbers.bottom or not numbers.top[0]:
        return ""
    if not _close(numbers.gain, gain, abs(gain)):
        return "gain"
    for letter, word, values, dense, roots in (
        ("a", "zeros", top, numbers.top, numbers.zeros),
        ("b", "poles", bottom, numbers.bottom, numbers.poles),
    ):
        for power in range(max(len(values), len(dense))):
            shown = dense[power] / dense[0] if power < len(dense) else Fraction(0)
            value = values[power] if power < len(values) else Fraction(0)
            if not _close(shown, value, abs(value)):
                return f"{letter}_{power}"
        if not _multiply_out(roots, [value / dense[0] for value in dense]):
            return word
    return ""


def _multiply_out(roots: Sequence[CertifiedRoot], coefficients: Sequence[Fraction]) -> bool:
    """Say whether the product of (1 - s/root) has these coefficients, each relative to its terms."""
    product: list[Complex] = [(Fraction(1), Fraction(0))]
    sizes = [1.0]
    rounding = TOLERANCE
    for root in roots:
        if not root.magnitude:
            return False
        rounding = max(rounding, 4 * len(coefficients) * root.radius / root.magnitude)
        for _ in range(root.multiplicity):
            product = _times(product, root)
            grown = [size / root.magnitude for size in sizes]
            sizes = [a + b for a, b in zip((*sizes, 0.0), (0.0, *grown), strict=True)]
    if len(product) != len(coefficients):
        return False
    return all(
        _close(real, wanted, Fraction(size), rounding) and abs(imaginary) <= rounding * size
        for (real, imaginary), wanted, size in zip(product, coefficients, sizes, strict=True)
    )


def _times(polynomial: list[Complex], root: CertifiedRoot) -> list[Complex]:
    real, imaginary = Fraction(root.real), Fraction(root.imaginary)
    square = real**2 + imaginary**2
    over: Complex = (-real / square, imaginary / square)
    shifted = [(a * over[0] - b * over[1], a * over[1] + b * over[0]) for a, b in polynomial]
    none: Complex = (Fraction(0), Fraction(0))
    return [(a + c, b + d) for (a, b), (c, d) in zip((*polynomial, none), (none, *shifted), strict=True)]


def _close(one: Fraction, other: Fraction, size: Fraction, tolerance: float = TOLERANCE) -> bool:
    return math.isfinite(tolerance) and abs(one - other) <= Fraction(tolerance) * size
