"""Several square laws at once: overdrive voltages by Newton's method, refined in exact arithmetic."""

from __future__ import annotations

from collections.abc import Sequence
from fractions import Fraction

import numpy as np

from derive.bias.linear import OpenError, solve_matrix
from derive.quantities.rounding import DIGITS

STARTS = (0.3, 1.0, 0.05, 3.0, 10.0)
MOST_STEPS = 100
REFINEMENTS = 5
WORKING_DIGITS = DIGITS + 20


class NoPointError(ValueError):
    """Raised where no state is found in which every device conducts."""


def solve_together(
    beyond: Sequence[Fraction], drops: Sequence[Sequence[Fraction]], factors: Sequence[Fraction]
) -> list[Fraction]:
    """Solve V_i + sum over j of drops[i][j]·factors[j]·V_j² = beyond[i] for positive V_i.

    Gives values rounded to 40 significant digits.
    Raises: NoPointError where Newton's method finds no such state from any of its starts.
    """
    for start in STARTS:
        rough = _search(start, beyond, drops, factors)
        if rough is not None:
            exact = _refined([Fraction(v) for v in rough], beyond, drops, factors)
            if all(v > 0 for v in exact):
                return [rounded(v, DIGITS) for v in exact]
    raise NoPointError("no state was found by Newton's method in which all devices conduct")


def rounded(value: Fraction, digits: int) -> Fraction:
    """Give the value rounded to so many significant digits, halves to even."""
    if value == 0:
        return value
    size = len(str(abs(value.numerator))) - len(str(value.denominator))
    unit = Fraction(10) ** (size - digits)
    return round(value / unit) * unit


def _search(
    start: float,
    beyond: Sequence[Fraction],
    drops: Sequence[Sequence[Fraction]],
    factors: Sequence[Fraction],
) -> list[float] | None:
    target = np.array([float(b) for b in beyond])
    matrix = np.array([[float(d * f) for d, f in zip(row, factors, strict=True)] for row in drops])
    state = np.full(len(target), start)
    size = float(np.linalg.norm(state + matrix @ state**2 - target))
    for _ in range(MOST_STEPS):
        slope = np.eye(len(target)) + 2 * matrix * state
        try:
            step = np.linalg.solve(slope, target - state - matrix @ state**2)
        except np.linalg.LinAlgError:
            return None
        fraction = 1.0
        while True:
            after = state + fraction * step
            new_size = float(np.linalg.norm(after + matrix @ after**2 - target))
            if bool(np.all(after > 0)) and (new_size < size or new_size < 1e-13):
                break
            fraction /= 2
            if fraction < 1e-9:
                return None
        state, size = after, new_size
        if float(np.max(np.abs(step) / state)) < 1e-10:
            return [float(v) for v in state]
    return None


def _refined(
    state: list[Fraction],
    beyond: Sequence[Fraction],
    drops: Sequence[Sequence[Fraction]],
    factors: Sequence[Fraction],
) -> list[Fraction]:
    """Take exact Newton steps, rounded to more digits than are kept; each doubles what is right."""
    names = [str(k) for k in range(len(state))]
    for _ in range(REFINEMENTS):
        rows = []
        for k, own in enumerate(state):
            total = own - beyond[k]
            slope = [Fraction(int(k == j)) for j in range(len(state))]
            for j, other in enumerate(state):
                total += drops[k][j] * factors[j] * other**2
                slope[j] += 2 * drops[k][j] * factors[j] * other
            rows.append((slope, -total))
        try:
            step = solve_matrix(names, rows)
        except OpenError as error:
            raise NoPointError("the equations leave the currents open") from error
        state = [rounded(v + d, WORKING_DIGITS) for v, d in zip(state, step, strict=True)]
    return state
