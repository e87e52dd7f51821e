"""The DC circuit of a topology: what is left at zero frequency, with devices by their DC models.

Capacitors are open, inductors short; voltage drives are short, current drives open; supplies have
their DC values. Op amps keep their gain at DC. Each device is what its model says of it at DC.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from fractions import Fraction

from derive.bias.at_dc import at_dc, ends_of, joins_of, sensed_nodes, used_names
from derive.bias.dc_device import DcDevice, dc_device
from derive.bias.matched import with_matched
from derive.bias.paths import Join, reached, way
from derive.devices.elements import (
    CurrentDrive,
    CurrentGain,
    DriveElement,
    Element,
    SmallSignal,
    Transresistance,
    VoltageDrive,
)
from derive.devices.model import Model, Names
from derive.devices.registry import biased_device, device, models, names_for
from derive.errors import InputError
from derive.quantities.dimension import VOLTAGE
from derive.quantities.symbol import Symbol
from derive.quantities.words import listed
from derive.topology.topology import GROUND, Part, Topology

_SENSING = (CurrentGain, Transresistance)


@dataclass(frozen=True, slots=True)
class DcCircuit:
    """`circuit` holds supplies and devices' voltages as drives; those in `active` are not at zero.

    `values` holds every symbol's value but for the currents that are to be found; `joins` says
    what lets a direct current through between which nodes.
    """

    topology: Topology
    names: Names
    circuit: SmallSignal
    devices: tuple[DcDevice, ...]
    active: tuple[str, ...]
    values: dict[str, Fraction]
    joins: tuple[Join, ...]

    @property
    def sought(self) -> tuple[str, ...]:
        """The symbols of the currents that are to be found."""
        return tuple(name for name in self.active if name not in self.values)


def dc_circuit(topology: Topology) -> DcCircuit:
    """Give the DC circuit.

    Raises: InputError for a shorted supply, for a value left open, and for a device whose DC values
    are missing.
    """
    names = names_for(topology)
    shorts = _shorts(topology)
    check_supplies(topology, shorts)
    devices: list[DcDevice] = []
    elements: list[Element] = []
    symbols = [
        Symbol(s.name, VOLTAGE, s.dc.exact, f"supply {s.name}", s.dc.text, None, False)
        for s in topology.supplies
    ]
    drives: list[DriveElement] = [VoltageDrive(s.name, (s.node, GROUND)) for s in topology.supplies]
    for part in topology.parts:
        biased = biased_device(part.kind)
        if biased is None:
            made = _linear(part, names)
            elements += at_dc(made.elements)
            symbols += made.symbols
            continue
        devices.append(dc_device(part, biased, names))
    devices = with_matched(devices, shorts, names)
    for found in devices:
        elements += found.dc.elements
        drives += found.dc.drives
        symbols += found.dc.symbols
    active = tuple(drive.name for drive in drives)
    elements, ties = _sensing_what_is_left(elements, drives, shorts)
    drives += _tied(drives, ties, devices)
    joins = (*_element_joins(elements, devices), *_drive_joins(drives, devices))
    check_paths(devices, joins)
    kept = _without_islands(topology, elements, joins, devices)
    settled = reached(GROUND, joins)
    drives = [drive for drive in drives if drive.nodes[0] in settled]
    check_names(names, devices)
    used = {*used_names(kept), *active}
    symbols = [symbol for symbol in symbols if symbol.name in used]
    sought = frozenset(d.name for f in devices for d in f.dc.drives if isinstance(d, CurrentDrive))
    _check_values(topology, symbols, sought)
    circuit = SmallSignal(topology, tuple(kept), tuple(drives), tuple(symbols))
    values = {symbol.name: symbol.value for symbol in symbols if symbol.value is not None}
    return DcCircuit(topology, names, circuit, tuple(devices), active, values, joins)


def check_supplies(topology: Topology, shorts: tuple[Join, ...]) -> None:
    """Refuse a supply that is shorted to ground or to another, by a wire, inductors or drives."""
    for place, supply in enumerate(topology.supplies):
        others = [(GROUND, "ground")]
        others += [(other.node, f"supply {other.name}") for other in topology.supplies[:place]]
        for node, what in others:
            if node not in reached(supply.node, shorts):
                continue
            by = listed(way(supply.node, node, shorts))
            how = f"through {by}" if by else f"at node {node}"
            raise InputError(
                f"supply {supply.name} is shorted to {what} {how}",
                where=str(supply.place),
                cure="an inductor or a drive is a short at DC: put a capacitor in series with it"
                if by
                else "give each supply a node of its own",
            )


def _shorts(topology: Topology) -> tuple[Join, ...]:
    """Give what is a short at DC: inductors, and voltage drives, which are at zero."""
    drives = [Join(d.name, d.nodes) for d in topology.drives if d.quantity == "voltage"]
    coils = [part for part in topology.parts if part.kind == "inductor"]
    between = [(part.name, part.nodes("between")) for part in coils]
    return (*drives, *(Join(name, (nodes[0], nodes[1])) for name, nodes in between))


def _linear(part: Part, names: Names) -> Model:
    """Give the elements of a part that has no operating point, as in the signal's circuit."""
    with_parameters = device(part.kind)
    if with_parameters is None:
        return models()[part.kind].linearise(part, names)
    parameters = with_parameters.parameters(part, None, Fraction(0), names)
    return with_parameters.linearise(part, names, parameters)


def _sensing_what_is_left(
    elements: list[Element], drives: list[DriveElement], shorts: tuple[Join, ...]
) -> tuple[list[Element], list[VoltageDrive]]:
    """Leave out what answers to the current of a part that is open; a voltage that does so is a short.

    The shorts are given as drives at zero, those first whose current is sensed.
    """
    ties = [VoltageDrive(short.item, short.ends) for short in shorts]
    outputs: list[VoltageDrive] = []
    while True:
        carrying = {item.name for item in (*elements, *drives, *ties, *outputs)}
        dead = [e for e in elements if isinstance(e, _SENSING) and e.senses not in carrying]
        if not dead:
            break
        outputs += [VoltageDrive(e.name, e.output) for e in dead if isinstance(e, Transresistance)]
        elements = [element for element in elements if element not in dead]
    sensed = {e.senses for e in elements if isinstance(e, _SENSING)}
    ties.sort(key=lambda tie: tie.name not in sensed)
    return elements, [*ties, *outputs]


def _tied(
    drives: list[DriveElement], ties: list[VoltageDrive], devices: list[DcDevice]
) -> list[VoltageDrive]:
    """Give the ties that close no loop of shorts.

    Raises: InputError where a supply or a device's fixed voltage closes a loop with others.
    """
    joins: list[Join] = []
    kept = []
    for tie in ties:
        if tie.nodes[1] not in reached(tie.nodes[0], joins):
            joins.append(Join(tie.name, tie.nodes))
            kept.append(tie)
    owner = {drive.name: found.part for found in devices for drive in found.dc.drives}
    for drive in drives:
        if not isinstance(drive, VoltageDrive):
            continue
        one, other = drive.nodes
        if one == other or other in reached(one, joins):
            fixed = listed(way(one, other, joins)) or "a wire"
            part = owner[drive.name]
            raise InputError(
                f"part {part.name}: the operating point does not exist: {drive.name} stands between "
                f"nodes {one} and {other}, whose voltage {fixed} fixes already",
                where=str(part.place),
                cure="put a resistor between them",
            )
        joins.append(Join(drive.name, drive.nodes))
    return kept


def check_names(names: Names, devices: list[DcDevice]) -> None:
    """Refuse a device's symbol that is also the name of a part, drive, supply or other symbol."""
    taken = {*names.taken, *(supply.name for supply in names.topology.supplies)}
    for found in devices:
        for symbol in found.dc.symbols:
            if symbol.name in taken:
                raise InputError(
                    f"part {found.part.name}: its symbol {symbol.name} is also the name of another item",
                    where=str(found.part.place),
                    cure=f"give the other {symbol.name} a different name",
                )
            taken.add(symbol.name)


def _element_joins(elements: list[Element], devices: list[DcDevice]) -> Iterator[Join]:
    """Give the joins of elements; what stands for a base current is a control."""
    controls = {found.base_current for found in devices}
    for element in elements:
        for join in joins_of([element]):
            yield Join(join.item, join.ends, element.name in controls)


def _drive_joins(drives: list[DriveElement], devices: list[DcDevice]) -> Iterator[Join]:
    """Give the joins of drives, those of a device under its name."""
    owner = {drive.name: found for found in devices for drive in found.dc.drives}
    for drive in drives:
        found = owner.get(drive.name)
        if found is None:
            yield Join(drive.name, drive.nodes)
        else:
            is_control = isinstance(drive, VoltageDrive) and found.control is not None
            yield Join(found.part.name, drive.nodes, is_control)


def check_paths(devices: list[DcDevice], joins: tuple[Join, ...]) -> None:
    """Refuse a base or gate that no direct current reaches but through its own or other junctions."""
    for found in devices:
        control = found.control
        open_joins = [j for j in joins if j.item != found.part.name and not j.is_control]
        if control is not None and GROUND not in reached(found.node(control), open_joins):
            raise no_path(found.part, control)


def _without_islands(
    topology: Topology,
    elements: list[Element],
    joins: tuple[Join, ...],
    devices: list[DcDevice],
) -> list[Element]:
    """Leave out what hangs between capacitors only: no current flows there, and nothing settles it."""
    settled = reached(GROUND, joins)
    for found in devices:
        key = next((k for k, nodes in found.part.wires if nodes[0] not in settled), None)
        if key is not None:
            raise no_path(found.part, key)
    kept = []
    for element in elements:
        ends = ends_of(element)
        if ends is not None and ends[0] not in settled:
            continue
        for node in sensed_nodes(element):
            if node not in settled:
                raise InputError(
                    f"part {element.part}: it answers to node {node}, which has no DC path to ground "
                    "or to a supply, so that there is no operating point",
                    where=str(next(p.place for p in topology.parts if p.name == element.part)),
                    cure="give the node a resistor to ground or to a supply",
                )
        kept.append(element)
    return kept


def no_path(part: Part, key: str) -> InputError:
    """Give the error for a terminal that no direct current can reach."""
    return InputError(
        f"part {part.name}: its {key} (node {part.nodes(key)[0]}) has no DC path to ground or to a "
        "supply, so that there is no operating point",
        where=str(part.place),
        cure=f"capacitors are open at DC: give the {key} a resistor to ground or to a supply",
    )


def _check_values(topology: Topology, symbols: list[Symbol], sought: frozenset[str]) -> None:
    """Refuse a value that was left open, where the operating point needs it."""
    places = {f"part {part.name}": part.place for part in topology.parts}
    places |= {f"supply {supply.name}": supply.place for supply in topology.supplies}
    for symbol in symbols:
        if symbol.value is None and symbol.name not in sought:
            raise InputError(
                f"{symbol.origin}: the value of {symbol.name} is left open, and the operating point "
                "needs it",
                where=str(places[symbol.origin]) if symbol.origin in places else "",
                cure="give the value, or give the devices' small-signal values",
            )
