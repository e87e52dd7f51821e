"""Which generators the solution of a linear system does not depend on, judged modulo a prime."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

from derive.algebra import modular
from derive.algebra.modular import PRIME
from derive.algebra.ring import Polynomial, Ring
from derive.errors import SingularError


@dataclass(frozen=True, slots=True)
class _Term:
    """One term of an entry: its value at the point, and the powers of the generators in it."""

    row: int
    column: int
    value: int
    powers: tuple[tuple[int, int], ...]


def idle_names(ring: Ring, rows: Sequence[Mapping[int, Polynomial]], names: Sequence[str]) -> list[str]:
    """Give those of the names that do not change the last unknown (wrong by chance: about 1e-17).

    The derivative of the solution x of A·x = b is A⁻¹·(b' − A'·x), taken here at one random point.

    Raises: SingularError where the determinant is zero.
    """
    size = len(rows)
    terms = _terms(rows, modular.residues(len(ring.names), "sensitivity"))
    dense = [[0] * (size + 1) for _ in rows]
    for term in terms:
        dense[term.row][term.column] += term.value
    square = modular.matrix([[value % PRIME for value in row[:size]] for row in dense])
    if square.rank() < size:
        raise SingularError("the system has no unique solution")
    inverse = square.inv()
    right = modular.matrix([[row[size] % PRIME] for row in dense])
    # With −1 for the right side, b' − A'·x is minus the sum of slope times solution.
    solution = [*map(int, (inverse * right).entries()), -1]
    weights = [int(value) for value in inverse.entries()[(size - 1) * size :]]
    # A term's derivative times its generator is the term times the power: so one pass serves all.
    totals = dict.fromkeys(range(len(ring.names)), 0)
    for term in terms:
        share = weights[term.row] * term.value % PRIME * solution[term.column]
        for index, power in term.powers:
            totals[index] += power * share
    return [name for name in names if totals[ring.names.index(name)] % PRIME == 0]


def _terms(rows: Sequence[Mapping[int, Polynomial]], point: Sequence[int]) -> list[_Term]:
    found = []
    for row, entries in enumerate(rows):
        for column, entry in entries.items():
            for exponents, value in zip(entry.monoms(), map(int, entry.coeffs()), strict=True):
                powers = tuple((index, int(power)) for index, power in enumerate(exponents) if power)
                for index, power in powers:
                    value = value * pow(point[index], power, PRIME) % PRIME
                found.append(_Term(row, column, value, powers))
    return found
