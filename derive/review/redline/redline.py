"""Compares two revisions of a stage, each a topology or an issued sheet, by deriving both anew."""

from __future__ import annotations

import os
from collections.abc import Callable
from dataclasses import replace
from pathlib import Path

from derive.errors import InputError
from derive.pipeline import derive
from derive.reading.read import parse, read
from derive.review.open import kind_of, open_bytes, read_bytes
from derive.review.redline.circuit import topology_changes
from derive.review.redline.nouns import Redline, Side
from derive.review.redline.results import point_changes, result_changes
from derive.topology.topology import Topology

Tell = Callable[[str, str], None]
ONLY_WRITTEN = (
    "the topology files differ in how they are written only: comments, order, or form of values"
)


def redline(old: str, new: str, tell: Tell = lambda name, stage: None) -> Redline:
    """Give all that changed from one revision to the other.

    Given: the paths of two topologies or issued sheets, in any mix.
    Raises: InputError and its kin where one cannot be read or derived; neither is worked before both are read.
    """
    first, second = revision(old), revision(new)
    return redline_of((old, first), (new, second), tell)


def redline_of(
    old: tuple[str, Topology], new: tuple[str, Topology], tell: Tell = lambda name, stage: None
) -> Redline:
    """Give all that changed between two topologies, each with the file that it was found in."""
    # What was written by hand beside a stage is no part of it, and no redline carries it.
    sides = [_derived(file, replace(topology, hand=None), tell) for file, topology in (old, new)]
    before, after = sides
    changes = (
        *topology_changes(before.topology, after.topology),
        *point_changes(before.outcome, after.outcome),
        *result_changes(before.outcome, after.outcome),
    )
    written = before.topology.text != after.topology.text and not changes
    return Redline(before, after, changes, (ONLY_WRITTEN,) if written else ())


def revision(file: str | os.PathLike[str]) -> Topology:
    """Give the topology that a file is, or that the issued sheet carries.

    Raises: InputError where it is neither, carries several topologies, or is not the one its digest says.
    """
    name = os.fspath(file)
    if Path(name).suffix.lower() not in (".pdf", ".html", ".htm", ".json"):
        return read(file)
    data = read_bytes(name)
    if kind_of(data) is None:
        return read(file)
    issued = open_bytes(data, name)
    if len(issued.sources) != 1:
        raise InputError(
            "this sheet is on several topologies",
            where=name,
            cure="name the topologies themselves, two at a time",
        )
    source = issued.sources[0]
    told = issued.ledger["topology"].get("sha256") if "topology" in issued.ledger else None
    if source.true_digest != told:
        raise InputError(
            "the source in this sheet is not the one that its ledger was made from",
            where=name,
            cure="see what differs with nodeledger recheck",
        )
    return parse(source.text, source.file, beside=None)


def _derived(file: str, topology: Topology, tell: Tell) -> Side:
    results = derive(topology, other_engine=False, progress=lambda stage: tell(file, stage))
    return Side(file, topology, results.outcome)
