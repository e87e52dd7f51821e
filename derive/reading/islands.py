"""Nodes whose voltage nothing determines."""

from __future__ import annotations

from derive.quantities.words import listed, quoted
from derive.reading.document import Document
from derive.reading.influence import Influence
from derive.reading.network import conducting_pairs, mentions
from derive.topology.topology import GROUND, Topology


def check_islands(topology: Topology, document: Document) -> None:
    """Refuse nodes that have no path to ground and whose voltage nothing else settles.

    A controlled current settles a voltage only where it answers to it: a group of nodes off ground
    is sound if a current into it depends on its own voltage, however far around.
    """
    influence = Influence(topology)
    for island in _islands(topology):
        _, moved = influence.spread(island, rigid=True)
        if not any(
            source.is_current
            and source.name in moved
            and (source.feeds[0] in island) != (source.feeds[1] in island)
            for source in influence.sources
        ):
            _refuse(island, topology, document)


def _islands(topology: Topology) -> list[frozenset[str]]:
    near: dict[str, list[str]] = {mention.node: [] for mention in mentions(topology)}
    near.setdefault(GROUND, [])
    for first, second in conducting_pairs(topology):
        near[first].append(second)
        near[second].append(first)
    seen: set[str] = set()
    islands = []
    for start in (GROUND, *near):
        if start in seen:
            continue
        group = {start}
        waiting = [start]
        while waiting:
            for node in near[waiting.pop()]:
                if node not in group:
                    group.add(node)
                    waiting.append(node)
        seen |= group
        if GROUND not in group:
            islands.append(frozenset(group))
    return islands


def _refuse(island: frozenset[str], topology: Topology, document: Document) -> None:
    inside = [mention for mention in mentions(topology) if mention.node in island]
    names = list(dict.fromkeys(mention.node for mention in inside))
    items = list(dict.fromkeys(mention.item for mention in inside))
    shown = [quoted(name) for name in names[:6]]
    if len(names) > 6:
        shown.append(f"{len(names) - 6} more")
    subject = f"node {shown[0]} floats" if len(names) == 1 else f"nodes {listed(shown)} float"
    it = "it has" if len(names) == 1 else "they have"
    more = f" and {len(items) - 3} more" if len(items) > 3 else ""
    raise document.error(
        f"{subject}: {it} no path to ground through resistors, capacitors, inductors or voltage "
        f"sources ({', '.join(items[:3])}{more})",
        *inside[0].path,
        cure="add the part that carries the current to ground, such as an output resistance",
    )
