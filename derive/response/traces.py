"""The nouns of responses: traces against frequency and time, spans over tolerances, and what is marked on them."""

from __future__ import annotations

from dataclasses import dataclass

from derive.normalise.exact_response import ExactResponse


@dataclass(frozen=True, slots=True)
class Point:
    """A response at one frequency: magnitude in dB and phase in degrees, unwrapped along its curve."""

    hertz: float
    decibels: float
    degrees: float


@dataclass(frozen=True, slots=True)
class Trace:
    """A response under a name; `approximate` where it is not the exact one of the whole circuit."""

    name: str
    response: ExactResponse
    points: tuple[Point, ...]
    approximate: bool = True


@dataclass(frozen=True, slots=True)
class SpanPoint:
    """The least and the greatest over the corners of the tolerances, in dB and degrees, at one frequency."""

    hertz: float
    decibels: tuple[float, float]
    degrees: tuple[float, float]


@dataclass(frozen=True, slots=True)
class Span:
    """The span over the tolerances; `says` which corners were looked at."""

    points: tuple[SpanPoint, ...]
    says: str


@dataclass(frozen=True, slots=True)
class Rise:
    """The rise of a step response from 10 % to 90 % of its end: both times in seconds, and the overshoot.

    `overshoot` is a fraction of the end, 0 where there is none.
    """

    begin: float
    finish: float
    end: float
    overshoot: float

    @property
    def seconds(self) -> float:
        """The rise time."""
        return self.finish - self.begin


@dataclass(frozen=True, slots=True)
class StepCurve:
    """What follows a unit step, as (seconds, value) over a window of time."""

    name: str
    points: tuple[tuple[float, float], ...]
