"""The order of elimination: which equation is solved for which unknown, and what that costs.

Pivots are chosen on the matrix at one random point modulo a prime, where an entry is zero only if it
is zero for all values (but for a chance of about 1e-17); so no pivot of the plan can vanish. Among
the pivots that spoil fewest other entries (Markowitz, The elimination form of the inverse, Management
Science 3 (1957) 255-269; from memory) the one with the fewest terms is taken.
"""

from __future__ import annotations

from collections.abc import Sequence

from derive.algebra import modular
from derive.algebra.modular import PRIME
from derive.eliminate.derivation import Plan, PlanLine
from derive.errors import SingularError
from derive.nodal.system import NodalSystem

Grid = list[dict[int, int]]


def plan(system: NodalSystem) -> Plan:
    """Give the order of elimination, the wanted unknown last.

    Raises: SingularError naming the unknowns that the equations leave open.
    """
    names = [unknown.name for unknown in system.unknowns]
    if len(system.equations) != len(names):
        raise _contradictory(system)
    wanted = names.index(system.wanted)
    values, sizes = _at_random_point(system, names)
    left = set(range(len(values)))
    open_unknowns = [place for place in range(len(names)) if place != wanted]
    lines: list[PlanLine] = []
    while open_unknowns:
        choice = _cheapest(values, sizes, left, open_unknowns)
        if choice is None:
            raise _singular(system, open_unknowns)
        equation, unknown = choice
        left.remove(equation)
        open_unknowns.remove(unknown)
        into = tuple(row for row in sorted(left) if unknown in values[row])
        terms = sum(_eliminate(values, sizes, equation, row, unknown) for row in into)
        lines.append(PlanLine(names[unknown], equation, into, terms))
    (last,) = left
    if wanted not in values[last]:
        raise _singular(system, [wanted])
    lines.append(PlanLine(system.wanted, last, (), sum(sizes[last].values())))
    return Plan(tuple(lines))


def _at_random_point(system: NodalSystem, names: Sequence[str]) -> tuple[Grid, Grid]:
    point = modular.residues(len(system.ring.names), "plan")
    places = {name: place for place, name in enumerate(names)}
    values: Grid = []
    sizes: Grid = []
    for equation in system.equations:
        row = {places[name]: entry for name, entry in equation.row if name in places}
        at_point = {place: int(entry(*point)) % PRIME for place, entry in row.items()}
        values.append({place: value for place, value in at_point.items() if value})
        sizes.append({place: len(entry) for place, entry in row.items()})
    return values, sizes


def _cheapest(
    values: Grid, sizes: Grid, left: set[int], unknowns: Sequence[int]
) -> tuple[int, int] | None:
    counts = {unknown: sum(unknown in values[row] for row in left) for unknown in unknowns}
    best: tuple[int, int, int, int] | None = None
    for row in sorted(left):
        for unknown in unknowns:
            if unknown not in values[row]:
                continue
            spoilt = (len(values[row]) - 1) * (counts[unknown] - 1)
            key = (spoilt, sizes[row][unknown], row, unknown)
            if best is None or key < best:
                best = key
    return None if best is None else (best[2], best[3])


def _eliminate(values: Grid, sizes: Grid, pivot_row: int, row: int, unknown: int) -> int:
    """Update one row of values and estimated sizes; give the size of what it becomes."""
    scale = values[row][unknown] * pow(values[pivot_row][unknown], -1, PRIME) % PRIME
    own, shared = sizes[pivot_row][unknown], sizes[row][unknown]
    updated, size = {}, {}
    for place in {**values[row], **values[pivot_row]}:
        here, there = values[row].get(place, 0), values[pivot_row].get(place, 0)
        value = (here - scale * there) % PRIME
        if place != unknown and value:
            updated[place] = value
            size[place] = own * sizes[row].get(place, 0) + shared * sizes[pivot_row].get(place, 0)
    values[row], sizes[row] = updated, size
    return sum(size.values())


def _singular(system: NodalSystem, unknowns: Sequence[int]) -> SingularError:
    parts = ", ".join(
        ("the voltage of node " if unknown.quantity == "voltage" else "the current of ") + unknown.subject
        for unknown in (system.unknowns[place] for place in unknowns)
    )
    return SingularError(
        f"the circuit has no unique solution for {system.find.name}: its equations leave open {parts}",
        where=str(system.find.place),
        cure="look for a controlled source or op amp whose loop gain is exactly one, "
        "or whose output its inputs cannot see",
    )


def _contradictory(system: NodalSystem) -> SingularError:
    return SingularError(
        f"the circuit has no unique solution for {system.find.name}: voltage sources, controlled sources "
        "or op amps tie the same nodes in two ways",
        where=str(system.find.place),
        cure="take one source out of the loop, or put a resistance into it",
    )
