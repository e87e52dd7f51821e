"""The nouns of checking: what is to be judged, and the verdict with its evidence."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Protocol

from derive.approximate.questions import Simplified
from derive.approximate.register import Register
from derive.bands.band_circuit import BandCircuit
from derive.bias.operating_point import OperatingPoint
from derive.devices.elements import SmallSignal
from derive.eliminate.derivation import Derivation
from derive.estimates.estimates import Estimates
from derive.normalise.band_report import BandsReport
from derive.normalise.form import NominalNumbers, NormalForm
from derive.reactances.miller import MillerView
from derive.reactances.time_constants import TimeConstants
from derive.readable.form import ReadableForm
from derive.topology.topology import BandName

# What is measured by a check that the user can do without, and did.
NOT_ASKED = "not asked for"


@dataclass(frozen=True, slots=True)
class Solution:
    """All that was derived for one wanted quantity in one band.

    `numbers` is None where a value was left open; `band` is the band's circuit, None where the derivation
    is on the circuit as it was written. `readable`, `time_constants`, `miller` and `estimates` say the same
    result in the words of the trade; None or () where they were not asked for or the circuit is too large.
    `register` holds the assumptions made for it, None where there are none; `simplified` the short forms that the
    tool found, where they were asked for.
    """

    derivation: Derivation
    form: NormalForm
    numbers: NominalNumbers | None
    band: BandCircuit | None = None
    readable: ReadableForm | None = None
    time_constants: TimeConstants | None = None
    miller: tuple[MillerView, ...] = ()
    estimates: Estimates | None = None
    register: Register | None = None
    simplified: tuple[Simplified, ...] = ()

    @property
    def band_name(self) -> BandName:
        """The band that it belongs to; "full" for the circuit as it was written."""
        return self.band.band if self.band else "full"

    @property
    def judged(self) -> SmallSignal:
        """The circuit that checks solve anew: that of the band, nothing merged."""
        return self.band.unmerged if self.band else self.derivation.system.small_signal


@dataclass(frozen=True, slots=True)
class Verdict:
    """The outcome of one check.

    `passed` is None where the check could not be finished, was not asked for, or does not apply because
    there is nothing to judge (then `applies` is False too): neither pass nor fail. `measured` and `limit`
    are printed as they stand.
    """

    name: str
    method: str
    passed: bool | None
    measured: str
    limit: str
    applies: bool = True


@dataclass(frozen=True, slots=True)
class Result:
    """A solution with the verdicts on it.

    `broken_steps` lists the steps whose proof failed, each with what is wrong.
    """

    solution: Solution
    verdicts: tuple[Verdict, ...]
    broken_steps: tuple[tuple[int, str], ...] = ()

    @property
    def passed(self) -> bool:
        """Whether no check failed, no step is broken, and no assumption fails."""
        register = self.solution.register
        sound = not self.broken_steps and (register is None or not register.failed)
        return sound and all(v.passed is not False for v in self.verdicts)


class Beside(Protocol):
    """What was judged beside the results, such as a hand derivation of one of them."""

    @property
    def passed(self) -> bool:
        """Whether all of it stands."""


@dataclass(frozen=True, slots=True)
class Outcome:
    """All results of one topology: its operating point where it has one, and its bands' circuits.

    `hand` is the report on the hand derivation that the topology names, None where it names none.
    """

    circuit: SmallSignal
    results: tuple[Result, ...]
    point: OperatingPoint | None = None
    bands: BandsReport | None = None
    hand: Beside | None = None

    @property
    def passed(self) -> bool:
        """Whether no check failed on any result, nor on the operating point, nor a line of the hand derivation."""
        aside = (self.point is None or self.point.passed) and (self.hand is None or self.hand.passed)
        return aside and all(result.passed for result in self.results)
