"""Write the nodal equations of a circuit: Kirchhoff's current law, and the laws of tied branches.

At every node that no voltage source ties, the currents that leave add up to zero. Nodes that a
floating voltage source joins share one such equation. Inductors, controlled voltage sources and op
amps bring an equation each.
"""

from __future__ import annotations

from dataclasses import replace

from derive.algebra.ring import Ring
from derive.algebra.ring import ring as make_ring
from derive.devices.elements import (
    Capacitor,
    Coupling,
    CurrentGain,
    Element,
    Inductor,
    OnePoleGain,
    Resistor,
    SmallSignal,
    Transconductance,
    Transresistance,
    VirtualShort,
    VoltageGain,
)
from derive.nodal.branches import Branches
from derive.nodal.currents import node_equation
from derive.nodal.laws import law_of
from derive.nodal.matrix import matrix_form
from derive.nodal.ports import drive_nodes, port
from derive.nodal.system import NodalSystem, Unknown
from derive.nodal.voltages import Voltages, fresh, groups, tie_nodes
from derive.nodal.wanted import wanted_quantity
from derive.topology.topology import GROUND, Find


def write_equations(circuit: SmallSignal, find: Find) -> NodalSystem:
    """Give the equations for one wanted quantity; every row has a meaning in words, every term a part."""
    ring = ring_of(circuit)
    taken = {*ring.names, *(drive.name for drive in circuit.drives), find.name}
    at_work = port(circuit, find, taken)
    nodes = nodes_of(circuit)
    ties = tie_nodes(nodes, at_work.voltage_drives)
    free = [node for node, tie in ties.items() if tie.base == node and node != GROUND]
    voltages = Voltages(ring, ties, at_work.active, {node: fresh(taken, f"v_{node}") for node in free})
    branches = Branches.of(circuit, find, voltages, taken)
    unknowns = [Unknown(voltages.name_of[node], "voltage", node) for node in free]
    unknowns += [Unknown(name, "current", element) for element, name in branches.unknown.items()]
    leader = groups(nodes, branches.tied_pairs())
    clusters: dict[str, list[str]] = {}
    for node in nodes:
        if leader(node) != GROUND:
            clusters.setdefault(leader(node), []).append(node)
    equations = [
        node_equation(tuple(cluster), branches, at_work.current_drives) for cluster in clusters.values()
    ]
    equations += [law for element in circuit.elements if (law := law_of(element, branches))]
    wanted, extra = wanted_quantity(find, branches, taken)
    if extra is not None:
        unknown, equation = extra
        unknowns.append(unknown)
        equations.append(equation)
    known = tuple(
        (node, voltages.at(node).shown)
        for node, tie in ties.items()
        if tie.base == GROUND and node != GROUND
    )
    system = NodalSystem(
        circuit,
        find,
        ring,
        tuple(unknowns),
        tuple(equations),
        at_work.input,
        at_work.weights,
        wanted,
        known,
    )
    return replace(system, matrix=matrix_form(system))


def nodes_of(circuit: SmallSignal) -> tuple[str, ...]:
    """Give the circuit's nodes without ground, in the order in which drives and parts name them."""
    seen: dict[str, None] = dict.fromkeys(drive_nodes(circuit.drives))
    for element in circuit.elements:
        seen |= dict.fromkeys(element_nodes(element))
    return tuple(node for node in seen if node != GROUND)


def element_nodes(element: Element) -> tuple[str, ...]:
    """Give every node that an element touches or senses."""
    if isinstance(element, Resistor | Capacitor | Inductor):
        return element.between
    if isinstance(element, Transconductance):
        return (*element.flows, *element.senses)
    if isinstance(element, VoltageGain):
        return (*element.output, *element.senses)
    if isinstance(element, CurrentGain):
        return element.flows
    if isinstance(element, Transresistance):
        return element.output
    if isinstance(element, VirtualShort | OnePoleGain):
        return (*element.inputs, element.output)
    return ()


def ring_of(circuit: SmallSignal) -> Ring:
    """Make the ring of s and the elements' values; resistances and w_u stand in it as reciprocals."""
    names = ["s", *(symbol.name for symbol in circuit.symbols)]
    inverted = []
    for element in circuit.elements:
        if isinstance(element, Coupling):
            names.append(element.mutual)
        elif isinstance(element, Resistor):
            inverted.append(element.resistance)
        elif isinstance(element, OnePoleGain) and element.unity is not None:
            inverted.append(element.unity)
    return make_ring(names, inverted)
