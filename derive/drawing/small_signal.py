"""The scene of a small-signal circuit: its elements with their symbols, and what each source follows."""

from __future__ import annotations

from dataclasses import replace

from derive.devices.elements import (
    Capacitor,
    Coupling,
    CurrentDrive,
    CurrentGain,
    DriveElement,
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
from derive.drawing.letters import Run, Words, name_words
from derive.drawing.paths import shortest_path
from derive.drawing.scene import Item, Scene, Sense
from derive.drawing.schematic import ends_of, opamp_item, starts_of
from derive.topology.topology import GROUND


def scene_of_circuit(
    circuit: SmallSignal, renamed: dict[str, str], upright: tuple[tuple[str, str], ...]
) -> Scene:
    """Give the scene of a small-signal circuit.

    Given: `renamed` holds the nodes that became others in this circuit; `upright` what stands upright in
    the schematic, with the node at its upper end.
    """
    hints = circuit.topology.drawing
    couplings = [e for e in circuit.elements if isinstance(e, Coupling)]
    dotted = {coil for coupling in couplings for coil in coupling.coils}
    items = [_drive(drive) for drive in circuit.drives]
    items += [
        _item(element, element.name in dotted)
        for element in circuit.elements
        if not isinstance(element, Coupling)
    ]

    def now(node: str) -> str:
        return renamed.get(node, node)

    scene = Scene(
        tuple(items),
        tuple(sense for element in circuit.elements for sense in _senses(element)),
        starts=starts_of(tuple(drive.nodes for drive in circuit.drives)),
        ends=tuple(dict.fromkeys(now(node) for node in ends_of(circuit.topology) if now(node) != GROUND)),
    )
    told = tuple((item.name, item.node(0)) for item in items if item.name in hints.upright)
    standing = _standing(circuit, shortest_path(scene))
    return replace(
        scene,
        upright=(*told, *standing, *((part, now(node)) for part, node in upright)),
        level=hints.level,
        order=tuple(dict.fromkeys(map(now, hints.order))),
        notes=tuple(_note(coupling) for coupling in couplings),
        rectangles=hints.resistors == "rectangle",
    )


def _standing(circuit: SmallSignal, path: tuple[str, ...]) -> tuple[tuple[str, str], ...]:
    """Give what stands upright about a source whose two ends are signals: it, and what is beside it.

    A transistor's source stands on its emitter, as the transistor does, and so does all between base and
    emitter. Where the signal comes in at the emitter, what is at the base hangs from it instead.
    """
    found: dict[str, str] = {}
    for source in circuit.elements:
        if not isinstance(source, Transconductance) or GROUND in (*source.flows, *source.senses):
            continue
        if source.senses[1] != source.flows[1]:
            continue
        base, emitter = source.senses
        common_base = emitter in path and base not in path
        for element in circuit.elements:
            ends = set(_ends(element) or ())
            if ends == {base, emitter}:
                found.setdefault(element.name, emitter if common_base else base)
            elif ends == set(source.flows) and not common_base:
                found.setdefault(element.name, source.flows[0])
    return tuple(found.items())


def _ends(element: Element) -> tuple[str, str] | None:
    match element:
        case Resistor() | Capacitor() | Inductor():
            return element.between
        case Transconductance() | CurrentGain():
            return element.flows
        case VoltageGain() | Transresistance():
            return element.output
        case _:
            return None


def _drive(drive: DriveElement) -> Item:
    if isinstance(drive, CurrentDrive):
        pins = (("from", drive.nodes[0]), ("to", drive.nodes[1]))
        return Item(drive.name, "current drive", pins, name_words(drive.name))
    pins = (("plus", drive.nodes[0]), ("minus", drive.nodes[1]))
    return Item(drive.name, "voltage drive", pins, name_words(drive.name))


def _item(element: Element, dotted: bool) -> Item:
    match element:
        case Resistor(name, _, between, symbol):
            return Item(name, "resistor", _pair(between), name_words(symbol))
        case Capacitor(name, _, between, symbol):
            return Item(name, "capacitor", _pair(between), name_words(symbol))
        case Inductor(name, _, between, symbol):
            return Item(name, "inductor", _pair(between), name_words(symbol), (), dotted)
        case Transconductance(name, _, flows, senses, symbol):
            return Item(name, "controlled current", _pair(flows), times(symbol, voltage(senses)))
        case CurrentGain(name, _, flows, senses, symbol):
            return Item(name, "controlled current", _pair(flows), times(symbol, current(senses)))
        case VoltageGain(name, _, output, senses, symbol):
            return Item(name, "controlled voltage", _pair(output), times(symbol, voltage(senses)))
        case Transresistance(name, _, output, senses, symbol):
            return Item(name, "controlled voltage", _pair(output), times(symbol, current(senses)))
        case VirtualShort(name, part, output, inputs) | OnePoleGain(name, part, output, inputs):
            return opamp_item(name, inputs, output, name_words(part))
        case Coupling():
            raise TypeError("a coupling has no symbol of its own")


def times(symbol: str, rest: Words) -> Words:
    """Write a symbol times something."""
    return (*name_words(symbol), Run("·"), *rest)


def voltage(senses: tuple[str, str]) -> Words:
    """Write the voltage between two nodes, as the equations do."""
    plus, minus = senses
    if minus == GROUND:
        return _node_voltage(plus)
    if plus == GROUND:
        return (Run("(−"), *_node_voltage(minus), Run(")"))
    return (Run("("), *_node_voltage(plus), Run(" − "), *_node_voltage(minus), Run(")"))


def current(item: str) -> Words:
    """Write the current of an item."""
    return (
        Run("I", slanted=True),
        *(Run(run.text, run.slanted, lowered=True) for run in name_words(item)),
    )


def _node_voltage(node: str) -> Words:
    return name_words(f"v_{node}")


def _pair(nodes: tuple[str, str]) -> tuple[tuple[str, str], ...]:
    return (("1", nodes[0]), ("2", nodes[1]))


def _senses(element: Element) -> tuple[Sense, ...]:
    match element:
        case Transconductance() | VoltageGain():
            return (Sense(element.name, element.senses),)
        case CurrentGain() | Transresistance():
            return (Sense(element.name, through=element.senses),)
        case _:
            return ()


def _note(coupling: Coupling) -> Words:
    first, second = coupling.coils
    joined = (*name_words(first), Run(" and "), *name_words(second))
    says = (Run(" between "), *joined, Run("; dots at their first ends"))
    return (Run("Mutual inductance "), *name_words(coupling.mutual), *says)
