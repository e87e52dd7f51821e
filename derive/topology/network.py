"""The circuit as a graph: which nodes a part ties together, and which parts answer to which nodes."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

from derive.topology.topology import GROUND, Drive, Part, Topology

Pair = tuple[str, str]


@dataclass(frozen=True, slots=True)
class Mention:
    """One place where the file names a node; `path` leads to it."""

    node: str
    item: str
    path: tuple[str | int, ...]
    is_wired: bool


@dataclass(frozen=True, slots=True)
class Controlled:
    """A source that answers to a pair of nodes, or to the current of a part."""

    name: str
    feeds: Pair
    senses_nodes: Pair | None
    senses_part: str | None
    is_current: bool


def mentions(topology: Topology) -> Iterator[Mention]:
    """Give every node that a drive or part names, in the order of the file.

    A node is wired by what lets a current in or out; a sensed pair and an op amp's inputs do not,
    unless the op amp has an input resistance.
    """
    for drive in topology.drives:
        for i, node in enumerate(drive.nodes):
            path = ("drives", drive.name, drive.quantity, i)
            yield Mention(node, f"drive {drive.name}", path, is_wired=True)
    for part in topology.parts:
        for key, nodes in part.wires:
            wired = key not in ("senses", "inputs") or (key == "inputs" and has_input(part))
            for i, node in enumerate(nodes):
                yield Mention(node, f"part {part.name}", ("parts", part.name, key, i), wired)


def has_input(part: Part) -> bool:
    """Whether the part is an op amp with an input resistance."""
    return any(key == "R_in" for key, _ in part.parameters)


def is_stiff(part: Part) -> bool:
    """Whether the part holds its output voltage whatever the current: a source without resistance."""
    if part.kind == "opamp":
        return not any(key == "R_out" for key, _ in part.parameters)
    return part.kind in ("ideal_opamp", "voltage_gain", "transresistance")


def output_pair(part: Part) -> Pair | None:
    """Give the pair of nodes between which a controlled voltage stands, op amps against ground."""
    if part.kind in ("ideal_opamp", "opamp"):
        return part.nodes("output")[0], GROUND
    if part.kind in ("voltage_gain", "transresistance"):
        plus, minus = part.nodes("output")
        return plus, minus
    return None


def passive_pairs(part: Part) -> tuple[Pair, ...]:
    """Give the pairs of nodes that the part joins by a resistance, capacitance or inductance."""
    if part.kind in ("resistor", "capacitor", "inductor"):
        first, second = part.nodes("between")
        return ((first, second),)
    if has_input(part):
        plus, minus = part.nodes("inputs")
        return ((plus, minus),)
    return ()


def conducting_pairs(topology: Topology) -> Iterator[Pair]:
    """Give every pair of nodes between which something fixes or passes a voltage."""
    for drive in topology.drives:
        if drive.quantity == "voltage":
            yield drive.nodes
    for part in topology.parts:
        yield from passive_pairs(part)
        output = output_pair(part)
        if output:
            yield output


def controlled_sources(topology: Topology) -> tuple[Controlled, ...]:
    """Give every controlled source and op amp, in the order of the file."""
    return tuple(_controlled(part) for part in topology.parts if _is_controlled(part))


def fixed_nodes(drives: tuple[Drive, ...]) -> frozenset[str]:
    """Give ground and every node that voltage drives tie to it."""
    fixed = {GROUND}
    pairs = [drive.nodes for drive in drives if drive.quantity == "voltage"]
    grew = True
    while grew:
        grew = False
        for plus, minus in pairs:
            if (plus in fixed) != (minus in fixed):
                fixed |= {plus, minus}
                grew = True
    return frozenset(fixed)


def _is_controlled(part: Part) -> bool:
    return part.kind in ("transconductance", "current_gain") or output_pair(part) is not None


def _controlled(part: Part) -> Controlled:
    output = output_pair(part)
    wires = dict(part.wires)
    if output is None:
        flows = wires["flows"]
        feeds = (flows[0], flows[1])
    else:
        feeds = output
    sensed = wires.get("senses") or wires.get("inputs")
    pair = (sensed[0], sensed[1]) if sensed else None
    return Controlled(part.name, feeds, pair, part.senses_part, is_current=output is None)
