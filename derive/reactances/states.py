"""What has a state of its own, and the circuit that one of them sees with the others at rest or turned.

At rest is the state at zero frequency: a capacitor is open, an inductor a short, an op amp with one pole
has its gain at DC. Turned is the state at infinite frequency: a capacitor is a short, an inductor open,
and such an op amp's output stands still at zero.
"""

from __future__ import annotations

from collections.abc import Sequence, Set
from dataclasses import dataclass, replace
from typing import Literal

from derive.bands.choose import State as Wiring
from derive.bands.rewire import rewire
from derive.bands.wiring import Nodes, ends_of, nodes_in_order, sensed_currents, sensed_nodes
from derive.devices.elements import (
    Capacitor,
    Coupling,
    Element,
    Inductor,
    OnePoleGain,
    SmallSignal,
    VirtualShort,
    VoltageDrive,
)
from derive.nodal.voltages import fresh, groups
from derive.nodal.write import element_nodes, nodes_of
from derive.topology.topology import GROUND, Find, Place

Pair = tuple[str, str]


@dataclass(frozen=True, slots=True)
class State:
    """One state: the symbol stands in the equations as s times it, an op amp's as s over it."""

    element: str
    symbol: str
    kind: Literal["capacitor", "inductor", "op amp"]


@dataclass(frozen=True, slots=True)
class Seen:
    """The circuit that a part sees and the nodes at which it looks in; None of it where no path leads on."""

    circuit: SmallSignal
    port: Pair | None


def states_of(circuit: SmallSignal) -> tuple[State, ...]:
    """Give every state of the circuit, in the order of its elements."""
    found: list[State] = []
    for element in circuit.elements:
        if isinstance(element, Capacitor):
            found.append(State(element.name, element.capacitance, "capacitor"))
        elif isinstance(element, Inductor):
            found.append(State(element.name, element.inductance, "inductor"))
        elif isinstance(element, OnePoleGain) and element.unity is not None:
            found.append(State(element.name, element.unity, "op amp"))
    return tuple(found)


def seen_from(circuit: SmallSignal, subject: Capacitor | Inductor, turned: Set[str]) -> Seen:
    """Give the circuit without the subject, its other states at rest but for those named in `turned`.

    Drives are at zero: those of voltage stay and tie their nodes, those of current are left out. A part
    whose current is sensed leaves a drive of zero volts in its place, through which the same current flows.
    Raises: InputError where that leaves a source shorted or a sensed node in the air.
    """
    sensed = sensed_currents(circuit)
    taken = set(nodes_in_order(circuit))
    changed: dict[str, Wiring] = {}
    grounded: list[str] = []
    kept: list[Element] = []
    meters: list[VoltageDrive] = []
    port = subject.between
    for element in circuit.elements:
        if isinstance(element, Coupling):
            continue
        if isinstance(element, OnePoleGain):
            if element.name in turned and element.unity is not None:
                grounded.append(element.output)
            else:
                kept.append(at_dc(element))
            continue
        if not isinstance(element, Capacitor | Inductor):
            kept.append(element)
            continue
        short = isinstance(element, Capacitor) == (element.name in turned)
        if element.name not in sensed:
            changed[element.name] = "short" if short and element.name != subject.name else "open"
            kept.append(element)
            continue
        plus, minus = element.between
        if element.name == subject.name or not short:
            minus = fresh(taken, f"{plus}_{element.name}")
        if element.name == subject.name:
            port = (minus, element.between[1])
        meters.append(VoltageDrive(element.name, (plus, minus)))
    bare = replace(
        circuit,
        elements=tuple(kept),
        drives=_not_redundant(circuit, kept, changed, grounded, meters),
        topology=replace(circuit.topology, finds=()),
    )
    rewired = rewire(bare, changed, grounded)
    names = dict(rewired.nodes)
    return _without_islands(rewired.circuit, (names.get(port[0], port[0]), names.get(port[1], port[1])))


def at_dc(element: OnePoleGain) -> OnePoleGain | VirtualShort:
    """Give an op amp at zero frequency: an integrator's gain is infinite there."""
    if element.dc_gain is None:
        return VirtualShort(element.name, element.part, element.output, element.inputs)
    return replace(element, unity=None)


def port_find(circuit: SmallSignal, port: Pair, name: str) -> Find:
    """Give the wish for the resistance between two nodes."""
    # No line of the file asks for it, so no message can name one.
    return Find(name, Place(circuit.topology.file, 1), "impedance", nodes=port)


def _not_redundant(
    circuit: SmallSignal,
    elements: Sequence[Element],
    changed: dict[str, Wiring],
    grounded: Sequence[str],
    meters: Sequence[VoltageDrive],
) -> tuple[VoltageDrive, ...]:
    """Give the drives that still tie nodes which nothing else ties; at zero, others say nothing new."""
    sensed = sensed_currents(circuit)
    nodes = Nodes(
        dict.fromkeys([*nodes_in_order(circuit), *(node for drive in meters for node in drive.nodes)])
    )
    for node in grounded:
        nodes.join(GROUND, node)
    for element in elements:
        if changed.get(element.name) == "short":
            nodes.join(*ends_of(element))
    own = [drive for drive in circuit.drives if isinstance(drive, VoltageDrive)]
    kept: list[VoltageDrive] = []
    for drive in sorted([*own, *meters], key=lambda drive: drive.name not in sensed):
        if drive.name in sensed or nodes.name_of(drive.nodes[0]) != nodes.name_of(drive.nodes[1]):
            nodes.join(*drive.nodes)
            kept.append(drive)
    return tuple(drive for drive in (*own, *meters) if drive in kept)


def _without_islands(circuit: SmallSignal, port: Pair) -> Seen:
    """Leave out what neither ground nor the port is joined to, unless something outside senses it."""
    items = (*circuit.elements, *circuit.drives)
    known = {*nodes_of(circuit), GROUND}
    if not {*port} <= known:
        return Seen(circuit, port if port[0] == port[1] else None)
    ends = [ends_of(item) for item in items]
    group = groups(nodes_of(circuit), [(pair[0], pair[1]) for pair in ends if len(pair) == 2])
    if group(port[0]) != group(port[1]):
        return Seen(circuit, None)
    near = {group(GROUND), group(port[0])}
    # A coupling was left out before, so that everything here has ends.
    names = {item.name for item in items if group(ends_of(item)[0]) not in near}
    rest = [item for item in circuit.elements if item.name not in names]
    touched = {node for item in rest for node in (*element_nodes(item), *sensed_nodes(item))}
    heard = {
        getattr(item, "senses", None) for item in rest if isinstance(getattr(item, "senses", None), str)
    }
    if any(group(node) not in near for node in touched) or heard & names:
        return Seen(circuit, port)
    drives = tuple(drive for drive in circuit.drives if group(drive.nodes[0]) in near)
    return Seen(replace(circuit, elements=tuple(rest), drives=drives), port)
