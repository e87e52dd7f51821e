"""The nouns of a comparison: the stages side by side, each with its figures and its response."""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction

from derive.check.verdict import Outcome, Result, Solution
from derive.quantities.dimension import Dimension
from derive.response.traces import Point
from derive.topology.topology import BandName, Find, Topology


@dataclass(frozen=True, slots=True)
class Level:
    """A response's value at one frequency: `exact` where it is real there, and its size and angle.

    `magnitude` may be infinite.
    """

    exact: Fraction | None
    magnitude: float
    degrees: float


@dataclass(frozen=True, slots=True)
class PortImpedance:
    """An impedance at one port of a stage in the mid band.

    `says` is what is in and what is out, `between` the nodes alone. `result` holds the derivation and its
    checks; where there is none, `remark` says why, and `level` may still be known (infinite where nothing
    conducts).
    """

    says: str
    level: Level | None
    result: Result | None = None
    remark: str = ""
    between: str = ""


@dataclass(frozen=True, slots=True)
class PastSource:
    """The input impedance without the resistor that alone joins the drive to the stage."""

    resistor: str
    level: Level


@dataclass(frozen=True, slots=True)
class Stage:
    """One stage with all that is compared.

    `main` is its response in the band that stands for the mid band, `at_hertz` its frequency there
    (0 for all frequencies that are low enough, infinite for all that are high enough). `low_hz` and
    `high_hz` are None where the pass band is open on that side or where it is not known.
    """

    name: str
    topology: Topology
    outcome: Outcome
    find: Find
    dimension: Dimension
    main: Solution
    at_hertz: float
    gain: Level | None
    low_hz: float | None
    high_hz: float | None
    gain_bandwidth_hz: float | None
    input: PortImpedance
    past_source: PastSource | None
    output: PortImpedance
    curve: tuple[Point, ...] = ()
    remarks: tuple[str, ...] = ()

    @property
    def band(self) -> BandName:
        """The band that stands for the mid band."""
        return self.main.band_name

    @property
    def bands(self) -> tuple[BandName, ...]:
        """The bands in which the stage was worked."""
        return tuple(result.solution.band_name for result in self.outcome.results)

    @property
    def results(self) -> tuple[tuple[str, Result], ...]:
        """Everything that was derived for this stage, each under a name for a reader."""
        own = [
            (f"{self.find.name}, {band} band" if len(self.bands) > 1 else self.find.name, result)
            for band, result in zip(self.bands, self.outcome.results, strict=True)
        ]
        ports = (("input impedance", self.input), ("output impedance", self.output))
        return (*own, *((name, port.result) for name, port in ports if port.result is not None))

    @property
    def passed(self) -> bool:
        """Whether no check failed on anything that was derived for this stage."""
        return self.outcome.passed and all(result.passed for _, result in self.results)


@dataclass(frozen=True, slots=True)
class Comparison:
    """Stages side by side; `find` is the name that was asked for, None where each shows its first gain."""

    stages: tuple[Stage, ...]
    find: str | None = None

    @property
    def passed(self) -> bool:
        """Whether no check failed on any stage."""
        return all(stage.passed for stage in self.stages)
