"""The nouns of a derivation: the plan, and steps that each can be replayed on its own."""

from __future__ import annotations

from dataclasses import dataclass

from derive.algebra.ring import Polynomial
from derive.expressions.tree import Equation, Expression
from derive.nodal.system import NodalSystem


@dataclass(frozen=True, slots=True)
class PlanLine:
    """Solve `equation` (its index in the system) for `unknown`; `terms` estimates the cost."""

    unknown: str
    equation: int
    into: tuple[int, ...]
    terms: int


@dataclass(frozen=True, slots=True)
class Plan:
    """The order of elimination; the wanted unknown is last."""

    lines: tuple[PlanLine, ...]


@dataclass(frozen=True, slots=True)
class Certificate:
    """Why an equation follows: sum of multiplier·(left - right) over `uses` = divisor·(left - right).

    `uses` holds (number of an earlier step, multiplier). The divisor is not zero for generic values.
    """

    uses: tuple[tuple[int, Expression], ...]
    divisor: Expression


@dataclass(frozen=True, slots=True)
class Step:
    """One numbered equation of the derivation and the reason for it.

    A step without a certificate is either an equation of the circuit (`row` is its index in the
    system) or the definition of a new name (`defines`). `subject` is the unknown or name the step is
    about, `factor` what was multiplied by or cancelled, `nonzero` a divisor stated not to be zero.
    """

    number: int
    rule: str
    equation: Equation
    certificate: Certificate | None = None
    row: int | None = None
    defines: str | None = None
    subject: str | None = None
    factor: Expression | None = None
    nonzero: Expression | None = None


@dataclass(frozen=True, slots=True)
class Nested:
    """Why a derivation is by nested lines, nothing multiplied out.

    `terms` is the number of terms that the denominator would have, None where there was no counting them;
    it is `exact` unless products cancel. `asked` says whether the user asked for this form. `pivots` are
    the coefficients divided by, the last included: their product is the determinant but for its sign.
    """

    terms: int | None
    exact: bool = True
    asked: bool = False
    pivots: tuple[Expression, ...] = ()


@dataclass(frozen=True, slots=True)
class Derivation:
    """The steps from the circuit's equations to wanted/input = numerator/denominator in lowest terms.

    The two polynomials are over the system's ring with no name inverted. A derivation by nested lines has
    none: there they are None.
    """

    system: NodalSystem
    plan: Plan
    steps: tuple[Step, ...]
    numerator: Polynomial
    denominator: Polynomial
    nested: Nested | None = None
