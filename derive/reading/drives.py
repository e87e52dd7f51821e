"""The [drives] and [nodes] tables."""

from __future__ import annotations

from typing import Any, Literal

from derive.quantities.words import listed
from derive.reading.document import Document
from derive.reading.fields import check_name, known_keys, node, nodes, table, text
from derive.topology.topology import Drive

_DRIVE_CURE = 'write it as V_s = { voltage = ["in", "gnd"] }'


def read_drives(document: Document) -> tuple[Drive, ...]:
    """Give every drive of the file, in the order written.

    Raises: InputError where a drive is neither a voltage nor a current between two nodes.
    """
    drives = table(document, document.data.get("drives", {}), "drives", "drives", cure=_DRIVE_CURE)
    return tuple(_drive(document, name, raw) for name, raw in drives.items())


def read_node_words(document: Document) -> tuple[tuple[str, str], ...]:
    """Give (node, words) in the order written."""
    words = table(
        document,
        document.data.get("nodes", {}),
        "nodes",
        "nodes",
        cure='write [nodes] and under it out = "cable"',
    )
    return tuple(
        (
            node(document, name, "nodes", "nodes", name),
            text(document, raw, f"nodes: {name}", "nodes", name),
        )
        for name, raw in words.items()
    )


def _drive(document: Document, name: str, raw: Any) -> Drive:
    path = ("drives", name)
    check_name(document, name, "drive", *path)
    item = f"drive {name}"
    entries = table(document, raw, item, *path, cure=_DRIVE_CURE)
    known_keys(document, entries, ("voltage", "current"), item, *path)
    if len(entries) != 1:
        what = f"is {listed(entries)} at once" if entries else "is neither voltage nor current"
        raise document.error(f"{item} {what}", *path, cure=_DRIVE_CURE)
    quantity: Literal["voltage", "current"] = "voltage" if "voltage" in entries else "current"
    plus, minus = nodes(document, entries[quantity], 2, item, *path, quantity)
    return Drive(name, document.place(*path), quantity, (plus, minus))
