"""Whether Miller's approximation may be used, and why not: in words.

It misleads where the gain is near +1 (both ends of the capacitor move together), where the gain changes
within a decade of the first pole (it is not the one at zero frequency any more), where the zero that the
capacitor makes lies near the first pole, and where poles come out wrong. Further out, a false pole in the
right half-plane leaves it good for the first pole alone. Common practice; the limits are this program's own.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from fractions import Fraction

from derive.quantities.dimension import FREQUENCY, RATIO
from derive.quantities.format import engineering
from derive.reactances.miller import MillerError
from derive.reactances.miller_errors import ORDINALS, Comparison

# Below this distance of the gain from +1 hardly anything is left of the capacitor.
NEAR_ONE = Fraction(1, 4)
# Below this one it is worth a word.
TOWARDS_ONE = Fraction(1, 2)
POLE_LIMIT = 0.10
GAIN_LIMIT = 0.01
# Corners further than this above the first pole do not show in the pass band.
DECADE = 10.0
EXACT = "the response with both halves in place is the exact one"


def judge(
    comparison: Comparison,
    gain: Fraction,
    own_corners: Sequence[complex],
    nodes: tuple[str, str],
    *,
    capacitor: str = "the capacitor",
    cause: str = "",
) -> tuple[bool, tuple[str, ...]]:
    """Say whether the approximation may be used, be it for one pole alone, with reasons.

    Given: the gain from `nodes`' first to its second at zero frequency, its own poles and zeros, and the
    part that makes it change with frequency, "" where there is no single one.
    """
    if comparison.same:
        return True, (EXACT,)
    ways = f"the gain from {nodes[0]} to {nodes[1]}"
    against = (
        *_of_the_gain(comparison, gain, own_corners, ways, cause),
        *_of_the_response(comparison),
        *_of_the_zeros(comparison),
    )
    lead: tuple[str, ...] = ()
    if comparison.judged:
        at = _hertz(abs(comparison.exact.upper_poles[comparison.judged]))
        lead = (f"the {_name(comparison)}, at {at}, is judged, as the first does not follow {capacitor}",)
    if against:
        return False, (*lead, *_towards_one(gain, ways), *against)
    return True, (*lead, *_what_to_expect(comparison, gain, ways))


def _name(comparison: Comparison, further: int = 0) -> str:
    """Name the pole that is judged, or one so many places further."""
    place = comparison.judged + further
    return f"{ORDINALS[place]} pole" if place < len(ORDINALS) else ""


def _judged(comparison: Comparison) -> complex | None:
    poles = comparison.exact.upper_poles
    return poles[comparison.judged] if comparison.judged < len(poles) else None


def _of_the_gain(
    comparison: Comparison, gain: Fraction, own_corners: Sequence[complex], ways: str, cause: str
) -> list[str]:
    found = []
    if abs(1 - gain) < NEAR_ONE:
        size = engineering(gain, RATIO, 3)
        found.append(f"{ways} is {size}, near +1: both ends of the capacitor move together")
    pole = _judged(comparison)
    lowest = min(map(abs, own_corners), default=math.inf)
    if pole is not None and lowest < DECADE * abs(pole):
        by = f", through {cause}," if cause else ""
        found.append(
            f"{ways} changes{by} from {_hertz(lowest)} on, within a decade of the {_name(comparison)} at "
            f"{_hertz(abs(pole))}"
        )
    return found


def _towards_one(gain: Fraction, ways: str) -> list[str]:
    """Say that the gain leads towards +1, where it is not so near that this alone refuses."""
    if not NEAR_ONE <= abs(1 - gain) < TOWARDS_ONE:
        return []
    size = engineering(gain, RATIO, 3)
    return [
        f"{ways} is {size}: its near half is negative"
        if gain > 1
        else f"{ways} is {size}, positive and above one half"
    ]


def _of_the_response(comparison: Comparison) -> list[str]:
    exact, guess = comparison.exact, comparison.approximate
    if guess is None:
        return ["the circuit with both halves in place has no response to compare"]
    if guess.power != exact.power:
        return ["it starts with another power of s than the response"]
    pole = _judged(comparison)
    if pole is None:
        return ["the response has no pole at the upper end of its band to compare"]
    found = []
    name = _name(comparison)
    near, true = (_within_a_decade(poles[exact.first :], pole) for poles in (guess.poles, exact.poles))
    if len(guess.poles) != len(exact.poles) and near != true:
        found.append(
            f"up to a decade beyond the {name} it has {_poles(near)}, where the circuit has {true}"
        )
    errors = {error.name: error for error in comparison.errors}
    own = errors.get(name)
    false = [root for root in _false_poles(comparison) if abs(root) < DECADE * abs(pole)]
    if false and (own is None or own.approximate not in false):
        found.append(f"{_false_pole(false[0])}, within a decade of the {name}")
    gain = errors.get("gain")
    if gain is not None and gain.error is not None and abs(gain.error) > GAIN_LIMIT:
        found.append(f"the gain would be {_amiss(gain)}")
    if own is not None and (own.error is None or abs(own.error) > POLE_LIMIT):
        found.append(f"the {name} would be {_amiss(own)}")
    return found


def _false_poles(comparison: Comparison) -> list[complex]:
    """Give the approximation's poles in the right half-plane, where the circuit has none."""
    guess = comparison.approximate
    if guess is None or any(pole.real > 0 for pole in comparison.exact.poles):
        return []
    return [pole for pole in _one_of_a_pair(guess.poles) if pole.real > 0]


def _false_pole(pole: complex) -> str:
    kind = "pair of poles" if pole.imag else "pole"
    return f"it has a {kind} in the right half-plane, at {_hertz(abs(pole))}, where the circuit has none"


def _of_the_zeros(comparison: Comparison) -> list[str]:
    pole = _judged(comparison)
    if pole is None:
        return []
    at = f"with the {_name(comparison)} at {_hertz(abs(pole))}"
    missing = _near_the_band(comparison.missing_zeros, pole)
    further = _near_the_band(comparison.further_zeros, pole)
    return [
        *(f"{_zero(zero)} is missing, {at}" for zero in missing),
        *(f"it has a {_zero(zero)[4:]} that the circuit has not, {at}" for zero in further),
    ]


def _near_the_band(zeros: Sequence[complex], judged: complex) -> list[complex]:
    return [zero for zero in _one_of_a_pair(zeros) if abs(zero) < DECADE * abs(judged)]


def _within_a_decade(poles: Sequence[complex], judged: complex) -> int:
    return sum(abs(pole) < DECADE * abs(judged) for pole in poles)


def _what_to_expect(comparison: Comparison, gain: Fraction, ways: str) -> tuple[str, ...]:
    errors = {error.name: error for error in comparison.errors}
    own, next_one = errors.get(_name(comparison)), errors.get(_name(comparison, 1))
    false = _false_poles(comparison)
    towards = _towards_one(gain, ways)
    found = []
    if own is not None and own.error is not None:
        name, size = _name(comparison), _percent(own.error)
        found.append(
            f"for the {name} alone, within {size}" if false or towards else f"{name} within {size}"
        )
    found += towards
    found += [_false_pole(pole) for pole in false]
    if next_one is not None and next_one.approximate not in false:
        bad = next_one.error is None or abs(next_one.error) > POLE_LIMIT
        if bad:
            found.append(
                f"do not use it for the {_name(comparison, 1)}, which would be {_amiss(next_one)}"
            )
        elif next_one.error is not None and not (false or towards):
            found.append(f"{_name(comparison, 1)} within {_percent(next_one.error)}")
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
    if error.error is not None:
        return f"{_percent(error.error)} too {'high' if error.error > 0 else 'low'}"
    if error.exact is not None and error.approximate.real * error.exact.real < 0:
        return "in the right half-plane" if error.approximate.real > 0 else "in the left half-plane"
    return error.says


def _percent(error: float) -> str:
    size = abs(error) * 100
    if size < 0.01:
        return "0.01 %"
    return f"{engineering(size, RATIO, 2 if size < 100 else 3)} %"
