"""The small-signal circuit of a topology: each part becomes the ideal elements that it stands for.

Every kind of part is a module of `derive.devices.models`, found by folder; `derive.devices.model` says
what a module must hold. A device's elements follow from its parameters, and those from the file or from
the operating point.
"""

from __future__ import annotations

from collections.abc import Mapping

from derive.devices.elements import (
    Capacitor,
    CurrentDrive,
    DriveElement,
    Element,
    SmallSignal,
    VoltageDrive,
)
from derive.devices.model import Model, Names
from derive.devices.parameters import DeviceParameters, DevicePoint
from derive.devices.registry import device, models, names_for
from derive.devices.thermal import thermal_voltage
from derive.errors import InputError
from derive.quantities.symbol import Symbol
from derive.topology.topology import Drive, Part, Role, Topology

NO_POINTS: Mapping[str, DevicePoint] = {}


def linearise(topology: Topology, points: Mapping[str, DevicePoint] = NO_POINTS) -> SmallSignal:
    """Give the linear circuit whose elements each say which part they came from, and by which law.

    Given: `points` holds the operating point of devices by their names, where it was worked out.
    Raises: InputError where a device's data disagree or do not suffice, or where its symbol is also
    the name of another item.
    """
    names = names_for(topology)
    elements: list[Element] = []
    symbols: dict[str, Symbol] = {}
    roles: list[tuple[str, Role]] = []
    devices: list[DeviceParameters] = []
    for part in topology.parts:
        found, made = _made(part, topology, points.get(part.name), names)
        elements.extend(made.elements)
        for symbol in made.symbols:
            _check_free(part, symbol, symbols, names)
            symbols[symbol.name] = symbol
        if found:
            devices.append(found)
        roles += _roles(part, made, found)
    return SmallSignal(
        topology,
        tuple(elements),
        tuple(_drive(drive) for drive in topology.drives),
        tuple(symbols.values()),
        tuple(roles),
        tuple(devices),
    )


def device_parameters(
    topology: Topology, points: Mapping[str, DevicePoint] = NO_POINTS
) -> tuple[DeviceParameters, ...]:
    """Give the small-signal parameters of every device, in the order of the file.

    Raises: InputError where a device's data disagree or do not suffice.
    """
    names = names_for(topology)
    made = (_made(part, topology, points.get(part.name), names) for part in topology.parts)
    return tuple(found for found, _ in made if found)


def _made(
    part: Part, topology: Topology, point: DevicePoint | None, names: Names
) -> tuple[DeviceParameters | None, Model]:
    model = device(part.kind)
    if model is None:
        return None, models()[part.kind].linearise(part, names)
    found = model.parameters(part, point, thermal_voltage(topology.temperature), names)
    return found, model.linearise(part, names, found)


def _check_free(part: Part, symbol: Symbol, symbols: dict[str, Symbol], names: Names) -> None:
    if symbol.name in symbols or (symbol.name in names.taken and symbol.name != part.name):
        raise InputError(
            f"part {part.name}: its symbol {symbol.name} is also the name of another item",
            where=str(part.place),
            cure=f"give the other {symbol.name} a different name",
        )


def _roles(part: Part, made: Model, found: DeviceParameters | None) -> list[tuple[str, Role]]:
    """Give the roles of a part's elements: its own, or those of a device's parameters."""
    if found is None:
        return [(element.name, part.role) for element in made.elements if part.role]
    parasitic = {line.symbol for line in found.lines if line.role == "parasitic"}
    return [
        (element.name, "parasitic")
        for element in made.elements
        if isinstance(element, Capacitor) and element.capacitance in parasitic
    ]


def _drive(drive: Drive) -> DriveElement:
    if drive.quantity == "voltage":
        return VoltageDrive(drive.name, drive.nodes)
    return CurrentDrive(drive.name, drive.nodes)
