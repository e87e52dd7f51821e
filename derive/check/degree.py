"""Degrees: how often a wrong result could agree by chance.

Two different ratios of polynomials whose cross product has degree d agree at a random point of a
set of n values with a chance of d/n at most.
Source: J. T. Schwartz, Fast probabilistic algorithms for verification of polynomial identities,
Journal of the ACM 27 (1980), Lemma 1, and R. Zippel (1979); from memory.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence

from derive.bands.band_circuit import Merged
from derive.check.points import PRIME_BITS
from derive.devices.elements import Capacitor, Coupling, OnePoleGain, SmallSignal
from derive.errors import DeriveError
from derive.expressions.tree import (
    ONE,
    Expression,
    Name,
    Negative,
    Number,
    Parallel,
    Power,
    Product,
    Quotient,
    Sum,
)
from derive.expressions.walk import names_of
from derive.normalise.form import NormalForm

Degrees = tuple[int, int]


def degrees(expression: Expression, weights: Mapping[str, int | Degrees]) -> Degrees:
    """Bound the degrees of the numerator and denominator that the tree has as one fraction.

    Given: the degree, or pair of degrees, that each name stands for, 1 where none is given.
    Raises: DeriveError for a root or an elided term, which are no ratio of polynomials.
    """
    if isinstance(expression, Number):
        return 0, 0
    if isinstance(expression, Name):
        weight = weights.get(expression.text, 1)
        return weight if isinstance(weight, tuple) else (weight, 0)
    if isinstance(expression, Negative):
        return degrees(expression.operand, weights)
    if isinstance(expression, Sum):
        return _of_sum([degrees(term, weights) for term in expression.terms])
    if isinstance(expression, Product):
        parts = [degrees(factor, weights) for factor in expression.factors]
        return sum(top for top, _ in parts), sum(bottom for _, bottom in parts)
    if isinstance(expression, Quotient):
        top, under = degrees(expression.numerator, weights)
        bottom, over = degrees(expression.denominator, weights)
        return top + over, under + bottom
    if isinstance(expression, Power):
        top, bottom = degrees(expression.base, weights)
        size = abs(int(expression.exponent))
        return (top * size, bottom * size) if expression.exponent >= 0 else (bottom * size, top * size)
    if isinstance(expression, Parallel):
        top, bottom = _of_sum([degrees(item, weights)[::-1] for item in expression.branches])
        return bottom, top
    raise DeriveError("a root or an elided term has no degree")


def _of_sum(parts: list[Degrees]) -> Degrees:
    shared = sum(bottom for _, bottom in parts)
    return max((top + shared - bottom for top, bottom in parts), default=0), shared


def weights_of(circuit: SmallSignal, definitions: Sequence[Merged] = ()) -> dict[str, int | Degrees]:
    """Give the degree in the numbers drawn that each symbol of the circuit has, where not 1.

    A coupled coil is drawn as L·t², and M as k·L·t_1·t_2. A merged name has its definition's.
    """
    weights: dict[str, int | Degrees] = {}
    inductances = {e.name: getattr(e, "inductance", "") for e in circuit.elements}
    for element in circuit.elements:
        if isinstance(element, Coupling):
            weights[element.mutual] = 4
            for coil in element.coils:
                weights[inductances[coil]] = 3
    for merged in definitions:
        weights[merged.name] = degrees(merged.definition, weights)
    return weights


def degree_of_circuit(circuit: SmallSignal) -> int:
    """Bound the degree of the determinant of the circuit's tableau: one law a row."""
    weights = weights_of(circuit)
    total = 0
    for element in circuit.elements:
        if isinstance(element, Coupling):
            continue  # it stands in its coils' rows, counted there
        inductance = getattr(element, "inductance", None)
        if inductance is not None:
            total += 5 if inductance in weights else 2
        else:
            total += 2 if isinstance(element, Capacitor | OnePoleGain) else 1
    return total


def degree_of_form(form: NormalForm, weights: Mapping[str, int | Degrees]) -> Degrees:
    """Bound the degrees of the normal form as one fraction, in the symbols and s together."""
    top, under = _of_sum(
        [(degrees(a, weights)[0] + k, degrees(a, weights)[1]) for k, a in enumerate(form.numerator)]
    )
    bottom, over = _of_sum(
        [(degrees(b, weights)[0] + k, degrees(b, weights)[1]) for k, b in enumerate(form.denominator)]
    )
    gain_top, gain_bottom = degrees(form.gain, weights)
    shift = int(form.power_of_s)
    return gain_top + max(shift, 0) + top + over, gain_bottom + max(-shift, 0) + bottom + under


def degree_of_claim(form: NormalForm, circuit: SmallSignal, definitions: Sequence[Merged] = ()) -> int:
    """Bound the degree of the polynomial that is zero where form and circuit agree.

    The definitions of a nested form are of two kinds. A ratio of circuit values is counted as a variable,
    so that sums of many such do not add up denominators which are the same: for 1/R that is all, as 1/R is
    as random as R and a tableau holds R to the first power only; for others the degree of what
    is written with them is raised by their own.
    """
    weights = weights_of(circuit, definitions)
    stretch, below = 1, 0
    defined: set[str] = set()
    for name, meaning in form.definitions:
        top, bottom = degrees(meaning, weights)
        defined.add(name)
        if not bottom:
            weights[name] = top
        elif any(used in defined for used in names_of(meaning)):
            weights[name] = top, bottom
        else:
            weights[name] = 1
            if not _is_reciprocal(meaning, weights):
                stretch, below = max(stretch, top), below + bottom
    degree = max(degree_of_form(form, weights))
    return degree * (stretch + below) + degree_of_circuit(circuit)


def _is_reciprocal(meaning: Expression, weights: Mapping[str, int | Degrees]) -> bool:
    """Whether something is 1/R of one value that is drawn by itself."""
    return (
        isinstance(meaning, Quotient)
        and meaning.numerator == ONE
        and isinstance(meaning.denominator, Name)
        and meaning.denominator.text not in weights
    )


def chance(degree: int) -> float:
    """Give the greatest chance that a wrong result agrees at one random point modulo the prime."""
    return min(1.0, degree / float((1 << (PRIME_BITS - 1)) - 1))
