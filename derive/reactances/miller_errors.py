"""The circuit with Miller's two halves in the capacitor's place, against the circuit as it is.

Both are worked exactly at the nominal values; the halves may be negative or zero.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from fractions import Fraction

from derive.algebra.roots import roots
from derive.devices.elements import Capacitor, SmallSignal
from derive.nodal.voltages import fresh
from derive.normalise.exact_response import ExactResponse, exact_response
from derive.quantities.dimension import CAPACITANCE
from derive.quantities.symbol import Symbol
from derive.reactances.miller import MillerError
from derive.reactances.miller_bridges import Bridge
from derive.topology.topology import GROUND, Find

# Poles beyond these are named by nobody.
ORDINALS = ("first", "second", "third", "fourth", "fifth", "sixth", "seventh", "eighth")
# As many poles are compared in any case.
COMPARED = 2
WRONG_SIDE = "wrong half-plane"
NOT_THERE = "the circuit has no such pole"
# A capacitor is changed by this part to see which poles follow it; one that does so by less than a
# hundredth of that does not.
STEP = Fraction(1, 10**6)
FOLLOWS = 0.01


@dataclass(frozen=True, slots=True)
class Landmarks:
    """A response by its marks: `gain` times s^power, and the poles and zeros beside the origin.

    `first` is the place of the pole at which the pass band ends: those before it, at the low end, belong
    to the zeros at the origin.
    """

    power: int
    gain: Fraction
    zeros: tuple[complex, ...]
    poles: tuple[complex, ...]

    @property
    def first(self) -> int:
        """The place of the first pole among `poles`; it may lie beyond the last."""
        return max(self.power, 0)

    @property
    def upper_poles(self) -> tuple[complex, ...]:
        """The poles from the first on, a pair once: its upper member."""
        return tuple(pole for pole in self.poles[self.first :] if pole.imag >= 0)


@dataclass(frozen=True, slots=True)
class Comparison:
    """What the approximation makes of the response; `approximate` is None where it has no solution.

    `same` says that the two responses are equal exactly, for all s. `judged` is the place among the upper
    poles of the one to judge by: the first, or where that one does not follow the capacitor, the one that
    follows it most.
    """

    exact: Landmarks
    approximate: Landmarks | None
    same: bool
    errors: tuple[MillerError, ...]
    missing_zeros: tuple[complex, ...]
    further_zeros: tuple[complex, ...]
    judged: int = 0


def compare(
    circuit: SmallSignal, find: Find, bridge: Bridge, halves: tuple[Fraction, Fraction]
) -> Comparison | None:
    """Compare the response with the halves in place with the exact one; None where there is none.

    Raises: SingularError as the exact response does.
    """
    exact = exact_response(circuit, find)
    if exact is None or exact.is_zero:
        return None
    truth = _landmarks(exact)
    judged = _judged(circuit, find, bridge, truth)
    found = exact_response(_with_halves(circuit, bridge, halves), find)
    if found is None or found.is_zero:
        return Comparison(truth, None, False, (), truth.zeros, (), judged)
    guess = _landmarks(found)
    pairs, missing, further = _paired(guess.zeros, truth.zeros)
    errors = _errors(guess, truth, pairs, judged)
    same = _scaled(exact) == _scaled(found)
    return Comparison(truth, guess, same, errors, missing, further, judged)


def _judged(circuit: SmallSignal, find: Find, bridge: Bridge, truth: Landmarks) -> int:
    """Give the place of the upper pole to judge by."""
    name = bridge.capacitor.capacitance
    symbols = tuple(
        replace(symbol, value=symbol.value * (1 + STEP))
        if symbol.name == name and symbol.value is not None
        else symbol
        for symbol in circuit.symbols
    )
    moved = exact_response(replace(circuit, symbols=symbols), find)
    if moved is None or moved.is_zero:
        return 0
    others = _landmarks(moved).upper_poles
    if len(others) != len(truth.upper_poles) or not others:
        return 0
    pairs = zip(others, truth.upper_poles, strict=True)
    shifts = [abs(one - other) / abs(other) / float(STEP) for one, other in pairs]
    place = shifts.index(max(shifts))
    return 0 if shifts[0] >= FOLLOWS or shifts[place] < FOLLOWS or place >= len(ORDINALS) else place


def _with_halves(circuit: SmallSignal, bridge: Bridge, halves: tuple[Fraction, Fraction]) -> SmallSignal:
    """Put a capacitor to ground at each node in the bridging one's place."""
    taken = {symbol.name for symbol in circuit.symbols} | {drive.name for drive in circuit.drives}
    taken |= {element.name for element in circuit.elements}
    elements = [element for element in circuit.elements if element.name != bridge.capacitor.name]
    symbols = list(circuit.symbols)
    for node, value in zip((bridge.near, bridge.far), halves, strict=True):
        name = fresh(taken, "C_half")
        elements.append(Capacitor(name, name, (node, GROUND), name))
        symbols.append(Symbol(name, CAPACITANCE, value, "half of a bridging capacitor"))
    return replace(circuit, elements=tuple(elements), symbols=tuple(symbols))


def _landmarks(response: ExactResponse) -> Landmarks:
    low_top, top = _from_lowest(response.top)
    low_bottom, bottom = _from_lowest(response.bottom)
    return Landmarks(low_top - low_bottom, top[0] / bottom[0], corners(top), corners(bottom))


def _from_lowest(polynomial: Sequence[Fraction]) -> tuple[int, Sequence[Fraction]]:
    lowest = next(power for power, value in enumerate(polynomial) if value)
    return lowest, polynomial[lowest:]


def corners(polynomial: Sequence[Fraction]) -> tuple[complex, ...]:
    """Give a polynomial's roots as complex numbers by rising magnitude, each as often as it occurs."""
    return tuple(
        complex(root.real, root.imaginary) for root in roots(polynomial) for _ in range(root.multiplicity)
    )


def _scaled(response: ExactResponse) -> tuple[tuple[Fraction, ...], tuple[Fraction, ...]]:
    scale = next(value for value in response.bottom if value)
    return tuple(a / scale for a in response.top), tuple(b / scale for b in response.bottom)


def _errors(
    guess: Landmarks, truth: Landmarks, zeros: Sequence[tuple[complex, complex]], judged: int
) -> tuple[MillerError, ...]:
    found = []
    if guess.power == truth.power:
        gain = float((guess.gain - truth.gain) / truth.gain)
        found.append(MillerError("gain", complex(guess.gain), complex(truth.gain), gain))
    found += _errors_of_poles(guess, truth, judged)
    for count, (approximate, exact) in enumerate(zeros, 1):
        found.append(_error("zero" if len(zeros) == 1 else f"zero {count}", approximate, exact))
    return tuple(found)


def _errors_of_poles(guess: Landmarks, truth: Landmarks, judged: int) -> list[MillerError]:
    """Compare poles at the same place, as their numbers may differ; a false one on the right is always told."""
    found = []
    own = tuple(pole for pole in guess.poles[truth.first :] if pole.imag >= 0)
    stable = all(pole.real <= 0 for pole in truth.poles)
    for place, (ordinal, pole) in enumerate(zip(ORDINALS, own, strict=False)):
        there = place < len(truth.upper_poles)
        false = pole.real > 0 and stable
        name = f"{ordinal} pole"
        if there and (false or place < max(COMPARED, judged + 1)):
            found.append(_error(name, pole, truth.upper_poles[place]))
        elif false:
            found.append(MillerError(name, pole, None, None, NOT_THERE))
    return found


def _error(name: str, approximate: complex, exact: complex) -> MillerError:
    """Compare two roots: real ones with their signs, pairs by their distance from the origin."""
    if approximate.real * exact.real < 0:
        return MillerError(name, approximate, exact, None, WRONG_SIDE)
    if bool(approximate.imag) != bool(exact.imag):
        says = "real, and no pair" if exact.imag else "a pair, and not real"
        return MillerError(name, approximate, exact, None, says)
    if exact.imag:
        return MillerError(name, approximate, exact, abs(approximate) / abs(exact) - 1)
    # Plus zero, so that no difference is never minus zero.
    return MillerError(name, approximate, exact, (approximate.real - exact.real) / exact.real + 0.0)


def _paired(
    approximate: Sequence[complex], exact: Sequence[complex]
) -> tuple[list[tuple[complex, complex]], tuple[complex, ...], tuple[complex, ...]]:
    """Pair zeros nearest first; also gives the exact ones left over, and the approximate ones.

    Zeros that are further apart than the exact one is from the origin are no pair.
    """
    left, further, pairs = list(exact), list(approximate), []
    while left and further:
        guess, truth = min(
            ((guess, truth) for guess in further for truth in left),
            key=lambda pair: abs(pair[0] - pair[1]) / abs(pair[1]),
        )
        if abs(guess - truth) >= abs(truth):
            break
        pairs.append((guess, truth))
        further.remove(guess)
        left.remove(truth)
    return sorted(pairs, key=lambda pair: abs(pair[1])), tuple(left), tuple(further)
