"""Reads a drawing back: which pins are joined, from where its lines, dots and labels lie and nothing else."""

from __future__ import annotations

from dataclasses import dataclass

from derive.drawing.drawing import Drawing, Placed, Point, Wire
from derive.drawing.scene import Scene
from derive.topology.topology import GROUND

_Connected = tuple[str, tuple[tuple[str, str], ...]]


@dataclass(frozen=True, slots=True)
class Netlist:
    """Every part with the node of each of its pins, and every controlled source with what it follows.

    `follows` holds (source, sign, node), or (source, "arrow", the part whose current it follows).
    """

    parts: tuple[_Connected, ...]
    follows: tuple[tuple[str, str, str], ...]


def netlist_of_scene(scene: Scene) -> Netlist:
    """Give the netlist that a drawing of the scene has to show."""
    follows: list[tuple[str, str, str]] = []
    for sense in scene.senses:
        if sense.through is not None:
            follows.append((sense.source, "arrow", sense.through))
        else:
            follows += [
                (sense.source, sign, n) for sign, n in zip("+-", sense.between or (), strict=False)
            ]
    parts = sorted((item.name, tuple(item.pins)) for item in scene.items if item.look != "supply")
    return Netlist(tuple(parts), tuple(sorted(follows)))


def netlist_of(drawing: Drawing) -> Netlist:
    """Read the netlist off a drawing."""
    groups = connected(drawing.symbols, drawing.wires, drawing.dots)
    names: dict[Point, set[str]] = {}
    called = dict(drawing.supplies)
    for label in drawing.labels:
        if label.kind == "node" and label.anchor is not None:
            names.setdefault(_group_at(label.anchor, drawing, groups), set()).add(label.of)
    for symbol in drawing.symbols:
        if symbol.look in ("ground", "supply"):
            name = GROUND if symbol.look == "ground" else called.get(symbol.name, symbol.name)
            names.setdefault(groups[symbol.pins[0][1]], set()).add(name)

    def node(group: Point) -> str:
        return "/".join(sorted(names.get(group, {"(no name)"})))

    parts = sorted(
        (symbol.name, tuple((pin, node(groups[at])) for pin, at in symbol.pins))
        for symbol in drawing.symbols
        if symbol.look not in ("ground", "supply")
    )
    follows = sorted(
        (mark.source, mark.sign, mark.part or node(_group_at(mark.anchor, drawing, groups)))
        for mark in drawing.marks
    )
    return Netlist(tuple(parts), tuple(follows))


def connected(
    symbols: tuple[Placed, ...], wires: tuple[Wire, ...], dots: tuple[Point, ...]
) -> dict[Point, Point]:
    """Give for every end of a wire, pin and dot one point that stands for all that it is joined to.

    Two wires are joined where their ends meet, and where one touches the other at a dot; a crossing without
    a dot joins nothing, nor does an end that touches a wire without one.
    """
    parent: dict[Point, Point] = {}

    def find(point: Point) -> Point:
        parent.setdefault(point, point)
        while parent[point] != point:
            point = parent[point]
        return point

    for symbol in symbols:
        for _, at in symbol.pins:
            find(at)
    for wire in wires:
        parent[find(wire.end)] = find(wire.start)
    for dot in dots:
        for wire in wires:
            if lies_on(dot, wire):
                parent[find(wire.start)] = find(dot)
    return {point: find(point) for point in list(parent)}


def lies_on(point: Point, wire: Wire) -> bool:
    """Say whether a point is on a wire, its ends included."""
    (a, b), (c, d) = wire.start, wire.end
    near = 1e-6
    across = min(a, c) - near <= point[0] <= max(a, c) + near
    return across and min(b, d) - near <= point[1] <= max(b, d) + near


def _group_at(point: Point, drawing: Drawing, groups: dict[Point, Point]) -> Point:
    """Give what a point of a wire or pin is joined to; the point itself where there is neither."""
    if point in groups:
        return groups[point]
    for wire in drawing.wires:
        if lies_on(point, wire):
            return groups[wire.start]
    return point
