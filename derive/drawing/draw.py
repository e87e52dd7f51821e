"""Draws a circuit: the schematic of a topology, or the small-signal circuit of a band."""

from __future__ import annotations

from derive.bands.band_circuit import BandCircuit
from derive.devices.elements import SmallSignal
from derive.drawing.drawing import Box, Drawing, Label, Mark, NotDrawn, Placed, Point, Ring, Stroke, Wire
from derive.drawing.faults import faults_of
from derive.drawing.grid import grid_of
from derive.drawing.labels import note_labels
from derive.drawing.layout import Layout, lay_out, mirrored
from derive.drawing.naming import Room, mark_senses, name_nodes, wire_box
from derive.drawing.netlist import connected, netlist_of, netlist_of_scene
from derive.drawing.place import Placer
from derive.drawing.route import lead_wires
from derive.drawing.scene import Scene
from derive.drawing.schematic import NoSymbolError, scene_of_topology
from derive.drawing.small_signal import scene_of_circuit
from derive.drawing.stance import find_stance
from derive.topology.topology import Topology

MARGIN = 6.0
MOST_ITEMS = 26
WIDEST = 1060.0  # at the page's width letters would then be less than 6 points high
_TRACKS = (1, 2, 3, 5)


def draw_schematic(topology: Topology) -> Drawing | NotDrawn:
    """Draw the schematic of a topology."""
    try:
        return draw_scene(scene_of_topology(topology))
    except NoSymbolError as problem:
        return NotDrawn(f"There is no symbol for a part of the kind {problem}.")


def draw_band(band: BandCircuit) -> Drawing | NotDrawn:
    """Draw the small-signal circuit of a band."""
    return draw_circuit(band.circuit, dict(band.nodes))


def draw_circuit(circuit: SmallSignal, renamed: dict[str, str] | None = None) -> Drawing | NotDrawn:
    """Draw a small-signal circuit.

    Given: `renamed` holds the nodes of the schematic that became others in this circuit.
    """
    try:
        upright = scene_of_topology(circuit.topology).upright
    except NoSymbolError:
        upright = ()
    return draw_scene(scene_of_circuit(circuit, renamed or {}, upright))


def draw_scene(scene: Scene) -> Drawing | NotDrawn:
    """Draw a scene, with more room between columns as long as wires or words find no place.

    A drawing that does not read back as the circuit that it shows is not given away.
    """
    if len(scene.items) > MOST_ITEMS:
        count = len(scene.items)
        return NotDrawn(f"With {count} parts and sources the circuit is too large to be drawn readably.")
    stance = find_stance(scene)
    spots = mirrored(scene, Placer(scene, stance).run())
    for tracks in _TRACKS:
        made = _attempt(scene, lay_out(scene, spots, stance.rows, tracks))
        if made is None or faults_of(made) or netlist_of(made) != netlist_of_scene(scene):
            continue
        if made.width > WIDEST:
            return NotDrawn("The circuit is too wide to be drawn readably on a page.")
        return made
    return NotDrawn("The circuit is too densely connected to be drawn readably.")


def _attempt(scene: Scene, layout: Layout) -> Drawing | None:
    led = lead_wires(layout, grid_of(layout))
    if led is None:
        return None
    wires, dots = led
    nets = _by_net(layout, wires, dots)
    room = Room(layout, wires, dots)
    names = name_nodes(layout, nets, room)
    marks = mark_senses(scene, layout, nets, room) if names is not None else None
    if marks is None or names is None:
        return None
    return _framed(layout.symbols, wires, dots, (*layout.labels, *names), marks, scene)


def _by_net(
    layout: Layout, wires: tuple[Wire, ...], dots: tuple[Point, ...]
) -> dict[str, tuple[Wire, ...]]:
    """Give the wires of each net."""
    groups = connected(layout.symbols, wires, dots)
    found: dict[str, tuple[Wire, ...]] = {}
    for _, _, net, at, _ in layout.pins:
        found[net] = tuple(wire for wire in wires if groups[wire.start] == groups[at])
    return found


def _framed(
    symbols: tuple[Placed, ...],
    wires: tuple[Wire, ...],
    dots: tuple[Point, ...],
    labels: tuple[Label, ...],
    marks: tuple[Mark, ...],
    scene: Scene,
) -> Drawing:
    """Shift everything so that it begins at the margin, and add the notes beneath."""
    boxes = [s.box for s in symbols] + [w for w in map(wire_box, wires)] + [label.box for label in labels]
    boxes += [mark.box for mark in marks]
    left, top = min(b.left for b in boxes), min(b.top for b in boxes)
    notes = note_labels(scene.notes, left, max(b.bottom for b in boxes))
    boxes += [note.box for note in notes]
    right, bottom = max(b.right for b in boxes), max(b.bottom for b in boxes)
    dx, dy = MARGIN - left, MARGIN - top
    return Drawing(
        tuple(_symbol(s, dx, dy) for s in symbols),
        tuple(Wire(_moved(w.start, dx, dy), _moved(w.end, dx, dy)) for w in wires),
        tuple(_moved(dot, dx, dy) for dot in dots),
        tuple(_label(label, dx, dy) for label in (*labels, *notes)),
        tuple(_mark(mark, dx, dy) for mark in marks),
        tuple((item.name, item.node(0)) for item in scene.items if item.look == "supply"),
        round(right - left + 2 * MARGIN, 2),
        round(bottom - top + 2 * MARGIN, 2),
    )


def _moved(point: Point, dx: float, dy: float) -> Point:
    return round(point[0] + dx, 2), round(point[1] + dy, 2)


def _box(box: Box, dx: float, dy: float) -> Box:
    return Box(*_moved((box.left, box.top), dx, dy), *_moved((box.right, box.bottom), dx, dy))


def _symbol(symbol: Placed, dx: float, dy: float) -> Placed:
    shapes = tuple(
        Ring(_moved(s.centre, dx, dy), s.radius, s.filled)
        if isinstance(s, Ring)
        else Stroke(tuple(_moved(p, dx, dy) for p in s.points), s.closed, s.filled, s.bend)
        for s in symbol.shapes
    )
    pins = tuple((pin, _moved(at, dx, dy)) for pin, at in symbol.pins)
    return Placed(symbol.name, symbol.look, pins, _box(symbol.box, dx, dy), shapes)


def _label(label: Label, dx: float, dy: float) -> Label:
    anchor = _moved(label.anchor, dx, dy) if label.anchor else None
    at, box = _moved(label.at, dx, dy), _box(label.box, dx, dy)
    return Label(label.words, at, label.side, box, label.kind, label.of, anchor)


def _mark(mark: Mark, dx: float, dy: float) -> Mark:
    at, anchor, box = _moved(mark.at, dx, dy), _moved(mark.anchor, dx, dy), _box(mark.box, dx, dy)
    return Mark(mark.source, mark.sign, at, anchor, box, mark.colour, mark.part, mark.towards)
