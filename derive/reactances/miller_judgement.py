"""Whether Miller's approximation may be used, and why not: in words.

It misleads where the gain is near +1 (both ends of the capacitor move together), where the gain changes
within the band (it is not the one at zero frequency any more), where the zero that the capacitor makes
lies near the first pole, and where poles come out wrong, in number or side. Common practice; the limits
are this program's own.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from fractions import Fraction

from derive.quantities.dimension import FREQUENCY, RATIO
from derive.quantities.format import engineering
from derive.reactances.miller import MillerError
from derive.reactances.miller_errors import Comparison, Landmarks

# Below this distance of the gain from +1 hardly anything is left of the capacitor.
NEAR_ONE = Fraction(1, 2)
POLE_LIMIT = 0.10
GAIN_LIMIT = 0.01
# Corners further than this above the first pole do not show in the pass band.
DECADE = 10.0
EXACT = "the response with both halves in place is the exact one"


def judge(
    comparison: Comparison, gain: Fraction, own_corners: Sequence[complex], nodes: tuple[str, str]
) -> tuple[bool, tuple[str, ...]]:
    """Say whether the approximation may be used, with reasons.

    Given: the gain from `nodes`' first to its second at zero frequency, and its own poles and zeros.
    """
    if comparison.same:
        return True, (EXACT,)
    against = (
        *_of_the_gain(comparison, gain, own_corners, nodes),
        *_of_the_response(comparison),
        *_of_the_zeros(comparison),
    )
    return (False, against) if against else (True, _what_to_expect(comparison))


def _of_the_gain(
    comparison: Comparison, gain: Fraction, own_corners: Sequence[complex], nodes: tuple[str, str]
) -> list[str]:
    found = []
    if abs(1 - gain) < NEAR_ONE:
        found.append(
            f"the gain from {nodes[0]} to {nodes[1]} is {engineering(gain, RATIO, 3)}, near +1: both ends of "
            "the capacitor move together"
        )
    first = comparison.exact.upper_poles[:1]
    lowest = min(map(abs, own_corners), default=math.inf)
    if first and lowest < DECADE * abs(first[0]):
        found.append(
            f"the gain from {nodes[0]} to {nodes[1]} changes within the band: from {_hertz(lowest)} on, with "
            f"the first pole at {_hertz(abs(first[0]))}"
        )
    return found


def _of_the_response(comparison: Comparison) -> list[str]:
    exact, guess = comparison.exact, comparison.approximate
    if guess is None:
        return ["the circuit with both halves in place has no response to compare"]
    if guess.power != exact.power:
        return ["it starts with another power of s than the response"]
    if not exact.upper_poles:
        return ["the response has no pole at the upper end of its band to compare"]
    found = []
    near, true = (_near_the_first(found_poles, exact) for found_poles in (guess.poles, exact.poles))
    if len(guess.poles) != len(exact.poles) and near != true:
        found.append(
            f"within a decade of the first pole it has {_poles(near)}, where the circuit has {true}"
        )
    if any(pole.real > 0 for pole in guess.poles) and all(pole.real <= 0 for pole in exact.poles):
        found.append("it has a pole in the right half-plane, where the circuit has none")
    errors = {error.name: error for error in comparison.errors}
    if "gain" in errors and abs(errors["gain"].error) > GAIN_LIMIT:
        found.append(f"the gain would be {_amiss(errors['gain'])}")
    first = errors.get("first pole")
    if first is None:
        return found
    if abs(first.error) > POLE_LIMIT:
        found.append(f"the first pole would be {_amiss(first)}")
    if bool(first.exact.imag) != bool(first.approximate.imag):
        pair = "a complex pair" if first.exact.imag else "real"
        found.append(f"the first pole is {pair}, and the approximation's is not")
    return found


def _of_the_zeros(comparison: Comparison) -> list[str]:
    first = comparison.exact.upper_poles[:1]
    if not first:
        return []
    at = f"with the first pole at {_hertz(abs(first[0]))}"
    missing = _near_the_band(comparison.missing_zeros, first[0])
    further = _near_the_band(comparison.further_zeros, first[0])
    return [
        *(f"{_zero(zero)} is missing, {at}" for zero in missing),
        *(f"it has a {_zero(zero)[4:]} that the circuit has not, {at}" for zero in further),
    ]


def _near_the_band(zeros: Sequence[complex], first: complex) -> list[complex]:
    return [zero for zero in _one_of_a_pair(zeros) if abs(zero) < DECADE * abs(first)]


def _near_the_first(poles: Sequence[complex], exact: Landmarks) -> int:
    """Count the poles within a decade of the first one, those of the pass band's low end left out."""
    return sum(abs(pole) < DECADE * abs(exact.upper_poles[0]) for pole in poles[exact.first :])


def _what_to_expect(comparison: Comparison) -> tuple[str, ...]:
    found = []
    for error in comparison.errors:
        if error.name == "first pole":
            found.append(f"first pole within {_percent(error.error)}")
        elif error.name == "second pole" and abs(error.error) > POLE_LIMIT:
            found.append(f"do not use it for the second pole, which would be {_amiss(error)}")
        elif error.name == "second pole":
            found.append(f"second pole within {_percent(error.error)}")
    exact, guess = comparison.exact, comparison.approximate
    if guess and len(guess.poles) != len(exact.poles):
        found.append(f"it has {_poles(len(guess.poles))}, where the circuit has {len(exact.poles)}")
    missing = _one_of_a_pair(comparison.missing_zeros)
    return (*found, *(f"{_zero(zero)} is missing" for zero in missing))


def _one_of_a_pair(found: Sequence[complex]) -> list[complex]:
    return [root for root in found if root.imag >= 0]


def _zero(zero: complex) -> str:
    where = "right half-plane" if zero.real > 0 else "left half-plane" if zero.real else "on the jω axis"
    kind = "pair of zeros" if zero.imag else "zero"
    return f"the {kind} at {_hertz(abs(zero))} ({where})"


def _hertz(rad_per_s: float) -> str:
    return engineering(rad_per_s / (2 * math.pi), FREQUENCY, 3, unit="Hz")


def _poles(number: int) -> str:
    return "1 pole" if number == 1 else f"{number} poles"


def _amiss(error: MillerError) -> str:
    turned = error.exact.real * error.approximate.real < 0
    if turned and error.name.endswith("pole"):
        return "in the right half-plane" if error.approximate.real > 0 else "in the left half-plane"
    return f"{_percent(error.error)} too {'high' if error.error > 0 else 'low'}"


def _percent(error: float) -> str:
    size = abs(error) * 100
    if size < 0.01:
        return "0.01 %"
    return f"{engineering(size, RATIO, 2 if size < 100 else 3)} %"
