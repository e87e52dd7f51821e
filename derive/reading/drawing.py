"""The [drawing] table: hints for how the circuit is drawn."""

from __future__ import annotations

from collections.abc import Iterable
from typing import Any, Literal

from derive.quantities.words import did_you_mean, listed, quoted
from derive.reading.document import Document
from derive.reading.fields import described, known_keys, table, text
from derive.topology.topology import DrawingHints, Drive, Part

_TABLE = "drawing"
_KEYS = ("order", "upright", "level", "mirrored", "resistors")
_RESISTORS: tuple[Literal["zigzag", "rectangle"], ...] = ("zigzag", "rectangle")
_TRANSISTORS = ("bipolar", "mosfet", "jfet")
# Of these it makes no sense to say whether they stand or lie.
_FIXED = (*_TRANSISTORS, "opamp", "ideal_opamp", "coupling")
_CURE = 'write [drawing] and under it order = ["in", "b", "out"]'


def read_drawing(document: Document, parts: tuple[Part, ...], drives: tuple[Drive, ...]) -> DrawingHints:
    """Give the hints as the user wrote them.

    Raises: InputError for a key, node or part that there is not, and for one that is told twice.
    """
    if _TABLE not in document.data:
        return DrawingHints()
    hints = table(document, document.data[_TABLE], _TABLE, _TABLE, cure=_CURE)
    known_keys(document, hints, _KEYS, _TABLE, _TABLE)
    nodes = {node for part in parts for node in part.all_nodes}
    nodes |= {node for drive in drives for node in drive.nodes}
    turned = [p.name for p in parts if p.kind not in _FIXED] + [drive.name for drive in drives]
    order = _names(document, hints, "order", nodes, "node")
    upright = _names(document, hints, "upright", turned, "part with two ends")
    level = _names(document, hints, "level", turned, "part with two ends")
    for place, name in enumerate(level):
        if name in upright:
            raise document.error(
                f"drawing: {name} is both upright and level",
                *(_TABLE, "level", place),
                cure="name it in one of the two lists only",
            )
    transistors = [part.name for part in parts if part.kind in _TRANSISTORS]
    mirrored = _names(document, hints, "mirrored", transistors, "transistor")
    return DrawingHints(order, upright, level, mirrored, _resistors(document, hints))


def _names(
    document: Document, hints: dict[str, Any], key: str, known: Iterable[str], what: str
) -> tuple[str, ...]:
    raw = hints.get(key, [])
    if not isinstance(raw, list):
        raise document.error(
            f"drawing: {key} wants a list, not {described(raw)}",
            *(_TABLE, key),
            cure=f'write {key} = ["…", "…"]',
        )
    there = sorted(known)
    found: list[str] = []
    for place, entry in enumerate(raw):
        name = text(document, entry, f"drawing: {key}", _TABLE, key, place)
        if name not in there:
            raise document.error(
                f"drawing: {key}: there is no {what} {quoted(name)}",
                *(_TABLE, key, place),
                cure=did_you_mean(name, there, f"there is {listed(there)}" if there else "take it out"),
            )
        if name in found:
            raise document.error(
                f"drawing: {key} names {quoted(name)} twice", *(_TABLE, key, place), cure="take one out"
            )
        found.append(name)
    return tuple(found)


def _resistors(document: Document, hints: dict[str, Any]) -> Literal["zigzag", "rectangle"]:
    if "resistors" not in hints:
        return "zigzag"
    written = text(document, hints["resistors"], "drawing: resistors", _TABLE, "resistors")
    for shape in _RESISTORS:
        if written == shape:
            return shape
    raise document.error(
        f"drawing: resistors cannot be drawn as {quoted(written)}",
        *(_TABLE, "resistors"),
        cure='write resistors = "zigzag" or resistors = "rectangle"',
    )
