"""The workshop in which resistors, or capacitors, are combined in parallel and in series."""

from __future__ import annotations

from collections import Counter
from collections.abc import Sequence
from dataclasses import dataclass, replace

from derive.bands.wiring import ends_of, sensed_nodes, symbols_of
from derive.devices.elements import Capacitor, Element, Resistor, SmallSignal
from derive.expressions.tree import Expression, Name, Parallel, Sum
from derive.topology.topology import GROUND, Role


@dataclass(frozen=True, slots=True)
class Group:
    """One element of the circuit in the making, or several combined.

    `parts` are the names that `expression` is written with, `base` the circuit's own symbols in
    `expanded`; `name` is "" until the group has one. `way` says how the outermost combination goes.
    """

    element: Element
    expression: Expression
    expanded: Expression
    parts: tuple[str, ...]
    base: tuple[str, ...]
    role: Role = ""
    name: str = ""
    way: str = ""

    @property
    def nodes(self) -> tuple[str, str]:
        """The two nodes that the element joins."""
        first, second = ends_of(self.element)
        return first, second

    @property
    def written(self) -> Expression:
        """The group's value: by its name if it has one."""
        return Name(self.name) if self.name else self.expression

    @property
    def names(self) -> tuple[str, ...]:
        """The names that `written` holds."""
        return (self.name,) if self.name else self.parts

    @property
    def in_series(self) -> bool:
        """Whether all parts are in one chain."""
        return self.way == "series"

    @property
    def in_parallel(self) -> bool:
        """Whether all parts are between the same two nodes."""
        return self.way == "parallel"


@dataclass(slots=True)
class Workshop:
    """The circuit's elements as groups, in order; `named` lists the groups that were given a name.

    `apart` are the elements that must stay by themselves; `uses` counts how often drives, sensing
    elements and finds name each node.
    """

    groups: list[Group]
    apart: frozenset[str]
    uses: Counter[str]
    named: list[Group]

    @staticmethod
    def of(circuit: SmallSignal, apart: frozenset[str], asked: Sequence[str]) -> Workshop:
        """Lay out a circuit; `asked` are the nodes that finds name."""
        uses = Counter([GROUND, *asked])
        for item in (*circuit.elements, *circuit.drives):
            uses.update(sensed_nodes(item))
        for drive in circuit.drives:
            uses.update(drive.nodes)
        roles = dict(circuit.roles)
        groups = [_single(element, roles.get(element.name, "")) for element in circuit.elements]
        return Workshop(groups, apart, uses, [])

    def free(self) -> list[Group]:
        """Give the resistors and capacitors that may be combined."""
        return [
            group
            for group in self.groups
            if isinstance(group.element, Resistor | Capacitor)
            and group.element.name not in self.apart
            and group.nodes[0] != group.nodes[1]
        ]

    def pick(self, names: Sequence[str]) -> tuple[list[Group], str]:
        """Give the groups of the parts named, or say why they cannot be combined."""
        picked: list[Group] = []
        for name in names:
            found = [g for g in self.groups if name in (g.element.name, g.name, *g.base)]
            if not found:
                return [], f"{name} is not in the circuit"
            group = found[0]
            if group.name and group.name not in names and not set(group.base) <= set(names):
                return [], f"{name} is a part of {group.name} already"
            if not isinstance(group.element, Resistor | Capacitor):
                return [], f"{name} is neither a resistor nor a capacitor"
            if group.element.name in self.apart:
                return [], f"the current of {name} is sensed or wanted"
            if group not in picked:
                picked.append(group)
        if len({type(group.element) for group in picked}) > 1:
            return [], "they are of two kinds"
        if len({group.role for group in picked}) > 1:
            return [], "they have different roles"
        return picked, ""

    def combine(self, chosen: Sequence[Group], keep: int = 0) -> list[Group]:
        """Combine the chosen groups with each other as far as that goes; give what they become.

        With `keep`, nothing is done unless all become one.
        """
        before = list(self.groups)
        left = list(chosen)
        while (pair := self._next_pair(left)) is not None:
            first, second, way = pair
            made = _combined(first, second, way)
            self.groups = [made if g is first else g for g in self.groups if g is not second]
            left = [made if g is first else g for g in left if g is not second]
        if keep and len(left) > 1:
            self.groups = before
            return list(chosen)
        return left

    def rename(self, group: Group, name: str) -> Group:
        """Give a combined group its name; its value is from now on written by that name."""
        kind = Resistor if isinstance(group.element, Resistor) else Capacitor
        named = replace(group, element=kind(name, name, group.nodes, name), name=name)
        self.groups = [named if other is group else other for other in self.groups]
        self.named.append(named)
        return named

    def _next_pair(self, groups: Sequence[Group]) -> tuple[Group, Group, str] | None:
        """Give the first two in parallel; where there are none, the first two in series."""
        for index, first in enumerate(groups):
            for second in groups[index + 1 :]:
                if set(first.nodes) == set(second.nodes):
                    return first, second, "parallel"
        touching = Counter(node for group in self.groups for node in ends_of(group.element))
        for index, first in enumerate(groups):
            for second in groups[index + 1 :]:
                for node in first.nodes:
                    if node in second.nodes and touching[node] == 2 and not self.uses[node]:
                        return first, second, "series"
        return None


def _single(element: Element, role: Role) -> Group:
    names = symbols_of(element)
    if isinstance(element, Resistor | Capacitor):
        value = Name(names[0])
        return Group(element, value, value, names, names, role)
    return Group(element, Name(element.name), Name(element.name), names, names, role)


def _combined(first: Group, second: Group, way: str) -> Group:
    """Combine two groups; resistances in series and capacitances in parallel add up."""
    adds = (way == "series") == isinstance(first.element, Resistor)
    shared = next(node for node in first.nodes if node in second.nodes)
    nodes = first.nodes
    if way == "series":
        outer = next(node for node in second.nodes if node != shared)
        nodes = (first.nodes[0], outer) if first.nodes[1] == shared else (outer, first.nodes[1])
    single = {way, ""}
    inner = [group.way if not group.name else "" for group in (first, second)]
    return Group(
        _between(first.element, nodes),
        _joined([first.written, second.written], adds=adds),
        _joined([first.expanded, second.expanded], adds=adds),
        (*first.names, *second.names),
        (*first.base, *second.base),
        first.role,
        way=way if set(inner) <= single else "mixed",
    )


def _between(element: Element, nodes: tuple[str, str]) -> Element:
    if isinstance(element, Resistor):
        return replace(element, between=nodes)
    if isinstance(element, Capacitor):
        return replace(element, between=nodes)
    raise TypeError(f"{element.name} cannot be combined")


def _joined(expressions: Sequence[Expression], *, adds: bool) -> Expression:
    """Join expressions in one flat sum, or in one flat parallel combination."""
    kind = Sum if adds else Parallel
    flat: list[Expression] = []
    for expression in expressions:
        if isinstance(expression, Sum) and adds:
            flat.extend(expression.terms)
        elif isinstance(expression, Parallel) and not adds:
            flat.extend(expression.branches)
        else:
            flat.append(expression)
    return kind(tuple(flat))
