"""Which capacitors bridge two nodes, and which of the two nodes is the nearer one.

A capacitor bridges where neither of its nodes is ground or tied to it by a drive, and nobody senses or
wants its current. The near node is the one with fewer elements between it and the drive; a controlled
source counts as one element from what it senses to its output, and the capacitor itself does not count.
On a draw it is the node that controls a source at the other one, else the capacitor's first.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

from derive.bands.wiring import ends_of, sensed_currents, sensed_nodes
from derive.devices.elements import (
    Capacitor,
    Coupling,
    CurrentGain,
    Element,
    Inductor,
    Resistor,
    SmallSignal,
    Transresistance,
    VoltageDrive,
)
from derive.nodal.system import NodalSystem
from derive.nodal.voltages import tie_nodes
from derive.nodal.write import nodes_of
from derive.topology.topology import GROUND


@dataclass(frozen=True, slots=True)
class Bridge:
    """A capacitor between two nodes whose voltages are both unknown."""

    capacitor: Capacitor
    near: str
    far: str


def bridges(system: NodalSystem) -> tuple[Bridge, ...]:
    """Give every bridging capacitor, in the circuit's order; those across an active device come first."""
    circuit = system.small_signal
    drives = [drive for drive in circuit.drives if isinstance(drive, VoltageDrive)]
    ties = tie_nodes(nodes_of(circuit), drives)
    free = {node for node, tie in ties.items() if tie.base == node and node != GROUND}
    grounded = {node for node, tie in ties.items() if tie.base == GROUND} | {GROUND}
    kept = {*sensed_currents(circuit), system.find.part}
    found = [
        _bridge(system, element, grounded)
        for element in circuit.elements
        if isinstance(element, Capacitor)
        and {*element.between} <= free
        and element.between[0] != element.between[1]
        and not {element.name, element.part} & kept
    ]
    return tuple(sorted(found, key=lambda bridge: not _controls(circuit, bridge.near, bridge.far)))


def _bridge(system: NodalSystem, capacitor: Capacitor, grounded: set[str]) -> Bridge:
    circuit = system.small_signal
    distance = _distances(system, capacitor, grounded)
    first, second = capacitor.between
    far_off = len(circuit.elements) + 1
    one, other = distance.get(first, far_off), distance.get(second, far_off)
    turned = other < one
    if one == other:
        turned = _controls(circuit, second, first) and not _controls(circuit, first, second)
    return Bridge(capacitor, second, first) if turned else Bridge(capacitor, first, second)


def _controls(circuit: SmallSignal, one: str, other: str) -> bool:
    """Whether a source with an end at the other node senses the first one's voltage."""
    return any(one in sensed_nodes(element) and other in ends_of(element) for element in circuit.elements)


def _distances(system: NodalSystem, without: Capacitor, grounded: set[str]) -> Mapping[str, int]:
    """Count the elements from the drive to every node that a signal can reach but through ground."""
    circuit, find = system.small_signal, system.find
    at_work = {name for name, _ in system.weights}
    driven = [node for drive in circuit.drives if drive.name in at_work for node in drive.nodes]
    start = driven if find.quantity != "impedance" else list(find.nodes or ())
    distance = {node: 0 for node in start if node != GROUND}
    waiting = list(distance)
    ways = [
        way for element in circuit.elements if element is not without for way in _ways(element, circuit)
    ]
    while waiting:
        node = waiting.pop(0)
        if node in grounded and distance[node]:
            continue
        for sources, targets in ways:
            for target in targets if node in sources else ():
                if target not in distance and target != GROUND:
                    distance[target] = distance[node] + 1
                    waiting.append(target)
    return distance


def _ways(element: Element, circuit: SmallSignal) -> list[tuple[tuple[str, ...], tuple[str, ...]]]:
    """Give from which nodes to which others an element hands a signal on."""
    ends = {other.name: ends_of(other) for other in circuit.elements}
    if isinstance(element, Resistor | Capacitor | Inductor):
        return [(ends_of(element), ends_of(element))]
    if isinstance(element, Coupling):
        first, second = (ends[coil] for coil in element.coils)
        return [(first, second), (second, first)]
    if isinstance(element, CurrentGain | Transresistance):
        return [(ends.get(element.senses, ()), ends_of(element))]
    return [(sensed_nodes(element), ends_of(element))]
