"""Where the mid band lies, and what a response is worth there: exactly where it is constant around it."""

from __future__ import annotations

import cmath
import math
from fractions import Fraction

from derive.check.verdict import Solution
from derive.compare.comparison import Level
from derive.estimates.estimates import Bandwidth
from derive.normalise.exact_response import ExactResponse, ratio_at

# Of the sum of the sizes of terms: less than this is rounding of the frequency.
CANCELLED = 1e-12
INFINITE = Level(None, math.inf, 0.0)


def response_of(solution: Solution) -> ExactResponse | None:
    """Give a solution's response at nominal values with every power of s in place; None where open."""
    numbers = solution.numbers
    if numbers is None or not any(numbers.bottom):
        return None
    power = solution.form.power_of_s
    return ExactResponse(
        (Fraction(0),) * max(power, 0) + numbers.top, (Fraction(0),) * max(-power, 0) + numbers.bottom
    )


def bandwidth_of(solution: Solution) -> Bandwidth | None:
    """Give where a solution falls by 3 dB, where that was found."""
    return solution.estimates.bandwidth if solution.estimates else None


def mid_frequency(solution: Solution) -> float:
    """Give the frequency that stands for the mid band in a response.

    Without a low edge that is 0; with a low edge alone it is infinite; between two edges it is their
    geometric mean. Where no edges are known it is the end at which the response is constant.
    """
    bandwidth = bandwidth_of(solution)
    low, high = (bandwidth.low_hz, bandwidth.high_hz) if bandwidth else (None, None)
    if low is not None:
        return math.inf if high is None else math.sqrt(low) * math.sqrt(high)
    response = response_of(solution)
    if high is None and response is not None and not response.is_zero:
        at_ends = [level_at(response, hertz) for hertz in (0.0, math.inf)]
        if [bool(level.exact) for level in at_ends if level is not None] == [False, True]:
            return math.inf
    return 0.0


def level_at(response: ExactResponse, hertz: float) -> Level | None:
    """Give a response's value at a frequency, 0 and infinite included; None where it is not defined."""
    if response.is_zero:
        return Level(Fraction(0), 0.0, 0.0)
    if hertz == 0.0 or math.isinf(hertz):
        return _limit(response, at_zero=hertz == 0.0)
    if _vanishes(response.bottom, hertz):
        return INFINITE
    if _vanishes(response.top, hertz):
        return Level(None, 0.0, 0.0)
    value = ratio_at((response,), (), hertz)
    return None if value is None else level_of(value)


def _vanishes(polynomial: tuple[Fraction, ...], hertz: float) -> bool:
    """Say whether a polynomial's terms cancel at a frequency, which itself is known to a float's digits."""
    s, value, size = complex(0, 2 * math.pi * hertz), complex(0), 0.0
    largest = max(abs(entry) for entry in polynomial)
    for entry in reversed([float(entry / largest) for entry in polynomial]):
        value, size = value * s + entry, size * abs(s) + abs(entry)
    return abs(value) <= CANCELLED * size


def level_of(value: complex) -> Level:
    """Give a complex value as size and angle."""
    return Level(None, abs(value), math.degrees(cmath.phase(value)))


def real_level(value: Fraction) -> Level:
    """Give a real value as what it is."""
    try:
        magnitude = abs(float(value))
    except OverflowError:
        magnitude = math.inf
    return Level(value, magnitude, 180.0 if value < 0 else 0.0)


def reduced(level: Level, resistance: Fraction) -> Level:
    """Give an impedance less a resistance that is in series with the rest of it."""
    if level.exact is not None:
        return real_level(level.exact - resistance)
    if math.isinf(level.magnitude):
        return level
    return level_of(cmath.rect(level.magnitude, math.radians(level.degrees)) - float(resistance))


def _limit(response: ExactResponse, *, at_zero: bool) -> Level:
    """Give a response's limit at an end of the frequency axis, where one power of s rules each polynomial."""
    above, below = (
        (min if at_zero else max)(power for power, value in enumerate(polynomial) if value)
        for polynomial in (response.top, response.bottom)
    )
    if above == below:
        return real_level(response.top[above] / response.bottom[below])
    return real_level(Fraction(0)) if (above > below) == at_zero else INFINITE
