"""The nouns of Miller's effect: a capacitor that bridges two nodes, seen as one at each of them."""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction

from derive.expressions.tree import Expression
from derive.readable.form import Definition


@dataclass(frozen=True, slots=True)
class MillerError:
    """What the approximation makes of one quantity, and the truth; `error` is relative and signed.

    A pair of poles stands once, by its upper member. Roots in opposite half-planes, or a real one against
    a pair, have no error (None): `says` tells why. `exact` is None for a pole that the circuit has not.
    """

    name: str
    approximate: complex
    exact: complex | None
    error: float | None
    says: str = ""


@dataclass(frozen=True, slots=True)
class MillerView:
    """One bridging capacitor by Miller's theorem.

    `gain` is the voltage of the far node over that of the near one as a ratio numerator/denominator in s,
    capacitor in place (`gain_numerator`, `gain_denominator`: coefficients by rising power, `gain` its value
    at zero frequency). `input_factor` is 1 − A_0, `output_factor` 1 − 1/A_0, each times the capacitor.
    `errors` compares the response with both halves in the capacitor's place; () where a value is open.
    `usable` says whether the approximation may be used, if only for the pole that is judged, `reasons` why
    not (or within what). That is the first pole, unless it does not follow the capacitor.

    `halves` is the two halves' value in farads, near and far, None where a value is open; one may be
    negative. `missing_zeros` are the response's zeros, in rad/s, that the approximation does not have.
    """

    part: str
    symbol: str
    element: str
    near: str
    far: str
    gain: Expression
    gain_numerator: tuple[Expression, ...]
    gain_denominator: tuple[Expression, ...]
    input_factor: Expression
    output_factor: Expression
    errors: tuple[MillerError, ...]
    usable: bool | None
    reasons: tuple[str, ...]
    definitions: tuple[Definition, ...] = ()
    halves: tuple[Fraction, Fraction] | None = None
    missing_zeros: tuple[complex, ...] = ()
