"""The impedances of a stage at its two ports, derived and checked as any wanted quantity is."""

from __future__ import annotations

from dataclasses import replace

from derive.bands.restrict import find_in, restrict
from derive.bands.wiring import ends_of, sensed_currents
from derive.check.judge import check
from derive.check.verdict import Result
from derive.compare.at_mid_band import INFINITE, level_at, reduced, response_of
from derive.compare.comparison import PastSource, PortImpedance
from derive.devices.elements import DriveElement, Resistor, SmallSignal, VoltageDrive
from derive.errors import DeriveError
from derive.nodal.voltages import fresh
from derive.normalise.numbers import values_of
from derive.pipeline import solve
from derive.topology.topology import GROUND, BandName, Find

NO_DRIVE = "an impedance is asked for, which no drive belongs to"


def input_impedance(
    circuit: SmallSignal, find: Find, band: BandName, hertz: float
) -> tuple[PortImpedance, PastSource | None]:
    """Give what the drive of a quantity sees, and the same past a resistor that alone leads from the drive.

    Given: the circuit before any band's changes, and the frequency of the mid band in it.
    """
    if len(find.per) != 1:
        why = (
            "several drives work together, so that no single impedance is seen" if find.per else NO_DRIVE
        )
        return PortImpedance("", None, remark=why), None
    drive = next(drive for drive in circuit.drives if drive.name == find.per[0][0])
    plus, minus = drive.nodes
    between = f"between {plus} and {minus}"
    says = f"{between} with {drive.name} taken out and"
    says += " all other drives at zero; source resistor and load are in it"
    sensor = sensed_currents(circuit).get(drive.name)
    if sensor is not None:
        why = f"{sensor} senses the current of {drive.name}, which can therefore not be taken out"
        return PortImpedance(says, None, remark=why), None
    left = replace(circuit, drives=tuple(other for other in circuit.drives if other != drive))
    found = _impedance(left, find, drive.nodes, "Z_in", band, hertz, says)
    return replace(found, between=between), _past_source(left, drive, band, found)


def output_impedance(circuit: SmallSignal, find: Find, band: BandName, hertz: float) -> PortImpedance:
    """Give the impedance at the nodes where a quantity is taken, all drives at zero and the load in place."""
    if find.quantity == "impedance":
        return PortImpedance("", None, remark="the quantity compared is an impedance itself")
    nodes = find.nodes if find.quantity == "voltage" else _ends(circuit, find.part or "")
    if nodes is None:
        why = f"the current through {find.part} has no pair of nodes to look into"
        return PortImpedance("", None, remark=why)
    between = f"between {nodes[0]} and {nodes[1]}"
    says = f"{between}, all drives at zero; source resistor and load are in it"
    if find.part is not None:
        between, says = f"{between}, {find.part} in place", f"{says}, {find.part} itself as well"
    return replace(_impedance(circuit, find, nodes, "Z_out", band, hertz, says), between=between)


def _ends(circuit: SmallSignal, part: str) -> tuple[str, str] | None:
    """Give the two ends of a part that stands for one element."""
    found = [ends_of(element) for element in circuit.elements if element.part == part]
    return (found[0][0], found[0][1]) if len(found) == 1 and len(found[0]) == 2 else None


def _impedance(
    circuit: SmallSignal,
    main: Find,
    nodes: tuple[str, str],
    name: str,
    band: BandName,
    hertz: float,
    says: str,
) -> PortImpedance:
    find = Find(_unused(name, circuit), main.place, "impedance", nodes)
    asked = replace(circuit, topology=replace(circuit.topology, finds=(find,)))
    try:
        narrowed = restrict(asked, band)
        lonely = _unconnected(narrowed.unmerged, nodes, dict(narrowed.nodes))
        if lonely:
            why = f"no part lets a current flow at node {lonely}"
            return PortImpedance(says, INFINITE, remark=why)
        find_in(narrowed, find)
        solution = solve(narrowed, find)
    except DeriveError as error:
        return PortImpedance(says, None, remark=error.what)
    response = response_of(solution)
    level = None if response is None else level_at(response, hertz)
    remark = "" if level is not None or solution.numbers is None else "not finite at these values"
    return PortImpedance(says, level, Result(solution, check(solution, lcapy=False)), remark)


def _unused(name: str, circuit: SmallSignal) -> str:
    """Give a name that nothing in the circuit bears."""
    topology = circuit.topology
    taken = {symbol.name for symbol in circuit.symbols} | {merge.name for merge in topology.merges}
    taken |= {part.name for part in topology.parts} | {drive.name for drive in topology.drives}
    return fresh(taken, name)


def _unconnected(circuit: SmallSignal, nodes: tuple[str, str], names: dict[str, str]) -> str:
    """Name a node of the two at which no element or drive can carry a current; "" where there is none."""
    items = (*circuit.elements, *circuit.drives)
    live = {node for item in items for node in ends_of(item)} | {GROUND}
    return next((node for node in nodes if names.get(node, node) not in live), "")


def _past_source(
    circuit: SmallSignal, drive: DriveElement, band: BandName, found: PortImpedance
) -> PastSource | None:
    """Give the impedance past a resistor in series with a voltage drive that works against ground."""
    if found.level is None or found.level == INFINITE or not isinstance(drive, VoltageDrive):
        return None
    narrowed = restrict(circuit, band, merge=False)
    names = dict(narrowed.nodes)
    live = [name for name in (names.get(node, node) for node in drive.nodes) if name != GROUND]
    if len(live) != 1:
        return None
    items = (*narrowed.circuit.elements, *narrowed.circuit.drives)
    at_drive = [item for item in items if live[0] in ends_of(item)]
    values = values_of(narrowed.circuit)
    if len(at_drive) != 1 or values is None:
        return None
    only = at_drive[0]
    if not isinstance(only, Resistor) or GROUND in only.between:
        return None
    return PastSource(only.part, reduced(found.level, values[only.resistance]))
