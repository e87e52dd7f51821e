"""Which node voltages are unknown, and what drives make of the others."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass

from derive.algebra.ring import Ring
from derive.devices.elements import VoltageDrive
from derive.errors import SingularError
from derive.expressions.polynomials import add, subtract
from derive.expressions.tree import ZERO, Expression, Name, Negative, Sum
from derive.nodal.linear_form import LinearForm, combine
from derive.topology.topology import GROUND


@dataclass(frozen=True, slots=True)
class Tie:
    """A node's voltage as that of another node plus signed drives."""

    base: str
    drives: tuple[tuple[str, int], ...]


@dataclass(frozen=True, slots=True, eq=False)
class Voltages:
    """The voltage of every node as a linear form in unknown voltages and drives."""

    ring: Ring
    ties: dict[str, Tie]
    active: frozenset[str]
    name_of: dict[str, str]

    def at(self, node: str) -> LinearForm:
        """Give the voltage of a node."""
        tie = self.ties[node]
        drives = [(name, sign) for name, sign in tie.drives if name in self.active]
        shown: list[Expression] = []
        rows = []
        if tie.base != GROUND:
            shown.append(Name(self.name_of[tie.base]))
            rows.append(((self.name_of[tie.base], self.ring.one),))
        for name, sign in drives:
            shown.append(Name(name) if sign > 0 else Negative(Name(name)))
            rows.append(((name, self.ring.constant(sign)),))
        return LinearForm(add(shown), combine(rows))

    def between(self, plus: str, minus: str) -> LinearForm:
        """Give the voltage of one node against another."""
        one, other = self.at(plus), self.at(minus)
        shown: Expression
        if isinstance(other.shown, Sum):
            # Drives common to both nodes would stand twice and cancel: write the row instead.
            row = combine([one.row, other.negated().row])
            shown = add([_signed(name, entry) for name, entry in row])
            return LinearForm(shown, row)
        shown = subtract(one.shown, other.shown) if one.shown != other.shown else ZERO
        return LinearForm(shown, combine([one.row, other.negated().row]))


def tie_nodes(nodes: Sequence[str], drives: Sequence[VoltageDrive]) -> dict[str, Tie]:
    """Express each node by the first node of its group of drive-tied nodes; ground before all.

    Raises: SingularError where drives form a loop, so that they could contradict each other.
    """
    for count, drive in enumerate(drives):
        joined = groups(nodes, [earlier.nodes for earlier in drives[:count]])
        if joined(drive.nodes[0]) == joined(drive.nodes[1]):
            raise SingularError(
                f"drive {drive.name} closes a loop of voltage drives between nodes "
                f"{drive.nodes[0]} and {drive.nodes[1]}",
                cure="take one of them out of the loop, or put its source resistance into it",
            )
    neighbours: dict[str, list[tuple[str, str, int]]] = {node: [] for node in (GROUND, *nodes)}
    for drive in drives:
        plus, minus = drive.nodes
        neighbours[plus].append((minus, drive.name, -1))
        neighbours[minus].append((plus, drive.name, 1))
    ties: dict[str, Tie] = {}
    for start in (GROUND, *nodes):
        if start in ties:
            continue
        ties[start] = Tie(start, ())
        waiting = [start]
        while waiting:
            node = waiting.pop(0)
            for other, name, sign in neighbours.get(node, ()):
                if other not in ties:
                    ties[other] = Tie(start, (*ties[node].drives, (name, sign)))
                    waiting.append(other)
    return ties


def fresh(taken: set[str], wanted: str) -> str:
    """Give a name that is not taken, and take it: the wanted one, or that with underscores behind."""
    while wanted in taken:
        wanted += "_"
    taken.add(wanted)
    return wanted


def groups(nodes: Sequence[str], edges: Sequence[tuple[str, str]]) -> Callable[[str], str]:
    """Give a function from a node to the first node of its group, nodes being joined by edges."""
    leader = {node: node for node in (GROUND, *nodes)}

    def find(node: str) -> str:
        while leader[node] != node:
            node = leader[node]
        return node

    places = {node: place for place, node in enumerate(leader)}
    for one, other in edges:
        first, second = sorted((find(one), find(other)), key=places.__getitem__)
        leader[second] = first
    return find


def _signed(name: str, entry: object) -> Expression:
    return Name(name) if entry == 1 else Negative(Name(name))
