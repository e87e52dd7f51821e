"""From the text of a topology file to a Topology."""

from __future__ import annotations

import os
from pathlib import PurePath

from derive.reading.assumptions import read_assumptions, read_budget
from derive.reading.attached import Beside, read_hand_file
from derive.reading.circuit import check_circuit
from derive.reading.document import Document, load
from derive.reading.drawing import read_drawing
from derive.reading.drives import read_drives, read_node_words
from derive.reading.fields import known_keys
from derive.reading.files import check_text, read_text
from derive.reading.finds import read_finds
from derive.reading.merges import read_merges
from derive.reading.models import check_models_used, read_models
from derive.reading.parts import read_parts
from derive.reading.roles import read_bands
from derive.reading.sign_off import read_reviews, read_revisions
from derive.reading.supplies import read_supplies, read_temperature
from derive.reading.title_block import read_form, read_plots, read_title_block
from derive.topology.topology import Topology

_TABLES = (
    *("bands", "sheet", "nodes", "supplies", "drives", "parts", "models", "conditions", "merge"),
    *("find", "assume", "budget", "revision", "review", "drawing"),
)


def read(path: str | os.PathLike[str]) -> Topology:
    """Give the topology that the file describes, checked and with the line of every item.

    Raises: InputError, with file, line and cure, for anything that cannot be used.
    """
    return parse(read_text(path), os.fspath(path))


def parse(text: str, file: str, beside: Beside | None = read_text) -> Topology:
    """Give the topology that the text describes; `file` is the name that messages point to.

    Given: `beside`, which gives the text of a file that it names, by its path; None leaves such files unread.
    Raises: InputError, with file, line and cure, for anything that cannot be used.
    """
    check_text(text, file)
    document = load(text, file)
    _check_tables(document)
    title_block = read_title_block(document)
    models = read_models(document)
    drives = read_drives(document)
    parts = read_parts(document, models)
    check_models_used(document, models, parts)
    finds = read_finds(document, drives)
    topology = Topology(
        file=PurePath(file).name,
        text=text,
        title_block=title_block,
        node_words=read_node_words(document),
        drives=drives,
        parts=parts,
        finds=finds,
        supplies=read_supplies(document),
        bands=read_bands(document),
        temperature=read_temperature(document),
        merges=read_merges(document),
        assumptions=read_assumptions(document, [find.name for find in finds]),
        budget=read_budget(document),
        form=read_form(document),
        revisions=read_revisions(document, title_block),
        reviews=read_reviews(document),
        plots=read_plots(document),
        drawing=read_drawing(document, parts, drives),
        hand=None if beside is None else read_hand_file(document, beside),
    )
    check_circuit(topology, document)
    return topology


def _check_tables(document: Document) -> None:
    known_keys(document, document.data, _TABLES, "the file")
