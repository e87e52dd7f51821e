"""What a device model gives, and the names that it may use."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from fractions import Fraction
from functools import cached_property
from typing import Protocol

from derive.devices.elements import DriveElement, Element
from derive.devices.parameters import DeviceParameters, DevicePoint
from derive.quantities.dimension import Dimension
from derive.quantities.symbol import Symbol
from derive.topology.kind import Kind
from derive.topology.topology import Part, Topology


@dataclass(frozen=True, slots=True)
class Model:
    """The elements that stand for one part, and the symbols that they are written with."""

    elements: tuple[Element, ...]
    symbols: tuple[Symbol, ...]


@dataclass(frozen=True, slots=True)
class DcModel:
    """What stands for a device in the DC circuit: `drives` hold its fixed voltages and currents."""

    elements: tuple[Element, ...]
    drives: tuple[DriveElement, ...]
    symbols: tuple[Symbol, ...]


@dataclass(frozen=True, slots=True)
class Region:
    """Whether a device is in the region that its small-signal model supposes, and what says so."""

    passed: bool
    measured: str
    limit: str


@dataclass(frozen=True, slots=True)
class Witness:
    """A small circuit with a known answer: its parts (lines of TOML), what is found, and the answer.

    `answer` is an expression in the symbols of the circuit and s; the drive is `V_s` at node `in`.
    """

    parts: str
    find: str
    answer: str
    source: str


class DeviceModel(Protocol):
    """A module of `derive.devices.models`: a part that is ideal elements and nothing more."""

    KIND: str
    SPEC: Kind

    def linearise(self, part: Part, names: Names) -> Model:
        """Give the elements of one part."""


class Device(Protocol):
    """A module of `derive.devices.models` whose elements follow from parameters."""

    KIND: str
    SPEC: Kind
    WITNESS: Witness

    def parameters(
        self, part: Part, point: DevicePoint | None, thermal_voltage: Fraction, names: Names
    ) -> DeviceParameters:
        """Give the small-signal parameters: as given, or from the operating point."""

    def linearise(self, part: Part, names: Names, parameters: DeviceParameters) -> Model:
        """Give the elements of one part."""


class BiasedDevice(Device, Protocol):
    """A device that has an operating point.

    Voltages are those of the terminals against ground, by their keys; `values` are what
    `dc_values` gives, as floats or fractions.
    """

    CURRENT: str

    def is_settled(self, part: Part) -> bool:
        """Whether the file itself gives what the small-signal parameters need."""

    def dc_values(self, part: Part) -> dict[str, Fraction]:
        """Give the DC parameters in the device's own polarity, with `polarity` 1 or -1."""

    def dc_elements(self, part: Part, names: Names) -> DcModel:
        """Give what stands for the device in the DC circuit."""

    def currents(
        self, voltages: Mapping[str, float], values: Mapping[str, float], thermal_voltage: float
    ) -> dict[str, float]:
        """Give the current into each terminal by the device's own law."""

    def region(self, voltages: Mapping[str, Fraction], values: Mapping[str, Fraction]) -> Region:
        """Say whether the device is in the region that its model supposes."""


@dataclass(frozen=True)
class Names:
    """The names in use in a topology, and the names that follow from a device's.

    `symbols` holds the symbols that each kind of device may have; `registry.names_for` fills it.
    """

    topology: Topology
    symbols: Mapping[str, frozenset[str]] = field(default_factory=dict)

    @cached_property
    def taken(self) -> frozenset[str]:
        """The name of every part, drive, supply and merge."""
        names = [part.name for part in self.topology.parts]
        names += [drive.name for drive in self.topology.drives]
        names += [supply.name for supply in self.topology.supplies]
        names += [merge.name for merge in self.topology.merges]
        return frozenset(names)

    @cached_property
    def nodes(self) -> frozenset[str]:
        """Every node that a part or drive names."""
        of_parts = (node for part in self.topology.parts for node in part.all_nodes)
        of_drives = (node for drive in self.topology.drives for node in drive.nodes)
        return frozenset([*of_parts, *of_drives])

    def indexed(self, part: Part, symbol: str) -> str:
        """Give a device's symbol: bare if no other device may have it, else with its index.

        The index is what follows the first letter of the device's name: Q1 gives g_m1, Q_tail gives
        g_m_tail. Where two devices would come to one index (Q1 and M1), it is the whole name: g_m_Q1.
        """
        alike = [
            other
            for other in self.topology.parts
            if other.kind == part.kind or symbol in self.symbols.get(other.kind, ())
        ]
        if len(alike) == 1:
            return symbol
        same_index = [other for other in alike if other.name[1:] == part.name[1:]]
        return f"{symbol}_{part.name}" if len(same_index) > 1 else symbol + part.name[1:]

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
