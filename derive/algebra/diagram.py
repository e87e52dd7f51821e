"""Determinants as diagrams: every term decided once, taken or left, and equal remainders shared.

By the formula of Cauchy and Binet the determinant of a sum of terms name·r·cᵀ is the sum, over the sets
of terms that form a spanning tree in the graph of the r and in the graph of the c, of the product of
their names, each with the sign of the two trees. Deciding one term after the other, what remains
depends only on which of the half-done vertices have been joined in either graph; it is kept once for
each such state. No product is formed twice, so none can cancel where all names are distinct.

Source: Mason's and Mayeda's two-graph method; determinant decision diagrams, Shi and Tan, IEEE Trans.
CAD 19 (2000) 1-18; graph-pair decision diagrams, Shi, IEEE Trans. CAD 32 (2013). From memory.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from fractions import Fraction
from typing import Any

from flint import fmpz_poly

from derive.algebra.diagram_coefficients import coefficients
from derive.algebra.diagram_forks import Fork, fold
from derive.algebra.diagram_terms import Bundle, Term


@dataclass(frozen=True, slots=True, eq=False)
class Diagram:
    """One or more determinants over shared forks; every method gives one result for each.

    Forks 0 and 1 are the numbers 0 and 1; `forks` holds those from number 2 on, each after those that
    it refers to. `roots` holds (sign, fork) of every determinant.
    """

    terms: tuple[Term, ...]
    bundles: tuple[Bundle, ...]
    forks: tuple[Fork, ...]
    roots: tuple[tuple[int, int], ...]

    def counts(self) -> tuple[int, ...]:
        """Give the exact number of products of each determinant, without forming any."""
        return tuple(sum(powers) for powers in self.counts_by_power())

    def counts_by_power(self) -> tuple[tuple[int, ...], ...]:
        """Give the number of products at each power of the degree variable, from 0 up."""
        weights = [_counted(item) for item in self.bundles]
        found = self.roots_of(weights, fmpz_poly([0]), fmpz_poly([1]), signed=False)
        return tuple(tuple(map(int, value.coeffs())) for value in found)

    def values(self, lookup: Mapping[str, Any], variable: Any = 1, one: Any = 1) -> tuple[Any, ...]:
        """Evaluate in any ring whose elements know +, − and ·.

        Given: what each name stands for (numbers, residues, arrays of numbers), the value of the degree
        variable, and the ring's 1.
        """
        powers = [one]
        for _ in range(max((term.degree for term in self.terms), default=0)):
            powers.append(powers[-1] * variable)
        weights = []
        for item in self.bundles:
            total: Any = None
            for entry in item.entries:
                value = lookup[entry.name] * powers[entry.degree] if entry.degree else lookup[entry.name]
                if total is None:
                    total = value if entry.sign > 0 else -value
                else:
                    total = total + value if entry.sign > 0 else total - value
            weights.append(total)
        return tuple(self.roots_of(weights, one - one, one))

    def coefficients(self, values: Mapping[str, Fraction]) -> tuple[tuple[Fraction, ...], ...]:
        """Give the exact coefficients of the degree variable's powers, from 0 up, at rational values."""
        return coefficients(self.bundles, self.forks, self.roots, values)

    def roots_of(self, weights: Sequence[Any], zero: Any, one: Any, *, signed: bool = True) -> list[Any]:
        """Give each determinant in any ring, from the weight of every bundle.

        Without `signed` no product is taken off: then it is no determinant, but a sum over its products.
        """

        def combined(fork: Fork, values: Sequence[Any]) -> Any:
            item, taken, left, sign = fork
            value = weights[item] if taken == 1 else weights[item] * values[taken]
            if not left:
                return value
            return value - values[left] if sign < 0 and signed else value + values[left]

        found = fold(self.forks, [fork for _, fork in self.roots], zero, one, combined)
        return [
            -value if sign < 0 and signed else value
            for (sign, _), value in zip(self.roots, found, strict=True)
        ]


def _counted(item: Bundle) -> fmpz_poly:
    """Give the number of a bundle's terms at each degree."""
    degrees = [entry.degree for entry in item.entries]
    return fmpz_poly([degrees.count(power) for power in range(max(degrees) + 1)])
