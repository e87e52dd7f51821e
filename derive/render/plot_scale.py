"""Turns an axis of a plot into a scale: its ends, its divisions, and the place of every value on it."""

from __future__ import annotations

import math
from collections.abc import Iterable
from dataclasses import dataclass
from fractions import Fraction

from derive.quantities.dimension import FREQUENCY
from derive.quantities.format import engineering
from derive.sheet.document import Axis

# A scale is divided at whole multiples of one of these, times a power of ten where it is linear.
LINEAR_STEPS = (1, 2, 5, 10)
DEGREE_STEPS = (1, 2, 5, 10, 15, 45, 90, 180, 360)
MOST_DIVISIONS = 8
MOST_QUARTERS = 6  # of a scale in degrees
FINE_DECADES = 7  # more decades than this are not divided within
MOST_LABELS = 10  # of decades


@dataclass(frozen=True, slots=True)
class Scale:
    """An axis ready to be drawn: `ticks` are labelled, `fine` divisions are not."""

    low: float
    high: float
    ticks: tuple[tuple[float, str], ...]
    fine: tuple[float, ...] = ()
    decades: bool = False

    def place(self, value: float) -> float:
        """Give where a value stands: 0 at the low end, 1 at the high end."""
        if self.decades:
            return math.log10(value / self.low) / math.log10(self.high / self.low)
        return (value - self.low) / (self.high - self.low)

    def shows(self, value: float) -> bool:
        """Say whether a value has a place on the scale at all."""
        return math.isfinite(value) and (value > 0 or not self.decades)


def scale_of(axis: Axis, values: Iterable[float]) -> Scale:
    """Give the scale of an axis; where it names no ends, they are drawn wide enough for the values."""
    if axis.scale == "decades":
        return _decades(axis, [value for value in values if math.isfinite(value) and value > 0])
    low, high = axis.ends or _spread([value for value in values if math.isfinite(value)])
    step = _step(high - low, axis.scale == "degrees")
    if axis.ends is None:
        low, high = float(step * math.floor(low / step)), float(step * math.ceil(high / step))
    first, last = math.ceil(low / step - 1e-9), math.floor(high / step + 1e-9)
    sign = "°" if axis.scale == "degrees" else ""
    ticks = [(float(step * k), f"{_decimal(step * k)}{sign}") for k in range(first, last + 1)]
    return Scale(low, high, tuple(ticks))


def _spread(values: list[float]) -> tuple[float, float]:
    """Give the ends of what is to be seen; one value alone is given room on both sides."""
    if not values:
        return 0.0, 1.0
    low, high = min(values), max(values)
    if high - low > 1e-9 * max(1.0, abs(low), abs(high)):
        return low, high
    room = max(1.0, abs(low) / 10)
    return low - room, high + room


def _step(span: float, circle: bool) -> Fraction:
    """Give the smallest step that divides a span into few enough parts."""
    least = span / (MOST_QUARTERS if circle else MOST_DIVISIONS)
    if circle and least >= 1:
        found = next((step for step in DEGREE_STEPS if step >= least), None)
        return Fraction(found or 360 * math.ceil(least / 360))
    power = Fraction(10) ** math.floor(math.log10(least))
    return next(step * power for step in LINEAR_STEPS if float(step * power) >= least * (1 - 1e-9))


def _decimal(value: Fraction) -> str:
    """Write a multiple of a step: a finite decimal, as a person writes it."""
    text = f"{float(value):.10f}".rstrip("0").rstrip(".") if abs(value) < 10**6 else f"{float(value):g}"
    return "0" if text == "-0" else text.replace("-", "−")


def _decades(axis: Axis, values: list[float]) -> Scale:
    low, high = axis.ends or (min(values, default=1.0), max(values, default=10.0))
    first, last = math.floor(math.log10(low) + 1e-9), math.ceil(math.log10(high) - 1e-9)
    last = max(last, first + 1)
    if axis.ends is None:
        low, high = 10.0**first, 10.0**last
    stride = math.ceil((last - first) / MOST_LABELS)
    whole = [
        k for k in range(first, last + 1) if low <= 10.0**k * (1 + 1e-9) and 10.0**k <= high * (1 + 1e-9)
    ]
    ticks = [(10.0**k, _power(k, axis.unit)) for k in whole if (k - first) % stride == 0]
    fine = [10.0**k for k in whole if (k - first) % stride]
    if last - first <= FINE_DECADES:
        fine += [
            m * 10.0**k for k in range(first, last) for m in range(2, 10) if low < m * 10.0**k < high
        ]
    return Scale(low, high, tuple(ticks), tuple(fine), decades=True)


def _power(exponent: int, unit: str) -> str:
    return engineering(Fraction(10) ** exponent, FREQUENCY, 3, unit=unit)
