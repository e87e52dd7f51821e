"""The nouns of a small-signal circuit: ideal linear elements, each knowing the part it came from.

`name` identifies the element and is the name by which its current may be sensed; the value symbols
stand in the further fields. Currents and signs are those of the topology file's contract.
"""

from __future__ import annotations

from dataclasses import dataclass

from derive.devices.parameters import DeviceParameters
from derive.quantities.symbol import Symbol
from derive.topology.topology import Role, Topology

Pair = tuple[str, str]


@dataclass(frozen=True, slots=True)
class Resistor:
    """Current (V_a - V_b)/R flows from a through the element to b."""

    name: str
    part: str
    between: Pair
    resistance: str


@dataclass(frozen=True, slots=True)
class Capacitor:
    """Current s·C·(V_a - V_b) flows from a through the element to b."""

    name: str
    part: str
    between: Pair
    capacitance: str


@dataclass(frozen=True, slots=True)
class Inductor:
    """V_a - V_b = s·L·I, with I counted from a through the element to b."""

    name: str
    part: str
    between: Pair
    inductance: str


@dataclass(frozen=True, slots=True)
class Coupling:
    """Adds s·M·I of the one coil to the voltage of the other; M² = k²·L_1·L_2, dots at first nodes."""

    name: str
    part: str
    coils: tuple[str, str]
    coefficient: str
    mutual: str


@dataclass(frozen=True, slots=True)
class Transconductance:
    """Current g·(V_p - V_m) leaves node a, goes through the element, enters node b (flows = a, b)."""

    name: str
    part: str
    flows: Pair
    senses: Pair
    transconductance: str


@dataclass(frozen=True, slots=True)
class VoltageGain:
    """V_output = A·V_senses."""

    name: str
    part: str
    output: Pair
    senses: Pair
    gain: str


@dataclass(frozen=True, slots=True)
class CurrentGain:
    """Current k·I(senses) leaves the first node of `flows` and enters the second."""

    name: str
    part: str
    flows: Pair
    senses: str
    gain: str


@dataclass(frozen=True, slots=True)
class Transresistance:
    """V_output = r·I(senses)."""

    name: str
    part: str
    output: Pair
    senses: str
    transresistance: str


@dataclass(frozen=True, slots=True)
class VirtualShort:
    """An ideal op amp: its inputs are at equal voltage; its output supplies what current that takes."""

    name: str
    part: str
    output: str
    inputs: Pair


@dataclass(frozen=True, slots=True)
class OnePoleGain:
    """An op amp with V_output = A(s)·(V_plus - V_minus) against ground.

    A(s) is A_0 without `unity`, w_u/s without `dc_gain`, else A_0/(1 + s·A_0/w_u).
    """

    name: str
    part: str
    output: str
    inputs: Pair
    dc_gain: str | None
    unity: str | None


@dataclass(frozen=True, slots=True)
class VoltageDrive:
    """An independent source: V_plus - V_minus equals the drive."""

    name: str
    nodes: Pair


@dataclass(frozen=True, slots=True)
class CurrentDrive:
    """An independent source: the drive flows from the first node through the source to the second."""

    name: str
    nodes: Pair


Element = (
    Resistor
    | Capacitor
    | Inductor
    | Coupling
    | Transconductance
    | VoltageGain
    | CurrentGain
    | Transresistance
    | VirtualShort
    | OnePoleGain
)
DriveElement = VoltageDrive | CurrentDrive


@dataclass(frozen=True, slots=True)
class SmallSignal:
    """The linear circuit: elements, drives, and the symbols that their values are written with.

    `roles` holds (element, role) of the elements that have one; `devices` the small-signal parameters
    of every device.
    """

    topology: Topology
    elements: tuple[Element, ...]
    drives: tuple[DriveElement, ...]
    symbols: tuple[Symbol, ...]
    roles: tuple[tuple[str, Role], ...] = ()
    devices: tuple[DeviceParameters, ...] = ()
