"""Shorts and opens: the circuit in which some elements are wires, and others are not there."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, replace

from derive.bands.band_circuit import Change
from derive.bands.choose import State
from derive.bands.wiring import (
    Nodes,
    ends_of,
    nodes_in_order,
    place_of,
    sensed_currents,
    sensed_nodes,
    symbols_of,
    wanted_currents,
    with_nodes,
)
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
    VoltageDrive,
    VoltageGain,
)
from derive.errors import InputError
from derive.quantities.symbol import Symbol
from derive.topology.topology import GROUND

OTHER_BANDS = 'give it no role, or choose bands that keep it: bands = ["full"]'


@dataclass(frozen=True, slots=True)
class Rewired:
    """The circuit that is left; `nodes` holds (node, new name), `left_out` what carries nothing now."""

    circuit: SmallSignal
    nodes: tuple[tuple[str, str], ...]
    left_out: tuple[Change, ...]


def rewire(circuit: SmallSignal, changed: Mapping[str, State], grounded: Sequence[str] = ()) -> Rewired:
    """Give the circuit with elements shorted or opened, and with nodes tied to signal ground.

    A short makes its two nodes one: ground's name wins, else that of the node named first. What then
    lies with both ends on one node carries nothing and is left out, unless its current is sensed or
    wanted; symbols that only such elements used are dropped.
    Raises: InputError where that leaves a source shorted, a sensed part without its current, or a
    sensed node without a part.
    """
    _refuse_sensed(circuit, changed)
    nodes = Nodes(nodes_in_order(circuit))
    for node in grounded:
        nodes.join(GROUND, node)
    for element in circuit.elements:
        if changed.get(element.name) == "short":
            nodes.join(*ends_of(element))
    before = [element for element in circuit.elements if element.name not in changed]
    shorts = {
        frozenset(ends_of(element)): label_of(element)
        for element in reversed(circuit.elements)
        if changed.get(element.name) == "short"
    }
    needed = {*sensed_currents(circuit), *wanted_currents(circuit), *_coupled(before, changed)}
    kept: list[Element] = []
    left_out: list[Change] = []
    for element in before:
        moved = with_nodes(element, nodes.name_of)
        why = _nothing_left(moved, changed)
        if why and element.name not in needed:
            by = shorts.get(frozenset(ends_of(element)))
            said = f"left out: shorted by {by}" if by else f"left out: {why}"
            left_out.append(Change("left out", label_of(element), said))
            continue
        _refuse_shorted(moved, circuit)
        kept.append(moved)
    drives = tuple(with_nodes(drive, nodes.name_of) for drive in circuit.drives)
    for drive in drives:
        _refuse_shorted(drive, circuit)
    left = replace(
        circuit,
        elements=tuple(kept),
        drives=drives,
        symbols=_symbols_left(circuit, kept),
        roles=tuple((name, role) for name, role in circuit.roles if name not in changed),
    )
    _refuse_floating(circuit, left, changed)
    return Rewired(left, nodes.renamed, tuple(left_out))


def label_of(element: Element) -> str:
    """Give the symbol of an element that has one value, by which a reader knows it; else its part."""
    if isinstance(element, Resistor | Capacitor | Inductor | Transconductance):
        return symbols_of(element)[0]
    return element.part


def on_node(node: str) -> str:
    """Say which node."""
    return "signal ground" if node == GROUND else f"node {node}"


def _coupled(elements: Sequence[Element], changed: Mapping[str, State]) -> list[str]:
    """Give the coils that still act on another, even where both their own ends are on one node."""
    couplings = [element for element in elements if isinstance(element, Coupling)]
    return [
        coil for element in couplings if not set(element.coils) & changed.keys() for coil in element.coils
    ]


def _nothing_left(element: Element, changed: Mapping[str, State]) -> str:
    """Say why an element does nothing in the circuit that is left; "" where it does something."""
    if isinstance(element, Coupling):
        gone = [coil for coil in element.coils if coil in changed]
        return f"its coil {gone[0]} is {changed[gone[0]]}" if gone else ""
    if isinstance(element, Transconductance) and len(set(element.senses)) == 1:
        return f"both nodes that it senses are {on_node(element.senses[0])}"
    if isinstance(element, Resistor | Capacitor | Inductor | Transconductance | CurrentGain):
        ends = ends_of(element)
        return f"both its ends are on {on_node(ends[0])}" if ends[0] == ends[1] else ""
    return ""


def _symbols_left(circuit: SmallSignal, kept: Sequence[Element]) -> tuple[Symbol, ...]:
    before = {name for element in circuit.elements for name in symbols_of(element)}
    after = {name for element in kept for name in symbols_of(element)}
    return tuple(symbol for symbol in circuit.symbols if symbol.name not in before - after)


def _refuse_sensed(circuit: SmallSignal, changed: Mapping[str, State]) -> None:
    for name, sensing in sensed_currents(circuit).items():
        if name in changed:
            state = "a short" if changed[name] == "short" else "open"
            raise InputError(
                f"part {sensing} senses the current of {name}, which is {state} in this band",
                where=place_of(circuit.topology, name),
                cure=OTHER_BANDS,
            )


def _refuse_shorted(item: object, circuit: SmallSignal) -> None:
    """Refuse a source that would have to hold a voltage across one node."""
    topology = circuit.topology
    if isinstance(item, VoltageDrive) and item.nodes[0] == item.nodes[1]:
        raise InputError(
            f"drive {item.name} is shorted: both its ends are on {on_node(item.nodes[0])} in this band",
            where=place_of(topology, item.name),
            cure="drive a node that is no supply, through the source's resistance",
        )
    shorted = ""
    if isinstance(item, VoltageGain | Transresistance) and item.output[0] == item.output[1]:
        shorted = f"is shorted: both nodes of its output are {on_node(item.output[0])}"
    elif isinstance(item, VirtualShort | OnePoleGain) and item.output == GROUND:
        shorted = "is shorted: its output is on signal ground"
    elif isinstance(item, VirtualShort) and item.inputs[0] == item.inputs[1]:
        shorted = f"has both inputs on {on_node(item.inputs[0])}"
    if shorted and isinstance(item, VoltageGain | Transresistance | VirtualShort | OnePoleGain):
        raise InputError(
            f"part {item.part} {shorted} in this band",
            where=place_of(topology, item.part),
            cure="check the roles of the capacitors around it, and the supplies' nodes",
        )


def _refuse_floating(before: SmallSignal, left: SmallSignal, changed: Mapping[str, State]) -> None:
    """Refuse a node that is sensed while everything that fixed its voltage is open."""
    held = {node for item in (*left.elements, *left.drives) for node in ends_of(item)} | {GROUND}
    for element in left.elements:
        for node in sensed_nodes(element):
            hung = [e for e in before.elements if e.name in changed and node in ends_of(e)]
            if node not in held and hung:
                raise InputError(
                    f"node {node}, which part {element.part} senses, hangs in the air in this band: "
                    f"{label_of(hung[0])} is open",
                    where=place_of(left.topology, element.part),
                    cure="give the node a path for DC, or the capacitor no role",
                )
