"""The nouns of simplification: what is asked of a response, and the short form that answers it."""

from __future__ import annotations

from dataclasses import dataclass, replace
from fractions import Fraction
from typing import Literal

from derive.algebra.ring import Polynomial, Ring
from derive.expressions.tree import Expression
from derive.readable.form import Definition
from derive.topology.topology import Assumption, Topology

Kind = Literal[
    "low-frequency gain",
    "dominant pole",
    "unity-gain frequency",
    "second pole",
    "response in a band",
]
# Within this a corner is called known: common practice for a hand calculation.
CORNER_LIMIT = Fraction(1, 10)
# A form of up to so many terms, numerator and denominator together, is one line.
ONE_LINE = 12


@dataclass(frozen=True, slots=True)
class Question:
    """What a short form is sought for; one form for all questions would be unreadable.

    `range_hz` is needed by a response in a band and by no other. `corner_limit` is what a pole or the
    unity-gain frequency may be off by, as a fraction; gain and response go by the budget.
    """

    kind: Kind
    range_hz: tuple[float, float] | None = None
    corner_limit: Fraction = CORNER_LIMIT


FOUR_QUESTIONS = (
    Question("low-frequency gain"),
    Question("dominant pole"),
    Question("unity-gain frequency"),
    Question("second pole"),
)


@dataclass(frozen=True, slots=True)
class Price:
    """What a short form is off by against the original circuit, signed: (short − original)/original.

    `relative` is the error of a single value; None for a response in a band, which has its worst errors of
    magnitude and phase instead and where they are. `used` is the part of the budget that this takes.
    """

    relative: float | None
    used: float
    magnitude_db: float | None = None
    magnitude_at_hz: float | None = None
    phase_deg: float | None = None
    phase_at_hz: float | None = None


@dataclass(frozen=True, slots=True)
class Without:
    """One assumption by the tool, with the part of the budget that is used once it is made.

    `used` is None where it was made together with others.
    """

    assumption: Assumption
    used: float | None


@dataclass(frozen=True, slots=True, eq=False)
class Simplified:
    """The short form that answers a question, what was assumed for it, and what it is off by.

    `status` is "found"; "exact" where nothing may be dropped within the budget, so that the form is exact;
    or "refused", with no form and the reason. `left` of the equation is p_1, ω_u and the like;
    `form` is exact in the symbols that are left, and readable. top/bottom are its polynomials over `ring`: the
    response itself, or the two coefficients whose ratio, or the root of it (`root` = 2), is the answer.
    A form of several lines has no such polynomials: its lines stand among `definitions`, each after what it needs, and
    `says` tells what they mean; `terms` is then that of the longest.
    `beyond` is a form of one line that goes beyond the budget, where there is none of one line within it.
    `idle` are elements that the response no longer depends on once the assumptions are made; `kept` those that
    are left. `value` and `original` are those of the short form and of the whole circuit: the gain, or rad/s.
    """

    question: Question
    status: Literal["found", "exact", "refused"]
    reason: str
    left: str
    form: Expression | None = None
    definitions: tuple[Definition, ...] = ()
    says: tuple[tuple[str, str], ...] = ()
    assumptions: tuple[Without, ...] = ()
    unlisted: int = 0
    idle: tuple[str, ...] = ()
    kept: tuple[str, ...] = ()
    ring: Ring | None = None
    top: Polynomial = None
    bottom: Polynomial = None
    root: int = 1
    terms: int = 0
    value: float | None = None
    original: float | None = None
    price: Price | None = None
    sampling: str = ""
    remarks: tuple[str, ...] = ()
    beyond: Simplified | None = None

    @property
    def within(self) -> bool:
        """Whether there is a form with its error inside the budget."""
        return self.price is not None and self.price.used <= 1


def with_short_forms(topology: Topology) -> Topology:
    """Give a topology as if its budget asked for short forms."""
    return replace(topology, budget=replace(topology.budget, simplify=True))
