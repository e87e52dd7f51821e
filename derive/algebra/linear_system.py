"""Solve a linear system with polynomial entries for one unknown, in lowest terms.

A general greatest common divisor is by far the dearest operation here; so it is asked for only where a
quick test on a random line does not show that there is none. Where there is one, most systems are
multilinear: no generator but the degree variable has a power above one. Factors of a multilinear
polynomial have disjoint generators, so what numerator and denominator share is made of just those
generators on which the quotient does not depend. They are found by derivatives modulo a prime and set
to integers before the determinants are expanded once more.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

from derive.algebra import modular
from derive.algebra.common_factor import (
    remove_common_content,
    remove_common_factor,
    remove_common_monomial,
)
from derive.algebra.coprime import coprime, cramer_shared_degree
from derive.algebra.minors import Minors
from derive.algebra.modular import PRIME
from derive.algebra.ring import Polynomial, Ring
from derive.errors import SingularError

# Below this many terms FLINT's general greatest common divisor is quicker than the derivatives.
GENERAL_LIMIT = 1_500

# Small primes, pairwise distinct, for generators on which the answer does not depend.
FILLING = (3, 5, 7, 11, 13, 17, 19, 23, 29, 31, 37, 41, 43, 47, 53, 59, 61, 67, 71, 73, 79, 83)


@dataclass(frozen=True, slots=True, eq=False)
class LinearSystem:
    """rows · unknowns = right side, as rows of {column: polynomial}.

    The last column, number len(rows), is the right side; the one before it, that of the unknown
    sought. `degree_variable` is the one generator that may occur to any power.
    """

    ring: Ring
    rows: tuple[Mapping[int, Polynomial], ...]
    degree_variable: str

    @property
    def size(self) -> int:
        """The number of unknowns."""
        return len(self.rows)


@dataclass(frozen=True, slots=True, eq=False)
class Quotient:
    """numerator/denominator, without a common factor."""

    numerator: Polynomial
    denominator: Polynomial


def solve(system: LinearSystem) -> Quotient:
    """Give the last unknown of the system in lowest terms.

    Raises: SingularError where the determinant is zero for all values; TooLargeError.
    """
    numerator, denominator = raw_quotient(system.ring, system.rows)
    if denominator == 0:
        raise SingularError("the system has no unique solution")
    if numerator == 0:
        return Quotient(system.ring.zero, system.ring.one)
    if len(numerator) + len(denominator) <= GENERAL_LIMIT:
        return Quotient(*remove_common_factor(numerator, denominator))
    degree = max(numerator.total_degree(), denominator.total_degree())
    monomial = numerator.term_content().gcd(denominator.term_content())
    numerator, denominator = remove_common_monomial(numerator, denominator)
    if len(numerator) == 1 or len(denominator) == 1:
        return Quotient(numerator, denominator)
    if cramer_shared_degree(system.ring, system.rows, degree) == monomial.total_degree():
        return Quotient(numerator, denominator)
    if _multilinear(system, numerator, denominator):
        sensitive = _Sensitivity.at(system, modular.residues(len(system.ring.names), "solve"))
        shared = _shared_names(system, numerator, denominator)
        idle = [name for name in shared if not sensitive.depends_on(name)]
        numerator, denominator = raw_quotient(system.ring, _fill(system, idle))
        numerator, denominator = remove_common_content(
            system.ring, numerator, denominator, system.degree_variable
        )
    if coprime(system.ring, numerator, denominator):
        return Quotient(numerator, denominator)
    return Quotient(*remove_common_factor(numerator, denominator))


def raw_quotient(ring: Ring, rows: tuple[Mapping[int, Polynomial], ...]) -> tuple[Polynomial, Polynomial]:
    """Give the two determinants of Cramer's rule for the last unknown, nothing cancelled."""
    size = len(rows)
    minors = Minors(ring, rows)
    all_columns = (1 << size) - 1
    denominator = minors.minor(all_columns, all_columns)
    numerator = minors.minor(all_columns, all_columns ^ (1 << (size - 1)) | 1 << size)
    return numerator, denominator


def _shared_names(system: LinearSystem, one: Polynomial, other: Polynomial) -> list[str]:
    pairs = zip(system.ring.names, one.degrees(), other.degrees(), strict=False)
    return [name for name, a, b in pairs if a and b and name != system.degree_variable]


def _multilinear(system: LinearSystem, *polynomials: Polynomial) -> bool:
    return all(
        degree <= 1
        for polynomial in polynomials
        for name, degree in zip(system.ring.names, polynomial.degrees(), strict=False)
        if name != system.degree_variable
    )


def _fill(system: LinearSystem, idle: list[str]) -> tuple[Mapping[int, Polynomial], ...]:
    safe = {
        system.ring.context.py_names[system.ring.names.index(name)]: FILLING[k % len(FILLING)] + k
        for k, name in enumerate(idle)
    }
    filled = []
    for row in system.rows:
        entries = {column: entry.subs(safe) for column, entry in row.items()}
        filled.append({column: entry for column, entry in entries.items() if entry != 0})
    return tuple(filled)


@dataclass(frozen=True, slots=True, eq=False)
class _Sensitivity:
    """The system at one point modulo PRIME, with what its derivatives need."""

    system: LinearSystem
    point: list[int]
    solution: list[int]
    adjoint: list[int]

    @staticmethod
    def at(system: LinearSystem, point: list[int]) -> _Sensitivity:
        size = system.size
        dense = modular.evaluate_rows(system.rows, size + 1, point)
        square = modular.matrix([row[:size] for row in dense])
        if square.rank() < size:
            raise SingularError("the system has no unique solution")
        inverse = square.inv()
        right = modular.matrix([[row[size]] for row in dense])
        solution = [int(value) for value in (inverse * right).entries()]
        adjoint = [int(value) for value in inverse.entries()[(size - 1) * size :]]
        return _Sensitivity(system, point, solution, adjoint)

    def depends_on(self, name: str) -> bool:
        """Whether the unknown sought varies with the generator (false by chance: about 1e-17)."""
        index = self.system.ring.names.index(name)
        size = self.system.size
        moved = list(self.point)
        moved[index] += 1
        total = 0
        for row, weight in zip(self.system.rows, self.adjoint, strict=True):
            for column, entry in row.items():
                if not entry.degrees()[index]:
                    continue
                slope = int(entry(*moved)) - int(entry(*self.point))
                against = -1 if column == size else self.solution[column]
                total += weight * slope * against
        return total % PRIME != 0
