"""Whether the register of a drawn stage agrees with matrices that the test stamps itself."""

from __future__ import annotations

import math
import random
from collections.abc import Iterator

import numpy as np
from assumed import solutions_of
from assumed_circuits import Stage, draw, polynomials, reduce, symbolic, worst_errors

from derive.check.roads import assumptions as road
from derive.check.verdict import Solution
from derive.errors import InputError

LOW, HIGH = 10.0, 1e7
WORDS = (
    "removes the whole response",
    "makes the response infinite",
    "contradicts",
    "says the same",
    "changes nothing",
)


def drawn_stages(name: str) -> Iterator[tuple[Stage, Solution]]:
    """Draw stages without end, each with its result; what is refused has one of the reasons."""
    chance = random.Random(name)
    while True:
        stage = draw(chance)
        try:
            (solution,) = solutions_of(stage.text)
        except InputError as error:
            if not any(word in str(error) for word in WORDS):
                raise
            continue
        yield stage, solution


def close(one: float, other: float) -> bool:
    """Whether two errors agree as well as a grid of frequencies lets them."""
    return math.isclose(one, other, rel_tol=2e-3, abs_tol=1e-5)


def differences(stage: Stage, solution: Solution) -> list[str]:
    """Say which errors of the register are not those worked here."""
    response, symbols = symbolic(stage)
    exact, reduced = polynomials(response, stage), response
    found = []
    for entry in solution.register.entries:
        reduced = reduce(reduced, symbols, stage.assumptions[entry.number - 1])
        own = polynomials(reduced, stage)
        if not (any(own[0]) and any(exact[0])):
            # Nothing is relative to a response that is zero at these values.
            if (entry.together, entry.status) != (None, "fails"):
                found.append(f"{entry.number}: errors of a response that is zero")
            continue
        found += [f"{entry.number}: {words}" for words in _wrong(entry.together, own, exact)]
    return found


def _wrong(errors, own, exact) -> Iterator[str]:
    magnitude, phase = worst_errors(own, exact, LOW, HIGH)
    if not close(errors.magnitude_db, magnitude):
        yield f"magnitude {errors.magnitude_db} for {magnitude}"
    if not close(abs(errors.phase_deg), abs(phase)):
        yield f"phase {errors.phase_deg} for {phase}"
    if errors.gain is not None and not close(errors.gain, gain_error(own, exact)):
        yield f"gain {errors.gain} for {gain_error(own, exact)}"
    stated = sorted(abs(root.approximate) for root in errors.poles)
    poles = sorted(abs(root) for root in np.roots(own[1]) if abs(root))
    if len(stated) != len(poles) or not np.allclose(stated, poles, rtol=1e-6, atol=0):
        yield f"poles {stated} for {poles}"


def gain_error(reduced, exact) -> float:
    """Give the error of the lowest coefficients' ratio."""
    gains = []
    for sides in (reduced, exact):
        lowest = [next(value for value in reversed(side) if value) for side in sides]
        gains.append(lowest[0] / lowest[1])
    return gains[0] / gains[1] - 1


def disputed(solution: Solution) -> str:
    """Give what the product's own road of checking has against a register; "" where nothing."""
    verdict = road.judge(solution)
    return "" if verdict.passed is True else verdict.measured
