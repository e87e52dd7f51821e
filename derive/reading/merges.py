"""The [merge] table: names that the user gives to parts in parallel or in series."""

from __future__ import annotations

from typing import Any

from derive.devices.registry import models, names_for
from derive.quantities.dimension import CAPACITANCE, INDUCTANCE, RESISTANCE
from derive.quantities.words import did_you_mean, listed, quoted
from derive.reading.document import Document
from derive.reading.fields import check_name, described, table
from derive.topology.topology import Merge, Topology

_CURE = 'write R_B = ["R_1", "R_2"]'
_WORDS = {RESISTANCE: "resistor", CAPACITANCE: "capacitor", INDUCTANCE: "inductor"}


def read_merges(document: Document) -> tuple[Merge, ...]:
    """Give every line of the table, in the order written.

    Raises: InputError where a line is no list of two or more names.
    """
    lines = table(document, document.data.get("merge", {}), "merge", "merge", cure=_CURE)
    return tuple(_merge(document, name, raw) for name, raw in lines.items())


def _merge(document: Document, name: str, raw: Any) -> Merge:
    path = ("merge", name)
    check_name(document, name, "merge", *path)
    item = f"merge {name}"
    if not isinstance(raw, list):
        raise document.error(f"{item}: a list is wanted, not {described(raw)}", *path, cure=_CURE)
    if len(raw) < 2:
        raise document.error(f"{item} names fewer than two parts", *path, cure=_CURE)
    for i, part in enumerate(raw):
        if not isinstance(part, str):
            raise document.error(
                f"{item}: the name of a part is wanted, not {described(part)}", *path, i, cure=_CURE
            )
        if part in raw[:i]:
            raise document.error(
                f"{item} names {quoted(part)} twice", *path, i, cure="take one of them out"
            )
    return Merge(name, document.place(*path), tuple(raw))


def check_merges(topology: Topology, document: Document) -> None:
    """Refuse a merged name that is taken, and members that are not there or not of one kind.

    Members are parts, parameters of devices by their symbols, and merges written above.
    """
    mergeable = _mergeable(topology)
    owner: dict[str, str] = {}
    for merge in topology.merges:
        item, path = f"merge {merge.name}", ("merge", merge.name)
        if merge.name in mergeable:
            raise document.error(
                f"{item}: the name is that of a {mergeable[merge.name]}", *path, cure="choose another"
            )
        kinds: list[str] = []
        for i, member in enumerate(merge.parts):
            if member not in mergeable:
                cure = f"what may be merged is {listed(list(mergeable)[:12])}"
                raise document.error(
                    f"{item}: there is nothing to merge by the name {quoted(member)}",
                    *path,
                    i,
                    cure=did_you_mean(member, mergeable, cure),
                )
            if member in owner:
                raise document.error(
                    f"{item}: {member} is merged already, in {owner[member]}",
                    *path,
                    i,
                    cure=f"name {owner[member]} in its place, or take it out of one of them",
                )
            owner[member] = merge.name
            kinds.append(mergeable[member])
        if len(set(kinds)) > 1:
            raise document.error(
                f"{item} mixes {listed(f'{kind}s' for kind in dict.fromkeys(kinds))}",
                *path,
                cure="merge parts of one kind",
            )
        mergeable[merge.name] = kinds[0]


def _mergeable(topology: Topology) -> dict[str, str]:
    """Give what a merge may name, each with its kind."""
    found = {part.name: part.kind for part in topology.parts if part.kind in _WORDS.values()}
    names = names_for(topology)
    for part in topology.parts:
        if part.kind in _WORDS.values():
            continue
        for parameter in models()[part.kind].SPEC.parameters:
            if parameter.dimension in _WORDS:
                found[names.indexed(part, parameter.name)] = _WORDS[parameter.dimension]
    return found
