"""Nodes that meet too little: most often a slip of the pen in a node's name."""

from __future__ import annotations

from derive.quantities.words import did_you_mean, quoted
from derive.reading.document import Document
from derive.reading.network import Mention, mentions
from derive.topology.topology import GROUND, Topology


def check_terminals(topology: Topology, document: Document) -> None:
    """Refuse a node where one end of a part hangs unused, and a node that is only sensed."""
    found: dict[str, list[Mention]] = {}
    for mention in mentions(topology):
        found.setdefault(mention.node, []).append(mention)
    wanted = {node for find in topology.finds for node in find.nodes or ()}
    for node, here in found.items():
        if node == GROUND:
            continue
        wired = [mention for mention in here if mention.is_wired]
        if not wired:
            raise document.error(
                f"{here[0].item}: node {quoted(node)} is sensed, but nothing is wired to it",
                *here[0].path,
                cure=did_you_mean(node, found, "wire a part or a drive to it"),
            )
        if len(here) == 1 and node not in wanted:
            raise document.error(
                f"{here[0].item}: node {quoted(node)} meets one part only",
                *here[0].path,
                cure=did_you_mean(node, found, "wire a second part to it, or take this one out"),
            )
