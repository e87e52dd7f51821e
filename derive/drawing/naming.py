"""Finds places for the names of nodes and for the signs of controlled sources, clear of all else."""

from __future__ import annotations

from collections.abc import Iterator

from derive.drawing.drawing import Box, Label, Mark, Point, Side, Wire
from derive.drawing.labels import node_label
from derive.drawing.layout import Layout, Pin
from derive.drawing.scene import Item, Scene, Sense
from derive.topology.topology import GROUND

_WIRE, _DOT = 1.2, 3.2
_STEP = 6.0  # between two places that are tried for a name
_SIGN = 4.0  # half of the room of a sign


class Room:
    """What is taken up already."""

    def __init__(self, layout: Layout, wires: tuple[Wire, ...], dots: tuple[Point, ...]) -> None:
        self.boxes = [symbol.box for symbol in layout.symbols]
        self.boxes += [label.box for label in layout.labels]
        self.boxes += [wire_box(wire) for wire in wires]
        self.boxes += [Box(x - _DOT, y - _DOT, x + _DOT, y + _DOT) for x, y in dots]

    def is_free(self, box: Box) -> bool:
        """Say whether a box meets nothing."""
        return not any(box.meets(other) for other in self.boxes)


def wire_box(wire: Wire) -> Box:
    """Give the box of a wire with its thickness."""
    (a, b), (c, d) = wire.start, wire.end
    return Box(min(a, c), min(b, d), max(a, c), max(b, d)).grown(_WIRE)


def name_nodes(layout: Layout, nets: dict[str, tuple[Wire, ...]], room: Room) -> tuple[Label, ...] | None:
    """Give a label for every node but ground and supplies; None where one finds no place."""
    made: list[Label] = []
    railed = {rail[0] for rail in layout.rails}
    nodes = dict.fromkeys(net for _, _, net, _, _ in layout.pins if not net.startswith(f"{GROUND} "))
    for node in nodes:
        if node in railed:
            continue
        pins = [at for _, _, net, at, _ in layout.pins if net == node]
        for at, side, anchor in _candidates(nets.get(node, ()), pins):
            label = node_label(node, at, side, anchor)
            if room.is_free(label.box):
                made.append(label)
                room.boxes.append(label.box)
                break
        else:
            return None
    return tuple(made)


def _candidates(wires: tuple[Wire, ...], pins: list[Point]) -> Iterator[tuple[Point, Side, Point]]:
    """Give places for a node's name, the best first: over its longest level wire, then beside the others."""
    level = [w for w in wires if w.start[1] == w.end[1]]
    for wire in sorted(level, key=lambda w: (w.start[0] - w.end[0], w.start)):
        (left, y), (right, _) = wire.start, wire.end
        shares = _shares(right - left)
        for below in (-5, 12):
            for share in shares:
                x = left + (right - left) * share
                yield (x, y + below), "middle", (x, y)
            yield (left + 3, y + below), "start", (left + 3, y)
            yield (right - 3, y + below), "end", (right - 3, y)
    for wire in sorted(
        (w for w in wires if w not in level), key=lambda w: (w.start[1] - w.end[1], w.start)
    ):
        (x, top), (_, bottom) = wire.start, wire.end
        for share in _shares(bottom - top):
            y = top + (bottom - top) * share
            yield (x + 5, y + 4), "start", (x, y)
            yield (x - 5, y + 4), "end", (x, y)
    for aside in (5, 8, 11, 15):
        for x, y in pins:
            for dy in (3.5, -5, 12, -9, 16):
                yield (x + aside, y + dy), "start", (x, y)
                yield (x - aside, y + dy), "end", (x, y)
            yield (x, y - aside - 1), "middle", (x, y)
            yield (x, y + aside + 8), "middle", (x, y)


def _shares(length: float) -> list[float]:
    """Give places along a wire from its middle outwards, one for every few letters."""
    count = max(1, int(length / _STEP))
    places = [k / count for k in range(count + 1)]
    return sorted(places, key=lambda share: (abs(share - 0.5), share))


def mark_senses(
    scene: Scene, layout: Layout, nets: dict[str, tuple[Wire, ...]], room: Room
) -> tuple[Mark, ...] | None:
    """Give the signs that say what each controlled source follows; None where one finds no place."""
    made: list[Mark] = []
    for colour, sense in enumerate(scene.senses):
        if sense.through is not None:
            found = _arrow(sense, colour, layout, room)
            if found is None:
                return None
            made.append(found)
            continue
        pair = _beside(scene, layout, sense, colour, room)
        for sign, node in () if pair else zip("+-", sense.between or (), strict=False):
            mark = _sign(sense.source, sign, colour, _points(layout, nets, node), room)
            if mark is None:
                return None
            pair.append(mark)
        made += pair
    return tuple(made)


def _beside(scene: Scene, layout: Layout, sense: Sense, colour: int, room: Room) -> list[Mark]:
    """Give both signs at one item that lies between the two nodes; nothing where there is none with room."""
    plus, minus = sense.between or ("", "")
    family = sense.source.partition(".")[0]
    items = [i for i in scene.items if len(i.pins) == 2 and set(i.nodes) == {plus, minus}]

    def rank(item: Item) -> tuple[bool, bool]:
        return item.look.startswith("controlled"), item.name.partition(".")[0] != family

    for item in sorted(items, key=rank):
        before = len(room.boxes)
        marks: list[Mark] = []
        for pin in layout.pins:
            if pin.item == item.name:
                sign = "+" if dict(item.pins)[pin.name] == plus else "-"
                found = _along(sense.source, sign, colour, pin, layout, room)
                marks += [found] if found else []
        if len(marks) == 2:
            return sorted(marks, key=lambda mark: mark.sign)
        del room.boxes[before:]
    return []


def _along(source: str, sign: str, colour: int, pin: Pin, layout: Layout, room: Room) -> Mark | None:
    """Put a sign beside an end of a symbol, on the side of its body, so that it is read with it."""
    box = next(symbol.box for symbol in layout.symbols if symbol.name == pin.item)
    half = min(box.right - box.left, box.bottom - box.top) / 2
    (x, y), (a, b) = pin.at, pin.way
    for aside in (-half - 6, half + 6, -half - 10, half + 10):
        for inwards in (9, 6, 13):
            at = (x - a * inwards + abs(b) * aside, y - b * inwards - abs(a) * aside)
            mark = _put(source, sign, colour, at, pin.at, room)
            if mark:
                return mark
    return None


def _put(source: str, sign: str, colour: int, at: Point, anchor: Point, room: Room) -> Mark | None:
    box = Box(at[0] - _SIGN, at[1] - _SIGN, at[0] + _SIGN, at[1] + _SIGN)
    if not room.is_free(box):
        return None
    room.boxes.append(box)
    return Mark(source, "+" if sign == "+" else "-", at, anchor, box, colour)


def _is(net: str, node: str) -> bool:
    return net.startswith(f"{GROUND} ") if node == GROUND else net == node


def _points(layout: Layout, nets: dict[str, tuple[Wire, ...]], node: str) -> list[Point]:
    points = [at for _, _, net, at, _ in layout.pins if _is(net, node)]
    for net, wires in nets.items():
        if _is(net, node):
            for wire in wires:
                (a, b), (c, d) = wire.start, wire.end
                points += [(a + (c - a) * t / 4, b + (d - b) * t / 4) for t in range(5)]
    return points


def _sign(source: str, sign: str, colour: int, points: list[Point], room: Room) -> Mark | None:
    """Put a sign beside one of the points of a net."""
    for near in (7.0, 11.0, 9.0, 14.0):
        for x, y in points:
            for dx, dy in ((-1, 1), (1, 1), (-1, -1), (1, -1), (-1, 0), (1, 0)):
                mark = _put(source, sign, colour, (x + dx * near, y + dy * near), (x, y), room)
                if mark:
                    return mark
    return None


def _arrow(sense: Sense, colour: int, layout: Layout, room: Room) -> Mark | None:
    """Put an arrow beside the first pin of the item whose current is followed, pointing into it."""
    ((x, y), way) = next((at, way) for item, _, _, at, way in layout.pins if item == sense.through)
    into = (-way[0], -way[1])
    for aside in (9.0, -9.0, 13.0, -13.0):
        for along in (4.0, -6.0, 8.0):
            at = (
                x + into[0] * along + abs(into[1]) * aside,
                y + into[1] * along + abs(into[0]) * aside,
            )
            box = Box(at[0] - _SIGN, at[1] - _SIGN, at[0] + _SIGN, at[1] + _SIGN)
            if room.is_free(box):
                room.boxes.append(box)
                return Mark(sense.source, "arrow", at, (x, y), box, colour, sense.through or "", into)
    return None
