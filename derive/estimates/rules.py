"""Rules of thumb held against the truth: dominant pole, pole splitting, sums of time constants.

Of a low band the corner is set by the highest pole: there the rules are about the lowest and the highest.

Sources, from memory: p_1 ≈ −1/b_1 and p_2 ≈ −b_1/b_2 for poles far apart, and the bandwidth by the sum of
open-circuit time constants: Gray and Searle, Electronic Principles (1969). The error printed is always the
actual one at these values, never the rule's reputation.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence
from dataclasses import dataclass
from fractions import Fraction

from derive.algebra.roots import rational_polynomial
from derive.estimates.bandwidth import AT, HALF, crossings
from derive.estimates.estimates import Bandwidth, Estimate
from derive.estimates.response import make_response
from derive.estimates.verdicts import Scene, judge_frequency, judge_pole, no_real_pole
from derive.expressions.polynomials import add, divide, multiply
from derive.expressions.tree import ONE, Expression, Name, Negative, Number
from derive.normalise.form import NominalNumbers
from derive.reactances.time_constants import TimeConstant, TimeConstants

DOMINANT = "dominant pole"
SECOND = "second pole"
LOWEST = "lowest pole"
HIGHEST = "highest pole"
SUM = "bandwidth by time constants"
LOW_SUM = "low corner by time constants"
FACTORS = "bandwidth by two factors"
LOW_FACTORS = "low corner by two factors"


@dataclass(frozen=True, slots=True, eq=False)
class Given:
    """What the rules work on; `low` says that the response is that of a low band.

    `b` are the coefficients b_0 = 1, b_1, … at the nominal values; `name_of` gives their names.
    """

    numbers: NominalNumbers
    impedance: bool
    power_of_s: int
    bandwidth: Bandwidth | None
    time_constants: TimeConstants | None
    name_of: Callable[[int], str]
    pi: str
    low: bool = False

    @property
    def shown(self) -> TimeConstants | None:
        """The time constants, unless some belong to modes that this response does not show."""
        return None if self.time_constants and self.time_constants.hidden_says else self.time_constants

    @property
    def b(self) -> tuple[Fraction, ...]:
        """The coefficients of the denominator in normal form."""
        bottom = self.numbers.bottom
        return tuple(value / bottom[0] for value in bottom)

    def named(self, index: int) -> Expression:
        """Give the name of a coefficient as an expression."""
        return Name(self.name_of(index))


def rules_of_thumb(given: Given) -> tuple[tuple[Estimate, ...], str]:
    """Give every rule that has something to say of this response, with its actual error.

    Gives: the rules, and a sentence where those for real poles do not apply, else "". () where the
    denominator has no constant term at these values, or there are no poles.
    """
    if len(given.numbers.bottom) < 2 or not given.numbers.bottom[0]:
        return (), ""
    scene = Scene.of(given.numbers)
    found = [*_poles(given, scene), *_frequencies(given, scene)]
    remark = no_real_pole(scene, low=given.low) if len(given.b) > 2 else ""
    return tuple(estimate for estimate in found if estimate is not None), remark


def _poles(given: Given, scene: Scene) -> list[Estimate | None]:
    """Give the two rules for real poles: first and second, or in a low band lowest and highest."""
    b, last = given.b, len(given.b) - 1
    if last < 2:
        return []
    found = []
    if b[1]:
        name = LOWEST if given.low else DOMINANT
        formula = Negative(divide(ONE, given.named(1)))
        found.append(_of_pole(name, formula, float(-1 / b[1]), scene, 0))
    place = last if given.low else 2
    if b[place - 1] and b[place]:
        name = HIGHEST if given.low else SECOND
        formula = Negative(divide(given.named(place - 1), given.named(place)))
        index = len(scene.poles) - 1 if given.low else 1
        found.append(_of_pole(name, formula, float(-b[place - 1] / b[place]), scene, index))
    return found


def _of_pole(name: str, formula: Expression, value: float, scene: Scene, index: int) -> Estimate | None:
    """Hold a value against the pole of this place; None where that is one of a complex pair."""
    if index >= len(scene.poles) or scene.poles[index].imaginary:
        return None
    exact = scene.poles[index].real
    error = (value - exact) / exact
    usable, says = judge_pole(scene, index, error)
    return Estimate(name, formula, "rad/s", value, exact, error, usable, says)


def _frequencies(given: Given, scene: Scene) -> list[Estimate | None]:
    bandwidth = given.bandwidth
    # An impedance departs from its level by zeros as well as by poles: these rules are about gains.
    if bandwidth is None or given.impedance:
        return []
    if AT["zero"] in bandwidth.reference_says and bandwidth.high_hz is not None:
        return [
            _sum(given, scene, bandwidth.high_hz),
            _factors(given, scene, bandwidth.high_hz, low=False),
        ]
    if AT["infinity"] in bandwidth.reference_says and bandwidth.low_hz is not None:
        return [
            _low_sum(given, scene, bandwidth.low_hz),
            _factors(given, scene, bandwidth.low_hz, low=True),
        ]
    return []


def _sum(given: Given, scene: Scene, exact: float) -> Estimate | None:
    """1/(2π·Σ τ) by the open-circuit time constants; their sum is b_1 where nothing is hidden."""
    total, below = given.b[1], given.named(1)
    known = given.shown.open_circuit if given.shown else ()
    summed = _summed(known, inverse=False)
    if summed is not None and summed[0] != total:
        total, below = summed
    if total <= 0:
        return None
    value = 1 / (2 * math.pi * float(total))
    formula = divide(ONE, multiply([Number(Fraction(2)), Name(given.pi), below]))
    return _of_frequency(SUM, formula, value, exact, scene, low=False)


def _low_sum(given: Given, scene: Scene, exact: float) -> Estimate | None:
    """Σ 1/(2π·τ) by the short-circuit time constants; that sum is b_(n−1)/b_n where nothing is hidden."""
    b = given.b
    top = len(b) - 1
    total = b[top - 1] / b[top]
    two_pi: list[Expression] = [Number(Fraction(2)), Name(given.pi)]
    above = given.named(top - 1) if top > 1 else ONE
    formula = divide(above, multiply([*two_pi, given.named(top)]))
    known = given.shown.short_circuit if given.shown else ()
    summed = _summed(known, inverse=True)
    if summed is not None and summed[0] != total:
        total, formula = summed[0], divide(summed[1], multiply(two_pi))
    if total <= 0:
        return None
    value = float(total) / (2 * math.pi)
    return _of_frequency(LOW_SUM, formula, value, exact, scene, low=True)


def _summed(known: Sequence[TimeConstant], *, inverse: bool) -> tuple[Fraction, Expression] | None:
    """Give the sum of time constants (or of their reciprocals) and how it is written, if all are finite."""
    total, terms = Fraction(0), []
    for constant in known:
        if constant.seconds is None or constant.constant is None or not constant.seconds:
            return None
        total += 1 / constant.seconds if inverse else constant.seconds
        terms.append(divide(ONE, constant.constant) if inverse else constant.constant)
    return (total, add(terms)) if terms else None


def _factors(given: Given, scene: Scene, exact: float, *, low: bool) -> Estimate | None:
    """Take 1 + b_1·s + b_2·s² for (1 + b_1·s)·(1 + (b_2/b_1)·s), whose poles are those of the two rules."""
    b = given.b
    if len(b) != 3 or b[1] <= 0 or b[2] <= 0 or b[1] ** 2 < 4 * b[2]:
        return None
    bottom = rational_polynomial([Fraction(1), b[1]]) * rational_polynomial([Fraction(1), b[2] / b[1]])
    bottom *= rational_polynomial([given.numbers.bottom[0]])
    changed = make_response(rational_polynomial(given.numbers.top), bottom, given.power_of_s)
    square = changed.square_at_infinity if low else changed.square_at_zero
    found = crossings(changed, square, [HALF]) if square else []
    if not found:
        return None
    s_name = Name("s")
    first = add([ONE, multiply([given.named(1), s_name])])
    second = add([ONE, multiply([divide(given.named(2), given.named(1)), s_name])])
    value = found[-1].hertz if low else found[0].hertz
    name = LOW_FACTORS if low else FACTORS
    return _of_frequency(name, multiply([first, second]), value, exact, scene, low=low)


def _of_frequency(
    name: str, formula: Expression, value: float, exact: float, scene: Scene, *, low: bool
) -> Estimate:
    error = (value - exact) / exact
    usable, says = judge_frequency(scene, error, exact, low=low)
    return Estimate(name, formula, "Hz", value, exact, error, usable, says)
