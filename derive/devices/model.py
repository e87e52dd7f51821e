"""What a device model gives, and the names that it may use."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property
from typing import Protocol

from derive.devices.elements import Element
from derive.quantities.dimension import Dimension
from derive.quantities.symbol import Symbol, Value
from derive.topology.topology import Part, Topology


@dataclass(frozen=True, slots=True)
class Model:
    """The elements that stand for one part, and the symbols that they are written with."""

    elements: tuple[Element, ...]
    symbols: tuple[Symbol, ...]


class DeviceModel(Protocol):
    """A module of `derive.devices.models`."""

    KIND: str

    def linearise(self, part: Part, names: Names) -> Model:
        """Give the elements of one part."""


@dataclass(frozen=True)
class Names:
    """The names in use in a topology, and the names that follow from a device's."""

    topology: Topology

    @cached_property
    def taken(self) -> frozenset[str]:
        """Every part's and drive's name."""
        parts = (part.name for part in self.topology.parts)
        return frozenset([*parts, *(drive.name for drive in self.topology.drives)])

    @cached_property
    def nodes(self) -> frozenset[str]:
        """Every node that a part or drive names."""
        of_parts = (node for part in self.topology.parts for node in part.all_nodes)
        of_drives = (node for drive in self.topology.drives for node in drive.nodes)
        return frozenset([*of_parts, *of_drives])

    def indexed(self, part: Part, symbol: str) -> str:
        """Give a device's symbol: bare if it is the only device of its kind, else with its index.

        The index is what follows the first letter of the device's name: Q1 gives g_m1, Q_tail gives
        g_m_tail.
        """
        alike = [other for other in self.topology.parts if other.kind == part.kind]
        return symbol if len(alike) == 1 else symbol + part.name[1:]

    def inner_node(self, part: Part, word: str) -> str:
        """Give a node inside a part, under a name with this word that no node of the topology bears."""
        name = f"{part.name}_{word}"
        while name in self.nodes:
            name += "_"
        return name


def value_symbol(part: Part, dimension: Dimension, *, positive: bool) -> Symbol:
    """Give the symbol of a part that is named after the part itself."""
    value = part.value
    if value is None:
        raise ValueError(f"part {part.name} has no value")
    return Symbol(
        part.name,
        dimension,
        value.exact,
        f"part {part.name}",
        value.text,
        part.tolerance,
        positive,
    )


def parameter_symbol(part: Part, name: str, value: Value, dimension: Dimension) -> Symbol:
    """Give the symbol of one parameter of a device."""
    return Symbol(name, dimension, value.exact, f"part {part.name}", value.text)
