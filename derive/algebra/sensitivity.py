"""Which generators the solution of a linear system does not depend on, judged modulo a prime."""

from __future__ import annotations

from collections.abc import Mapping, Sequence

from derive.algebra import modular
from derive.algebra.modular import PRIME
from derive.algebra.ring import Polynomial, Ring
from derive.errors import SingularError


def idle_names(ring: Ring, rows: Sequence[Mapping[int, Polynomial]], names: Sequence[str]) -> list[str]:
    """Give those of the names that do not change the last unknown (wrong by chance: about 1e-17).

    The derivative of the solution x of A·x = b is A⁻¹·(b' − A'·x), taken here at one random point.

    Raises: SingularError where the determinant is zero.
    """
    size = len(rows)
    point = modular.residues(len(ring.names), "sensitivity")
    dense = modular.evaluate_rows(rows, size + 1, point)
    square = modular.matrix([row[:size] for row in dense])
    if square.rank() < size:
        raise SingularError("the system has no unique solution")
    inverse = square.inv()
    right = modular.matrix([[row[size]] for row in dense])
    # The solution, and −1 for the right side: so b' − A'·x is minus the sum of slope times solution.
    solution = [*(int(value) for value in (inverse * right).entries()), -1]
    weights = [int(value) for value in inverse.entries()[(size - 1) * size :]]
    wanted = {ring.names.index(name) for name in names}
    totals = dict.fromkeys(wanted, 0)
    for row, weight in zip(rows, weights, strict=True):
        for column, entry in row.items():
            for index, degree in enumerate(entry.degrees()):
                if degree > 0 and index in wanted:
                    slope = int(entry.derivative(index)(*point))
                    totals[index] += weight * slope * solution[column]
    return [name for name in names if totals[ring.names.index(name)] % PRIME == 0]
