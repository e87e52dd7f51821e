"""Which quantity and which band a hand derivation is of, or why it cannot be told."""

from __future__ import annotations

import re
from collections.abc import Sequence

from derive.errors import InputError
from derive.handcheck.report import HandFile
from derive.quantities.words import did_you_mean, listed, quoted
from derive.topology.topology import BandName, Find, Topology


def choose(
    hand: HandFile, topology: Topology, bands: Sequence[BandName], file: str
) -> tuple[Find, BandName]:
    """Give the quantity and the band that a derivation is of: those that it names, or the only ones there are.

    Given: the bands that the topology is worked in, and the derivation's `file` as messages are to name it.
    Raises: InputError where one is missing or unknown.
    """
    finds = {find.name: find for find in topology.finds}
    find = _one("find", hand.find, list(finds), f"quantity wanted in {topology.file}", hand, file)
    band = _one("band", hand.band, list(bands), f"band of {topology.file}", hand, file)
    return finds[find], next(name for name in bands if name == band)


def _one(key: str, written: str, known: Sequence[str], what: str, hand: HandFile, file: str) -> str:
    if written in known:
        return written
    where = place_of(hand, key, file)
    there = f"it has {listed(known)}"
    if written:
        cure = did_you_mean(written, known, there)
        raise InputError(f"{key}: {quoted(written)} is no {what}", where=where, cure=cure)
    if len(known) == 1:
        return known[0]
    raise InputError(f"{key} is missing, and {there}", where=where, cure=f'write {key} = "{known[-1]}"')


def place_of(hand: HandFile, key: str, file: str) -> str:
    """Give file and line of a key of the hand file; the file alone where it is not in it."""
    found = re.search(rf"^[ \t]*{key}[ \t]*=", hand.text, re.MULTILINE)
    return f"{file}:{hand.text.count(chr(10), 0, found.start()) + 1}" if found else file
