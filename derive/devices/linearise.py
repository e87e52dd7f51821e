"""The small-signal circuit of a topology: each part becomes the ideal elements that it stands for.

Every kind of part is a module of `derive.devices.models` with a constant KIND and a function
`linearise(part, names) -> Model`; modules are found by folder.
"""

from __future__ import annotations

from derive.devices.elements import (
    CurrentDrive,
    DriveElement,
    Element,
    SmallSignal,
    VoltageDrive,
)
from derive.devices.model import Names
from derive.devices.registry import models
from derive.errors import InputError
from derive.quantities.symbol import Symbol
from derive.topology.topology import Drive, Topology


def linearise(topology: Topology) -> SmallSignal:
    """Give the linear circuit whose elements each say which part they came from, and by which law.

    Raises: InputError where a device's symbol is also the name of another part.
    """
    names = Names(topology)
    elements: list[Element] = []
    symbols: dict[str, Symbol] = {}
    for part in topology.parts:
        made = models()[part.kind].linearise(part, names)
        elements.extend(made.elements)
        for symbol in made.symbols:
            if symbol.name in symbols or (symbol.name in names.taken and symbol.name != part.name):
                raise InputError(
                    f"part {part.name}: its symbol {symbol.name} is also the name of another item",
                    where=str(part.place),
                    cure=f"give the other {symbol.name} a different name",
                )
            symbols[symbol.name] = symbol
    return SmallSignal(
        topology,
        tuple(elements),
        tuple(_drive(drive) for drive in topology.drives),
        tuple(symbols.values()),
    )


def _drive(drive: Drive) -> DriveElement:
    if drive.quantity == "voltage":
        return VoltageDrive(drive.name, drive.nodes)
    return CurrentDrive(drive.name, drive.nodes)
