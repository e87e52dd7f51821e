"""Solve a linear system with polynomial entries for one unknown, in lowest terms.

A general greatest common divisor of long polynomials is by far the dearest operation here; so it is
asked for only of the shortest polynomials that it must divide, and only where these are short. Most
systems are multilinear: no generator but the degree variable has a power above one. Factors of a
multilinear polynomial have disjoint generators, so what numerator and denominator share is made of just
those generators on which the quotient does not depend, and of the degree variable. The former are found
by derivatives modulo a prime, and set to integers before the determinants are expanded once more.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

from derive.algebra.common_factor import (
    bounds,
    remove_bounded_factor,
    remove_common_content,
    remove_common_factor,
    remove_common_monomial,
)
from derive.algebra.coprime import coprime
from derive.algebra.minors import Minors, refuse_large
from derive.algebra.ring import Polynomial, Ring, used_names
from derive.algebra.sensitivity import idle_names
from derive.errors import SingularError

Row = Mapping[int, Polynomial]

# Below this many terms FLINT's general greatest common divisor is quicker than the derivatives.
GENERAL_LIMIT = 400

# Smaller systems lose more by the sum of their rows than it saves.
SHORTENING_SIZE = 4

# Small primes, pairwise distinct, for generators on which the answer does not depend.
FILLING = (3, 5, 7, 11, 13, 17, 19, 23, 29, 31, 37, 41, 43, 47, 53, 59, 61, 67, 71, 73, 79, 83)


@dataclass(frozen=True, slots=True, eq=False)
class LinearSystem:
    """rows · unknowns = right side, as rows of {column: polynomial}.

    The last column, number len(rows), is the right side; the one before it, that of the unknown
    sought. `degree_variable` is the one generator that may occur to any power.
    """

    ring: Ring
    rows: tuple[Row, ...]
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
    numerator, denominator = remove_common_monomial(numerator, denominator)
    if min(len(numerator), len(denominator)) == 1:
        return Quotient(numerator, denominator)
    one, other = bounds(numerator, denominator)
    if min(len(one), len(other)) == 1 or len(one) + len(other) <= GENERAL_LIMIT:
        return Quotient(*remove_bounded_factor(numerator, denominator, one, other))
    if _multilinear(system, numerator, denominator):
        shared = used_names(system.ring, [one]), used_names(system.ring, [other])
        names = [name for name in shared[0] if name in shared[1] and name != system.degree_variable]
        return _cancel_multilinear(system, numerator, denominator, names)
    if coprime(system.ring, one, other):
        return Quotient(numerator, denominator)
    return Quotient(*remove_bounded_factor(numerator, denominator, one, other))


def raw_quotient(ring: Ring, rows: Sequence[Row]) -> tuple[Polynomial, Polynomial]:
    """Give the two determinants of Cramer's rule for the last unknown, or both with the other sign.

    Nothing is cancelled but what the sum of all rows saves.
    """
    size = len(rows)
    if size >= SHORTENING_SIZE:
        refuse_large(rows)
    minors = Minors(ring, _shortened(rows))
    all_columns = (1 << size) - 1
    denominator = minors.minor(all_columns, all_columns)
    numerator = minors.minor(all_columns, all_columns ^ (1 << (size - 1)) | 1 << size)
    return numerator, denominator


def _shortened(rows: Sequence[Row]) -> list[Row]:
    """Put the sum of all rows in the longest one's place where it is shorter; long rows come first.

    Neither changes a determinant but for its sign. In the sum much cancels where entries stand in one
    row with one sign and in another with the other, and long rows then meet short minors only.
    """
    if len(rows) < SHORTENING_SIZE:
        return list(rows)
    total: dict[int, Polynomial] = {}
    for row in rows:
        for column, entry in row.items():
            total[column] = total[column] + entry if column in total else entry
    total = {column: entry for column, entry in total.items() if entry}
    ordered = sorted(rows, key=_length, reverse=True)
    if _length(total) < _length(ordered[0]):
        ordered[0] = total
    return ordered


def _length(row: Row) -> int:
    return sum(len(entry) for entry in row.values())


def _multilinear(system: LinearSystem, *polynomials: Polynomial) -> bool:
    return all(
        degree <= 1
        for polynomial in polynomials
        for name, degree in zip(system.ring.names, polynomial.degrees(), strict=False)
        if name != system.degree_variable
    )


def _cancel_multilinear(
    system: LinearSystem, numerator: Polynomial, denominator: Polynomial, names: list[str]
) -> Quotient:
    """Cancel what two multilinear determinants share; a common factor has no generators but `names`."""
    idle = idle_names(system.ring, system.rows, names)
    if idle:
        filled = raw_quotient(system.ring, _fill(system, idle))
        if filled[1] == 0:
            # The integers happen to be a root of the common factor itself.
            return Quotient(*remove_common_factor(numerator, denominator))
        numerator, denominator = filled
    numerator, denominator = remove_common_content(
        system.ring, numerator, denominator, system.degree_variable
    )
    if not idle or coprime(system.ring, numerator, denominator):
        return Quotient(numerator, denominator)
    return Quotient(*remove_common_factor(numerator, denominator))


def _fill(system: LinearSystem, idle: list[str]) -> tuple[Row, ...]:
    safe = {system.ring.names.index(name): FILLING[k % len(FILLING)] + k for k, name in enumerate(idle)}
    filled = []
    for row in system.rows:
        entries = {column: entry.subs(safe) for column, entry in row.items()}
        filled.append({column: entry for column, entry in entries.items() if entry != 0})
    return tuple(filled)
