"""The figures of a comparison in words, the same on a terminal and on a sheet."""

from __future__ import annotations

import math
from collections.abc import Sequence

from derive.check.verdict import Solution
from derive.compare.comparison import Level, Stage
from derive.normalise.form import CertifiedRoot
from derive.quantities.dimension import RESISTANCE, Dimension
from derive.quantities.format import engineering
from derive.sheet.figures import decibels
from derive.sheet.figures import hertz as hertz_words

DIGITS = 4
NONE = "–"


def level_words(level: Level | None, dimension: Dimension) -> str:
    """Word a value; one that is not real as its size and angle."""
    if level is None:
        return NONE
    if level.exact is not None:
        return engineering(level.exact, dimension, DIGITS)
    if math.isinf(level.magnitude):
        return "infinite"
    angle = f"{round(level.degrees, 1) + 0.0:g}°".replace("-", "−")
    size = engineering(level.magnitude, dimension, DIGITS)
    if angle in ("180°", "−180°"):
        return f"−{size}"
    return size if angle == "0°" else f"{size}, {angle}"


def decibel_words(level: Level | None) -> str:
    """Word a ratio's size in decibels."""
    if level is None or level.magnitude == 0 or math.isinf(level.magnitude):
        return NONE
    if level.exact is not None:
        return decibels(level.exact)
    return f"{round(20 * math.log10(level.magnitude), 2) + 0.0:.2f} dB".replace("-", "−")


def frequency(hertz: float | None) -> str:
    """Word a frequency; a dash where there is none."""
    return NONE if hertz is None else hertz_words(hertz, DIGITS)


def impedance_words(level: Level | None) -> str:
    """Word an impedance."""
    return level_words(level, RESISTANCE)


def where_words(stage: Stage) -> str:
    """Say where the mid band is taken for a stage."""
    circuit = "" if stage.band == "full" else f"{stage.band} band, "
    if stage.at_hertz == 0:
        return "mid band" if stage.band == "mid" else f"{circuit}zero frequency"
    if math.isinf(stage.at_hertz):
        return f"{circuit}far above its corners"
    return f"{circuit}{frequency(stage.at_hertz)}"


def roots_words(roots: Sequence[CertifiedRoot]) -> tuple[str, ...]:
    """Word poles or zeros in hertz, a pair once."""
    return tuple(_root(root) for root in roots if root.imaginary >= 0)


def _root(root: CertifiedRoot) -> str:
    if root.magnitude == 0:
        return "at the origin" + (f" ({root.multiplicity}-fold)" if root.multiplicity > 1 else "")
    words = frequency(root.hertz)
    if root.imaginary:
        quality = root.quality
        words += f" (pair, Q = {quality:.3g})" if quality else " (pair on the imaginary axis)"
    if root.multiplicity > 1:
        words += f" ({root.multiplicity}-fold)"
    return words + (", right half-plane" if root.real > 0 else "")


def roots_of(solution: Solution, kind: str) -> tuple[CertifiedRoot, ...] | None:
    """Give a solution's poles or zeros, zeros at the origin included; None where values are open."""
    if solution.numbers is None:
        return None
    found = solution.numbers.poles if kind == "pole" else solution.numbers.zeros
    power = solution.form.power_of_s if kind == "zero" else -solution.form.power_of_s
    return (*((CertifiedRoot(0.0, 0.0, 0.0, power),) if power > 0 else ()), *found)
