"""The numbers of a linear system of nodal equations at the nominal values, exactly."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from fractions import Fraction

from derive.algebra.ratio import exact_value
from derive.nodal.system import NodalSystem

Numbers = Mapping[str, Fraction]
NumberRow = dict[str, Fraction]


class OpenError(ValueError):
    """Raised where equations leave unknowns open (`unknowns`), or contradict each other (none)."""

    def __init__(self, unknowns: tuple[str, ...]) -> None:
        self.unknowns = unknowns
        super().__init__(", ".join(unknowns) or "contradictory")


def number_rows(system: NodalSystem, values: Numbers) -> list[NumberRow]:
    """Give every equation as {unknown or drive: coefficient} at these values."""
    ring = system.ring
    inside = {
        name: 1 / value if name in ring.inverted else value
        for name, value in values.items()
        if name in ring.names
    }
    return [
        {name: exact_value(ring, entry, inside, {}) for name, entry in equation.row}
        for equation in system.equations
    ]


def solve(system: NodalSystem, values: Numbers) -> dict[str, Fraction]:
    """Give every unknown at these values, drives being symbols with a value of their own.

    Raises: OpenError where there is no unique solution.
    """
    # What is wanted comes first, so that its own definition gives it and what it hangs on is named.
    names = [system.wanted, *(u.name for u in system.unknowns if u.name != system.wanted)]
    rows = []
    for row in number_rows(system, values):
        right = [-values[name] * entry for name, entry in row.items() if name not in names]
        rows.append(([row.get(name, Fraction(0)) for name in names], sum(right, Fraction(0))))
    return dict(zip(names, solve_matrix(names, rows), strict=True))


def solve_matrix(names: Sequence[str], rows: Sequence[tuple[list[Fraction], Fraction]]) -> list[Fraction]:
    """Solve (coefficients, right side) rows by elimination.

    Raises: OpenError with the unknowns that are left open.
    """
    table = [[*coefficients, right] for coefficients, right in rows]
    done: list[int] = []
    open_names = []
    for column, name in enumerate(names):
        pivot = next((k for k in range(len(done), len(table)) if table[k][column]), None)
        if pivot is None:
            open_names.append(name)
            continue
        place = len(done)
        table[place], table[pivot] = table[pivot], table[place]
        scale = table[place][column]
        table[place] = [entry / scale for entry in table[place]]
        for k, row in enumerate(table):
            if k != place and row[column]:
                factor = row[column]
                table[k] = [a - factor * b for a, b in zip(row, table[place], strict=True)]
        done.append(column)
    # What is left open is said before what contradicts itself: a node that nothing feeds is both.
    if open_names or any(row[-1] for row in table[len(done) :]):
        raise OpenError(tuple(open_names))
    return [row[-1] for row in table[: len(done)]]
