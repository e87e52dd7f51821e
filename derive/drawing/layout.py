"""From columns and rows to lengths: every symbol in its place, with the room that its words need."""

from __future__ import annotations

from dataclasses import dataclass
from itertools import pairwise
from typing import NamedTuple

from derive.drawing.drawing import Label, Placed, Point
from derive.drawing.labels import item_labels, label
from derive.drawing.scene import TRANSISTORS, Item, Scene
from derive.drawing.spots import Spot
from derive.drawing.symbols import GROUND_HEIGHT, HALF, Pose, placed
from derive.topology.topology import GROUND

PITCH = HALF  # from row to row
ASIDE = 16.0  # from a pin that looks sideways to its ground symbol
TRACK = 9.0  # between two upright wires side by side


class Pin(NamedTuple):
    """A pin in its place; `net` is its node, but each ground symbol is a net of its own.

    `way` is the direction in which a wire leaves it.
    """

    item: str
    name: str
    net: str
    at: Point
    way: Point


@dataclass(frozen=True, slots=True)
class Layout:
    """Symbols, their words and their pins in place.

    `rails` holds (node, y, left, right) of each supply's line, `heights` the y on which a node's wire lies
    if it can, `across` and `down` where upright and level wires may run.
    """

    symbols: tuple[Placed, ...]
    labels: tuple[Label, ...]
    pins: tuple[Pin, ...]
    rails: tuple[tuple[str, float, float, float], ...]
    heights: dict[str, float]
    across: tuple[float, ...]
    down: tuple[float, ...]


def mirrored(scene: Scene, spots: dict[str, Spot]) -> dict[str, Spot]:
    """Turn transistors about whose control is wired to what lies on their right."""
    made = dict(spots)
    for item in scene.items:
        own_bulk = len(item.pins) == 4 and item.node(3) not in item.nodes[1:3]
        if item.look not in TRANSISTORS or own_bulk:
            continue
        control, spot = item.node(0), spots[item.name]
        there = [
            spots[other.name].column
            for other in scene.items
            if other is not item and control in other.nodes and other.name in spots
        ]
        away = sum(1 if c > spot.column else -1 for c in there if c != spot.column)
        if item.name in scene.mirrored or (there and away > 0 and control != GROUND):
            made[item.name] = Spot(spot.column, spot.row, Pose(mirrored=True), spot.grounded_at)
    return made


def lay_out(scene: Scene, spots: dict[str, Spot], rows: dict[str, int], tracks: int) -> Layout:
    """Give the layout with so many tracks for upright wires between two columns."""
    items = {item.name: item for item in scene.items}
    middles = _columns(scene, items, spots, tracks)
    top = _top_row(items, spots)

    def y(row: float) -> float:
        return round((top - row) * PITCH, 3)

    symbols: list[Placed] = []
    labels: list[Label] = []
    pins: list[Pin] = []
    for name, spot in spots.items():
        item = items[name]
        centre = (middles[spot.column], y(spot.row))
        symbol = placed(item, centre, spot.pose, rectangles=scene.rectangles)
        symbols.append(symbol)
        labels += item_labels(item, spot, centre)
        for (pin, at), (_, node) in zip(symbol.pins, item.pins, strict=True):
            way = _way(at, centre, item)
            if node != GROUND:
                pins.append(Pin(name, pin, node, at, way))
                continue
            ground = (at[0], y(spot.grounded_at)) if spot.grounded_at is not None else at
            if way[1] <= 0:
                ground = (at[0] + way[0] * ASIDE if way[0] else round(symbol.box.right + ASIDE, 3), at[1])
            tie = f"{name}.{pin}"
            known = next(
                (net for _, _, net, other, _ in pins if other == at and net.startswith(GROUND)), ""
            )
            if known:
                pins.append(Pin(name, pin, known, at, way))
                continue
            grounding = Item(tie, "ground", (("gnd", GROUND),), ())
            symbols.append(placed(grounding, ground, Pose()))
            net = f"{GROUND} {tie}"
            pins += [Pin(name, pin, net, at, way), Pin(tie, "gnd", net, ground, (0, -1))]
    rails = _rails(scene, pins)
    for node, height, left, _ in rails:
        for item in scene.items:
            if item.look == "supply" and item.node(0) == node:
                symbols.append(placed(item, (left, height), Pose()))
                pins.append(Pin(item.name, "node", node, (left, height), (1, 0)))
                labels.append(label(item.title, (left - 11, height + 4), "part", item.name, "end"))
    heights = {node: y(row) for node, row in rows.items()}
    return _with_grid(symbols, labels, pins, rails, heights, tracks)


def _top_row(items: dict[str, Item], spots: dict[str, Spot]) -> float:
    highest = 2.0
    for name, spot in spots.items():
        look = items[name].look
        reach = 1.4 if look == "opamp" else 1.0  # a lying item has its name above
        highest = max(highest, spot.row + reach)
    return float(int(highest + 0.999))


def _way(at: Point, centre: Point, item: Item) -> Point:
    """Give the direction in which a wire leaves a pin."""
    across, down = at[0] - centre[0], at[1] - centre[1]
    if item.look == "opamp" or abs(across) > abs(down):
        return (1 if across > 0 else -1, 0)
    return (0, 1 if down > 0 else -1)


def _columns(
    scene: Scene, items: dict[str, Item], spots: dict[str, Spot], tracks: int
) -> dict[int, float]:
    """Give the middle of every column, each as wide as its symbols and their words."""
    reach: dict[int, tuple[float, float]] = {}
    for name, spot in spots.items():
        symbol = placed(items[name], (0, 0), spot.pose, rectangles=scene.rectangles)
        boxes = [symbol.box, *(label.box for label in item_labels(items[name], spot, (0, 0)))]
        ways = [_way(at, (0, 0), items[name]) for _, at in symbol.pins]
        aside = [
            at[0] + way[0] * (ASIDE + 10) if way[0] else symbol.box.right + ASIDE + 10
            for (_, at), (_, node), way in zip(symbol.pins, items[name].pins, ways, strict=True)
            if node == GROUND and way[1] <= 0
        ]
        left, right = reach.get(spot.column, (0.0, 0.0))
        reach[spot.column] = (
            max(left, *(-box.left for box in boxes), *(-x for x in aside)),
            max(right, *(box.right for box in boxes), *aside),
        )
    middles: dict[int, float] = {}
    edge = 0.0
    for column in range(max(reach, default=0) + 1):
        left, right = reach.get(column, (0.0, 0.0))
        middles[column] = round(edge + left, 3)
        edge += left + right + (tracks + 1) * TRACK
    return middles


def _rails(
    scene: Scene,
    pins: list[Pin],
) -> list[tuple[str, float, float, float]]:
    """Give the line of each supply: above everything, or below the ground symbols."""
    made: list[tuple[str, float, float, float]] = []
    lowest = max((at[1] for *_, at, _ in pins), default=0.0)
    for place, node in enumerate((*scene.top, *scene.bottom)):
        mine = [at for _, _, other, at, _ in pins if other == node] or [min(pin.at for pin in pins)]
        if node in scene.top:
            height = -PITCH * (0.5 + place)
        else:
            height = lowest + GROUND_HEIGHT + PITCH * (0.5 + place - len(scene.top))
        left = round(min(at[0] for at in mine) - PITCH, 3)
        made.append((node, height, left, max(at[0] for at in mine)))
    return made


def _with_grid(
    symbols: list[Placed],
    labels: list[Label],
    pins: list[Pin],
    rails: list[tuple[str, float, float, float]],
    heights: dict[str, float],
    tracks: int,
) -> Layout:
    """Give the layout with the lines along which wires may run."""
    boxes = [symbol.box for symbol in symbols] + [label.box for label in labels]
    left, right = min(b.left for b in boxes), max(b.right for b in boxes)
    top, bottom = min(b.top for b in boxes), max(b.bottom for b in boxes)
    across = {at[0] for *_, at, _ in pins}
    down = {at[1] for *_, at, _ in pins} | {h for h in heights.values() if top < h < bottom}
    return Layout(
        tuple(symbols),
        tuple(labels),
        tuple(pins),
        tuple(rails),
        heights,
        _filled(across, left - TRACK * (tracks + 1), right + TRACK * (tracks + 1), TRACK),
        _filled(down, top - PITCH / 2 * (tracks + 1), bottom + PITCH / 2 * (tracks + 1), PITCH / 2),
    )


def _filled(wanted: set[float], low: float, high: float, step: float) -> tuple[float, ...]:
    """Give the wanted lines and as many between them as there is room for, at least `step` apart."""
    made: list[float] = []
    lines = sorted({*wanted, low, high})
    for here, there in pairwise(lines):
        count = int((there - here) / step + 1e-6)
        made += [round(here + (there - here) * k / max(count, 1), 3) for k in range(max(count, 1))]
    return tuple([*made, lines[-1]])
