"""The nodes of ideal elements: where current may enter them, what they sense, and under new names."""

from __future__ import annotations

from collections.abc import Callable, Iterable
from dataclasses import replace
from typing import TypeVar

from derive.devices.elements import (
    CurrentGain,
    DriveElement,
    Element,
    SmallSignal,
    Transresistance,
)
from derive.topology.topology import GROUND, Topology

Item = TypeVar("Item", bound=Element | DriveElement)
_ENDS = ("between", "flows", "output", "nodes")
_SENSES = ("senses", "inputs")
_VALUES = (
    "resistance",
    "capacitance",
    "inductance",
    "coefficient",
    "transconductance",
    "gain",
    "transresistance",
    "dc_gain",
    "unity",
)


def ends_of(item: Element | DriveElement) -> tuple[str, ...]:
    """Give the nodes at which current may enter or leave; an op amp's output works against ground."""
    for field in _ENDS:
        value = getattr(item, field, None)
        if isinstance(value, str):
            return (value, GROUND)
        if value is not None:
            return tuple(value)
    return ()


def sensed_nodes(item: Element | DriveElement) -> tuple[str, ...]:
    """Give the nodes whose voltages an element senses without taking current."""
    values = (getattr(item, field, None) for field in _SENSES)
    return tuple(node for value in values if isinstance(value, tuple) for node in value)


def with_nodes(item: Item, name_of: Callable[[str], str]) -> Item:
    """Give the element with every node under its new name."""
    changes: dict[str, str | tuple[str, ...]] = {}
    for field in (*_ENDS, *_SENSES):
        value = getattr(item, field, None)
        if isinstance(value, tuple):
            changes[field] = tuple(map(name_of, value))
        elif isinstance(value, str) and field == "output":
            changes[field] = name_of(value)
    return replace(item, **changes) if changes else item  # type: ignore[arg-type]


def symbols_of(element: Element) -> tuple[str, ...]:
    """Give the symbols that an element's law is written with."""
    values = (getattr(element, field, None) for field in _VALUES)
    return tuple(value for value in values if isinstance(value, str))


def sensed_currents(circuit: SmallSignal) -> dict[str, str]:
    """Give every element or drive whose current is sensed, with the part that senses it."""
    return {
        element.senses: element.part
        for element in circuit.elements
        if isinstance(element, CurrentGain | Transresistance)
    }


def wanted_currents(circuit: SmallSignal) -> frozenset[str]:
    """Give the elements of every part whose current is wanted."""
    parts = {find.part for find in circuit.topology.finds if find.quantity == "current"}
    own = (element.name for element in circuit.elements if element.part in parts)
    return frozenset([*own, *(part for part in parts if part is not None)])


def place_of(topology: Topology, name: str) -> str:
    """Give the file and line of a part or drive; "" where it has none."""
    places = {part.name: part.place for part in topology.parts}
    places |= {drive.name: drive.place for drive in topology.drives}
    return str(places[name]) if name in places else ""


class Nodes:
    """Nodes that became one: each group goes by the name of ground, else of its first-named node."""

    def __init__(self, ordered: Iterable[str]) -> None:
        self._leader = dict.fromkeys([GROUND, *ordered], "")
        self._rank = {node: rank for rank, node in enumerate(self._leader)}

    def name_of(self, node: str) -> str:
        """Give the name of a node's group."""
        while self._leader.get(node):
            node = self._leader[node]
        return node

    def join(self, one: str, other: str) -> None:
        """Make two nodes one."""
        first, second = sorted(map(self.name_of, (one, other)), key=lambda node: self._rank[node])
        if first != second:
            self._leader[second] = first

    @property
    def renamed(self) -> tuple[tuple[str, str], ...]:
        """Give (node, new name) of every node that lost its own, in the order of the nodes."""
        return tuple((node, self.name_of(node)) for node, leader in self._leader.items() if leader)


def nodes_in_order(circuit: SmallSignal) -> tuple[str, ...]:
    """Give the circuit's nodes in the order in which drives, elements and supplies name them."""
    items = (*circuit.drives, *circuit.elements)
    named = [node for item in items for node in (*ends_of(item), *sensed_nodes(item))]
    return tuple(dict.fromkeys([*named, *(supply.node for supply in circuit.topology.supplies)]))
