"""The files that a topology names, read with it."""

from __future__ import annotations

import os
from collections.abc import Callable
from pathlib import PurePath

from derive.errors import InputError
from derive.reading.document import Document
from derive.reading.fields import text
from derive.reading.files import check_text
from derive.topology.topology import Attached

Beside = Callable[[str], str]
_HAND = ("sheet", "hand")


def read_hand_file(document: Document, beside: Beside) -> Attached | None:
    """Give the file under `hand` in [sheet], which stands beside the topology; None where there is none.

    Given: `beside`, which reads a file; an issued sheet gives what it carries.
    Raises: InputError, at the line of the topology, for a file that cannot be had.
    """
    sheet = document.data.get("sheet", {})
    if "hand" not in sheet:
        return None
    name = text(document, sheet["hand"], "sheet: hand", *_HAND).strip()
    if not name or PurePath(name).is_absolute():
        raise document.error(
            "sheet: hand: the name of a file beside this one is wanted",
            *_HAND,
            cure='write hand = "hand.toml"',
        )
    path = os.fspath(PurePath(document.file).parent / name)
    try:
        written = beside(path)
        check_text(written, path)
    except InputError as error:
        raise document.error(f"sheet: hand: {name}: {error.what}", *_HAND, cure=error.cure) from None
    return Attached(name, path, written, document.place(*_HAND))
