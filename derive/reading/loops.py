"""Loops of voltage sources, whose currents nothing determines."""

from __future__ import annotations

from derive.quantities.words import listed, quoted
from derive.reading.document import Document
from derive.reading.network import Pair, is_stiff, output_pair
from derive.topology.topology import GROUND, Topology

_OPAMPS = ("ideal_opamp", "opamp")


def check_loops(topology: Topology, document: Document) -> None:
    """Refuse voltage sources that close a loop, such as two drives side by side."""
    kinds = {part.name: part.kind for part in topology.parts}
    near: dict[str, list[tuple[str, str]]] = {}
    sources = _stiff(topology)
    order = [name for name, _, _ in sources]
    drives = {drive.name for drive in topology.drives}
    drives |= {supply.name for supply in topology.supplies}
    sensed = {part.senses_part for part in topology.parts}
    for name, (first, second), path in sources:
        chain = _chain(near, first, second)
        # A source whose current is sensed may settle the current around the loop.
        loose = chain is not None and not sensed.intersection((*chain, name))
        if chain is not None and (loose or drives.issuperset((*chain, name))):
            chain.sort(key=order.index)
            _refuse(name, chain, (first, second), kinds, document, path)
        near.setdefault(first, []).append((second, name))
        near.setdefault(second, []).append((first, name))


def _stiff(topology: Topology) -> list[tuple[str, Pair, tuple[str | int, ...]]]:
    found: list[tuple[str, Pair, tuple[str | int, ...]]] = [
        (supply.name, (supply.node, GROUND), ("supplies", supply.name)) for supply in topology.supplies
    ]
    found += [
        (drive.name, drive.nodes, ("drives", drive.name))
        for drive in topology.drives
        if drive.quantity == "voltage"
    ]
    for part in topology.parts:
        output = output_pair(part)
        if output and is_stiff(part):
            found.append((part.name, output, ("parts", part.name, "output")))
    return found


def _chain(near: dict[str, list[tuple[str, str]]], first: str, second: str) -> list[str] | None:
    """Give the names of the sources that already join the two nodes; None where none do."""
    came_by: dict[str, tuple[str, str]] = {first: ("", "")}
    waiting = [first]
    while waiting and second not in came_by:
        node = waiting.pop()
        for other, name in near.get(node, ()):
            if other not in came_by:
                came_by[other] = (node, name)
                waiting.append(other)
    if second not in came_by:
        return None
    names = []
    node = second
    while node != first:
        node, name = came_by[node]
        names.append(name)
    return names


def _refuse(
    name: str,
    chain: list[str],
    nodes: Pair,
    kinds: dict[str, str],
    document: Document,
    path: tuple[str | int, ...],
) -> None:
    if kinds.get(name) in _OPAMPS and len(chain) == 1 and kinds.get(chain[0]) in _OPAMPS:
        raise document.error(
            f"the op amps {chain[0]} and {name} share the output {quoted(nodes[0])}",
            *path,
            cure="give each its own output node, or an R_out",
        )
    ends = [quoted(node) for node in nodes if node != GROUND]
    raise document.error(
        f"{listed([*chain, name])} form a loop of voltage sources at {listed(ends)}",
        *path,
        cure="put a resistor between them, or take one out",
    )
