"""The price of a short form, against the whole circuit and not against what led to the form."""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from fractions import Fraction

import numpy as np

from derive.algebra.ratio import coefficients, exact_value
from derive.algebra.ring import Polynomial, Ring
from derive.approximate.questions import Price
from derive.approximate.simplify_answers import Answer
from derive.approximate.simplify_original import Original
from derive.approximate.simplify_trials import Complex, Floats
from derive.expressions.tree import Expression
from derive.expressions.walk import evaluate
from derive.readable.form import Definition
from derive.topology.topology import Budget

# At least so many frequencies over the range, and so many to a decade.
POINTS, PER_DECADE = 401, 60


def exact_coefficients(
    ring: Ring, polynomial: Polynomial, values: Mapping[str, Fraction]
) -> dict[int, Fraction]:
    """Give the coefficients of the powers of s at the nominal values, exactly."""
    found = coefficients(ring, polynomial, "s")
    return {power: exact_value(ring, part, values, {}) for power, part in found.items()}


def value_of(answer: Answer, values: Mapping[str, Fraction]) -> float:
    """Give the value of an answer that does not depend on frequency."""
    above, below = (
        exact_value(answer.ring, polynomial, values, {}) for polynomial in (answer.top, answer.bottom)
    )
    ratio = above / below
    return float(ratio) if answer.root == 1 else math.sqrt(abs(ratio))


def form_value(
    form: Expression, definitions: Sequence[Definition], values: Mapping[str, Fraction]
) -> float:
    """Give the value of a form as it is written, its definitions worked one after the other."""
    known = {name: float(value) for name, value in values.items()}
    for name, value in definitions:
        known[name] = evaluate(value, known, float)
    return float(evaluate(form, known, float))


def price_of_value(value: float, original: float, limit: float) -> Price:
    """Give the signed relative error of a value."""
    relative = value / original - 1
    return Price(relative, abs(relative) / limit)


def frequencies(range_hz: tuple[float, float], corners: tuple[float, ...]) -> Floats:
    """Give the frequencies at which errors are counted: even in decades, and the corners in the range."""
    low, high = range_hz
    count = max(POINTS, math.ceil(PER_DECADE * math.log10(high / low)) + 1)
    inside = [corner for corner in corners if low < corner < high]
    found: Floats = np.unique(np.concatenate([np.geomspace(low, high, count), inside]))
    return np.clip(found, low, high)


def sampling_words(points: Floats) -> str:
    """Say at which frequencies errors were counted."""
    ends = f"from {points[0]:.4g} Hz to {points[-1]:.4g} Hz"
    return f"{len(points)} frequencies {ends}: even in decades, and where poles and zeros stand"


def price_in_band(answer: Answer, original: Original, budget: Budget, points: Floats) -> Price:
    """Give the worst errors of magnitude and phase over the points, and where they are."""
    samples = 2j * np.pi * points
    values = original.network.values
    above, below = (
        _at(exact_coefficients(answer.ring, polynomial, values), samples)
        for polynomial in (answer.top, answer.bottom)
    )
    with np.errstate(all="ignore"):
        ratio = above / below / original.at(samples)
        decibels = 20 * np.log10(np.abs(ratio))
        degrees = np.angle(ratio, deg=True)
    if not (np.isfinite(decibels).all() and np.isfinite(degrees).all()):
        return Price(None, math.inf)
    loud, turned = int(np.argmax(np.abs(decibels))), int(np.argmax(np.abs(degrees)))
    used = max(
        abs(decibels[loud]) / float(budget.magnitude_db), abs(degrees[turned]) / float(budget.phase_deg)
    )
    return Price(
        None,
        float(used),
        float(decibels[loud]),
        float(points[loud]),
        float(degrees[turned]),
        float(points[turned]),
    )


def _at(polynomial: Mapping[int, Fraction], samples: Complex) -> Complex:
    found = np.zeros_like(samples)
    for power, value in polynomial.items():
        found = found + float(value) * samples**power
    return found
