"""Words for sizes of errors, frequencies and quality factors in the sentences on estimates."""

from __future__ import annotations

import math

from derive.quantities.dimension import FREQUENCY, RATIO
from derive.quantities.format import engineering


def percent(error: float, digits: int = 2) -> str:
    """Give the size of a relative error in percent: 0.0823 is "8.2 %"."""
    return f"{engineering(100 * abs(error), RATIO, digits)} %"


def hertz(value: float) -> str:
    """Give a frequency with its unit: "1.59 kHz"."""
    return engineering(value, FREQUENCY, 3, unit="Hz")


def plain(value: float) -> str:
    """Give a pure number to three digits."""
    return engineering(value, RATIO, 3)


def decibels(power_ratio: float) -> str:
    """Give a ratio of powers in dB."""
    return f"{engineering(10 * math.log10(power_ratio), RATIO, 3)} dB"
