"""Words beside symbols and wires, with the room that they take."""

from __future__ import annotations

from derive.drawing.drawing import Box, Label, LabelKind, Point, Side
from derive.drawing.letters import SIZE, SMALL, Words, plain_words, width_of
from derive.drawing.scene import TRANSISTORS, Item
from derive.drawing.spots import Spot
from derive.drawing.symbols import template

RISE, FALL = 0.8, 0.3  # of letters above and below their base line, in em
_GAP = 4.0
_LINE = 14.0  # from one line of words to the next
_NOTE = 16.0
_ASIDE = 1.0  # clear on both sides of words


def label(
    words: Words, at: Point, kind: LabelKind, of: str, side: Side, anchor: Point | None = None
) -> Label:
    """Give words in their place with the box that they take up."""
    x, y = at
    size = size_of(kind)
    width = width_of(words, size)
    left = x - {"start": 0.0, "middle": width / 2, "end": width}[side]
    box = Box(left - _ASIDE, y - RISE * size, left + width + _ASIDE, y + FALL * size)
    return Label(words, at, side, box, kind, of, anchor)


def size_of(kind: LabelKind) -> float:
    """Give the size of letters of a kind of label."""
    return SIZE if kind == "part" else SMALL


def item_labels(item: Item, spot: Spot, centre: Point) -> list[Label]:
    """Give the words of an item beside its symbol: to the right, or over and under one that lies."""
    x, y = centre
    if item.look == "opamp":
        return [label(item.title, (x - 2, y + 4), "part", item.name, "middle")]
    if item.look in TRANSISTORS:
        if spot.pose.mirrored:
            return [label(item.title, (x - 6, y + 4), "part", item.name, "end")]
        beside_bulk = len(item.pins) == 4 and item.node(3) not in item.nodes[1:3]
        return [label(item.title, (x + 6, y + (-6 if beside_bulk else 4)), "part", item.name, "start")]
    half = template(item, spot.pose, rectangles=False).box.bottom
    if spot.pose.turns % 2:
        return _beside(item, (x + half + _GAP, y + 4))
    made = [label(item.title, (x, y - half - 5), "part", item.name, "middle")]
    if item.value:
        made.append(label(item.value, (x, y + half + 11), "value", item.name, "middle"))
    return made


def _beside(item: Item, at: Point) -> list[Label]:
    x, y = at
    if not item.value:
        return [label(item.title, at, "part", item.name, "start")]
    return [
        label(item.title, (x, y - _LINE / 2), "part", item.name, "start"),
        label(item.value, (x, y + _LINE / 2), "value", item.name, "start"),
    ]


def node_label(node: str, at: Point, side: Side, anchor: Point) -> Label:
    """Give the name of a node; it is read at a point of the node's wire."""
    return label(plain_words(node), at, "node", node, side, anchor)


def note_labels(notes: tuple[Words, ...], left: float, below: float) -> list[Label]:
    """Give the notes under a drawing, one a line."""
    return [
        label(note, (left, below + _NOTE * k), "note", "", "start") for k, note in enumerate(notes, 1)
    ]
