"""Merged names in checks: each takes its value from its definition, never from elsewhere.

The circuit that a check solves has nothing merged; what is printed may hold merged names. So a wrong
definition shows wherever a printed tree is compared with the circuit.
"""

from __future__ import annotations

from collections.abc import Mapping
from fractions import Fraction

from derive.bands.band_circuit import Merged
from derive.check.reading import value_exact, value_modulo
from derive.check.verdict import Solution


def definitions_of(solution: Solution) -> tuple[Merged, ...]:
    """Give the merged names of the solution's band, in an order in which each needs earlier ones only."""
    return solution.band.definitions if solution.band else ()


def with_merged_modulo(solution: Solution, values: Mapping[str, int], prime: int) -> dict[str, int]:
    """Give the values with those of the merged names, modulo the prime.

    Raises: DeriveError for a name that is not known; ZeroDivisionError for a division by zero.
    """
    known = dict(values)
    for merged in definitions_of(solution):
        known[merged.name] = value_modulo(merged.definition, known, prime)
    return known


def with_merged_exact(solution: Solution, values: Mapping[str, Fraction]) -> dict[str, Fraction]:
    """Give the values with those of the merged names, exactly.

    Raises: DeriveError for a name that is not known; ZeroDivisionError for a division by zero.
    """
    known = dict(values)
    for merged in definitions_of(solution):
        known[merged.name] = value_exact(merged.definition, known)
    return known
