"""The nouns of estimates: poles and zeros in closed form, corner frequencies, and the errors of rules of thumb."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

from derive.expressions.tree import Expression
from derive.readable.form import Definition


@dataclass(frozen=True, slots=True)
class ClosedForm:
    """A root in symbols, exactly: a real root, or ω_0 and Q of a quadratic whose roots are not two real ones.

    `of` is "pole" or "zero"; `name` a symbol for it (omega_p1, omega_z1, omega_0, Q); `value` at the nominal
    values in rad/s (Q a pure number), None where open. `says` names it in words: "right half-plane zero".
    """

    of: Literal["pole", "zero"]
    name: str
    expression: Expression
    readable: Expression
    value: float | None
    says: str


@dataclass(frozen=True, slots=True)
class Estimate:
    """A rule of thumb's value against the truth.

    `formula` is in the coefficients b_1, b_2, … of the normal form; that of the two-factor rules is the
    polynomial in s which takes the denominator's place, not the frequency itself. `value` and `exact` are
    in rad/s for poles (real ones only) and in Hz for frequencies (`unit`); `error` is
    (value − exact)/exact, signed. `usable` and `says` state whether it may be used here and why.
    """

    name: str
    formula: Expression
    unit: Literal["rad/s", "Hz"]
    value: float
    exact: float
    error: float
    usable: bool
    says: str


@dataclass(frozen=True, slots=True)
class Bandwidth:
    """Where the response crosses the half-power line: |H| = reference/√2.

    `reference` is the magnitude that the fall is counted from and `reference_says` which one that is;
    `crossings_hz` holds every crossing, rising. `low_hz` and `high_hz` are the edges of the pass band around the
    reference, None where it is open on that side.
    """

    reference: float
    reference_says: str
    crossings_hz: tuple[float, ...]
    low_hz: float | None
    high_hz: float | None
    remark: str = ""


@dataclass(frozen=True, slots=True)
class RootSensitivity:
    """How a root follows each part: (x/p)·dp/dx, a complex number (real part: relative change of its size).

    `quality` is (x/Q)·dQ/dx of a complex pair by every such part, () for a real root and one without a Q.
    """

    of: Literal["pole", "zero"]
    index: int
    root: complex
    by_symbol: tuple[tuple[str, complex], ...]
    quality: tuple[tuple[str, float], ...] = ()


@dataclass(frozen=True, slots=True)
class Limit:
    """What the result's gain becomes as one symbol goes to zero or infinity; `limit` None where infinite."""

    symbol: str
    to: Literal["0", "inf"]
    limit: Expression | None


@dataclass(frozen=True, slots=True)
class Estimates:
    """All that is said of poles, zeros and corner frequencies of one response.

    `remark` says in words why there is no bandwidth, "" where there is one; `rules_remark` why the rules
    for real poles, or one of them, are not there, "" where nothing is to be said.
    """

    closed_forms: tuple[ClosedForm, ...]
    estimates: tuple[Estimate, ...]
    bandwidth: Bandwidth | None
    sensitivities: tuple[RootSensitivity, ...]
    limits: tuple[Limit, ...]
    definitions: tuple[Definition, ...] = ()
    remark: str = ""
    rules_remark: str = ""
