"""The nouns of a result: the normal form of a response, and its numbers at the nominal values."""

from __future__ import annotations

import math
from dataclasses import dataclass
from fractions import Fraction

from derive.expressions.tree import ZERO, Expression


@dataclass(frozen=True, slots=True)
class NormalForm:
    """H(s) = gain · s^power_of_s · (sum numerator[k]·s^k) / (sum denominator[k]·s^k).

    Both polynomials begin with 1. An identically zero response has gain 0 and both equal to (1,).
    `definitions` gives, in an order in which each needs earlier ones only, the names in gain and
    coefficients that are no symbols of the circuit: a form too large to be multiplied out is written with
    such names. `shared` is the degree of a factor in s that top and bottom may then have in common; where
    `at_points`, the definitions have whole numbers in the place of s.
    """

    gain: Expression
    power_of_s: int
    numerator: tuple[Expression, ...]
    denominator: tuple[Expression, ...]
    definitions: tuple[tuple[str, Expression], ...] = ()
    shared: int = 0
    at_points: bool = False

    @property
    def is_zero(self) -> bool:
        """Whether the response is zero for all values."""
        return self.gain == ZERO


@dataclass(frozen=True, slots=True)
class CertifiedRoot:
    """A root in rad/s: `real` and `imaginary` are within `radius` of the true root."""

    real: float
    imaginary: float
    radius: float
    multiplicity: int

    @property
    def magnitude(self) -> float:
        """The root's distance from the origin, in rad/s."""
        return math.hypot(self.real, self.imaginary)

    @property
    def hertz(self) -> float:
        """The magnitude as a frequency in Hz."""
        return self.magnitude / (2 * math.pi)

    @property
    def quality(self) -> float | None:
        """The quality factor Q of a complex pair; None for a real root or one on the axis."""
        if self.imaginary == 0 or self.real == 0:
            return None
        return self.magnitude / (2 * abs(self.real))


@dataclass(frozen=True, slots=True)
class NominalNumbers:
    """The response at the nominal values: exact polynomials, and roots with certified bounds.

    `top` and `bottom` are the exact coefficients of numerator and denominator by rising powers of s,
    before normalising (their lowest coefficient may vanish at these values). `coincident` lists the
    roots that top and bottom share at these values and at these only.
    """

    gain: Fraction | None
    top: tuple[Fraction, ...]
    bottom: tuple[Fraction, ...]
    zeros: tuple[CertifiedRoot, ...]
    poles: tuple[CertifiedRoot, ...]
    coincident: tuple[CertifiedRoot, ...]
