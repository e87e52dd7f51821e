"""The nouns of the register of assumptions: each with its reduced result, its errors and its status."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

from derive.algebra.ring import Polynomial, Ring
from derive.expressions.tree import Expression
from derive.normalise.form import NominalNumbers, NormalForm
from derive.readable.form import Definition, ReadableForm
from derive.topology.topology import Assumption, Budget

Status = Literal["holds", "fails at a corner", "fails", "not checked"]
How = Literal["circuit", "substitution", "coefficients"]


@dataclass(frozen=True, slots=True)
class StruckTerm:
    """A term taken out of the coefficient of s^power, and the kept term that it is small against.

    `against` is None where it was dropped for its size alone.
    """

    of: Literal["numerator", "denominator"]
    power: int
    term: Expression
    against: Expression | None


@dataclass(frozen=True, slots=True)
class ShownCoefficient:
    """A coefficient of s^power as it was, what is struck in it shown struck."""

    of: Literal["numerator", "denominator"]
    power: int
    expression: Expression


@dataclass(frozen=True, slots=True, eq=False)
class Reduced:
    """A result after an assumption and all those before it: H = top/bottom in lowest terms over `ring`.

    `how` is "circuit" where elements were taken out or shorted (a limit that is exact), "substitution"
    where a name was put for another, "coefficients" where terms were struck. `says` tells it in words:
    "R_B removed". Where terms were struck, `left` is numerator and denominator before they were brought to
    lowest terms: with the struck terms they make up what was there before. `ring` is a plain one (nothing
    inverted) that holds s and every symbol of the band's circuit, merged or not. `shown` are the coefficients short
    enough to be read in which terms were struck.
    """

    form: NormalForm
    readable: ReadableForm
    numbers: NominalNumbers | None
    ring: Ring
    top: Polynomial
    bottom: Polynomial
    how: How
    says: str
    struck: tuple[StruckTerm, ...] = ()
    left: tuple[Polynomial, Polynomial] | None = None
    shown: tuple[ShownCoefficient, ...] = ()


@dataclass(frozen=True, slots=True)
class RootError:
    """A pole or zero of the reduced result against the exact one matched to it; `error` is signed.

    `exact` and `error` are None where the exact result has no partner for it.
    """

    approximate: complex
    exact: complex | None
    error: float | None


@dataclass(frozen=True, slots=True)
class FrequencyError:
    """The errors at one frequency, which `name` says in words: "upper −3 dB frequency"."""

    name: str
    hertz: float
    magnitude_db: float
    phase_deg: float


@dataclass(frozen=True, slots=True)
class Errors:
    """What a reduced result differs from the exact one by: (approximate − exact)/exact, signed.

    `gain` is None where the powers of s differ. `magnitude_db` and `phase_deg` are the worst over
    `range_hz`, signed; `low_edge` and `high_edge` the errors of the −3 dB frequencies, None where one of
    the two results has none. `lost_poles` and `lost_zeros` are exact roots that the reduced result has not.
    """

    gain: float | None
    magnitude_db: float
    phase_deg: float
    range_hz: tuple[float, float]
    poles: tuple[RootError, ...]
    zeros: tuple[RootError, ...]
    lost_poles: tuple[complex, ...] = ()
    lost_zeros: tuple[complex, ...] = ()
    low_edge: float | None = None
    high_edge: float | None = None
    at: tuple[FrequencyError, ...] = ()


@dataclass(frozen=True, slots=True)
class Worst:
    """The worst over the corners of the tolerances of ratio, gain, magnitude and phase, each by itself.

    `at` says at which corner the status is decided: ("R_1 +1 %", "R_2 −1 %"); empty at the nominal values.
    """

    ratio: float | None
    gain: float | None
    magnitude_db: float
    phase_deg: float
    at: tuple[str, ...] = ()


@dataclass(frozen=True, slots=True, eq=False)
class Entry:
    """One assumption and its price.

    `number` counts the assumptions of the file from 1. `smaller` and `larger` are the two terms compared, and
    `ratio` the first over the second at the nominal values; for a limit, what it leaves out over what stays, in
    the coefficient where that is most. `alone` are the errors of the assumption by itself, `together` with those
    before it; None where a value is open. `reason` says why the status is what it is. For a tie `ratio` is by
    how much the two sides differ, relative to the second.
    """

    number: int
    assumption: Assumption
    smaller: Expression | None
    larger: Expression | None
    ratio: float | None
    reduced: Reduced
    alone: Errors | None
    together: Errors | None
    worst: Worst | None
    status: Status
    reason: str


@dataclass(frozen=True, slots=True, eq=False)
class Register:
    """The assumptions made for one result, in order, each on top of those before it.

    `idle` are the numbers of the assumptions that change nothing in this result; `corners` and `sampling`
    say in words which corners and frequencies were looked at; `range_says` where the range comes from;
    `remark` why nothing was worked out, "" where it was; `definitions` are those of the words used.
    """

    entries: tuple[Entry, ...]
    budget: Budget
    range_hz: tuple[float, float]
    range_says: str
    corners: str
    sampling: str
    idle: tuple[int, ...] = ()
    remark: str = ""
    definitions: tuple[Definition, ...] = ()

    @property
    def failed(self) -> bool:
        """Whether an assumption fails, at the nominal values or at a corner."""
        return any(entry.status in ("fails", "fails at a corner") for entry in self.entries)
