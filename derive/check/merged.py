"""Defined names in checks: each takes its value from its definition, never from elsewhere.

The circuit that a check solves has nothing merged; what is printed may hold the names of merged parts, and
in a nested form names of its own. So a wrong definition shows wherever a printed tree is compared with the
circuit.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from fractions import Fraction

from flint import fmpq

from derive.bands.band_circuit import Merged
from derive.check.reading import value_exact, value_modulo
from derive.check.rounding import definitions_without_rounding
from derive.check.verdict import Solution
from derive.devices.elements import Coupling
from derive.expressions.walk import evaluate, names_of
from derive.readable.form import Definition


def definitions_of(solution: Solution) -> tuple[Merged, ...]:
    """Give the merged names of the solution's band, in an order in which each needs earlier ones only."""
    return solution.band.definitions if solution.band else ()


def with_merged_modulo(
    solution: Solution, values: Mapping[str, int], prime: int, words: Iterable[Definition] = ()
) -> dict[str, int]:
    """Give the values with those of the merged names and of a nested form's, modulo the prime.

    Given: `words`, the definitions of further names, such as β, that are to be known.
    Raises: DeriveError for a name that is not known; ZeroDivisionError for a division by zero.
    """
    known = dict(values)
    for merged in definitions_of(solution):
        known[merged.name] = value_modulo(merged.definition, known, prime)
    for name, meaning in (*solution.form.definitions, *words):
        known[name] = value_modulo(meaning, known, prime)
    return known


def with_merged_exact(
    solution: Solution, values: Mapping[str, Fraction], words: Iterable[Definition] = ()
) -> dict[str, Fraction]:
    """Give the values with those of the merged names and of what a nested form is written with, exactly.

    Given: `words`, the definitions of further names, such as β, that are to be known.
    Raises: DeriveError for a name that is not known; ZeroDivisionError for a division by zero.
    """
    known = _with_own_names(solution, values)
    for name, meaning in words:
        known[name] = value_exact(meaning, known)
    return known


def _with_own_names(solution: Solution, values: Mapping[str, Fraction]) -> dict[str, Fraction]:
    known = dict(values)
    for merged in definitions_of(solution):
        known[merged.name] = value_exact(merged.definition, known)
    if solution.form.definitions and any(isinstance(e, Coupling) for e in solution.judged.elements):
        # A mutual inductance may be a rounded root.
        return definitions_without_rounding(solution.form.definitions, known)
    if solution.form.definitions:
        # FLINT's rationals are several times as quick in so many lines.
        quick = {name: fmpq(value.numerator, value.denominator) for name, value in known.items()}
        for name, meaning in solution.form.definitions:
            quick[name] = evaluate(meaning, quick, lambda value: fmpq(value.numerator, value.denominator))
        form = solution.form
        for name in {
            n for part in (form.gain, *form.numerator, *form.denominator) for n in names_of(part)
        }:
            if name in quick:
                known[name] = Fraction(int(quick[name].p), int(quick[name].q))
    return known
