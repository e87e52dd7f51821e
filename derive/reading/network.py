"""The circuit as a graph: which nodes a part ties together, and which parts answer to which nodes."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

from derive.reading.kinds import KINDS
from derive.topology.topology import GROUND, Part, Topology

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
    unless the op amp has an input resistance, nor does a gate without a capacitance.
    """
    for supply in topology.supplies:
        yield Mention(
            supply.node, f"supply {supply.name}", ("supplies", supply.name, "node"), is_wired=True
        )
    for drive in topology.drives:
        for i, node in enumerate(drive.nodes):
            path = ("drives", drive.name, drive.quantity, i)
            yield Mention(node, f"drive {drive.name}", path, is_wired=True)
    for part in topology.parts:
        for key, nodes in part.wires:
            wired = _is_wired(part, key)
            for i, node in enumerate(nodes):
                yield Mention(node, f"part {part.name}", ("parts", part.name, key, i), wired)


def _is_wired(part: Part, key: str) -> bool:
    spec = KINDS[part.kind]
    if spec.controls:
        flows = {key for pair, _ in spec.controls for key in pair}
        return key in flows or any(key in pair for pair in joined_keys(part))
    return key not in ("senses", "inputs") or any(key in pair for pair in joined_keys(part))


def joined_keys(part: Part) -> tuple[tuple[str, str], ...]:
    """Give the pairs of a part's terminals between which it lets a current through."""
    spec = KINDS[part.kind]
    given = {key for key, _ in part.parameters}
    return (*spec.joins, *(pair for needs, pair in spec.joins_if if given.intersection(needs)))


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
    pairs = (_nodes_of(part, keys) for keys in joined_keys(part))
    return tuple(pair for pair in pairs if pair[0] != pair[1])


def _nodes_of(part: Part, keys: Pair) -> Pair:
    """Give the nodes of two terminals; one that is not written is at ground."""
    wires = dict(part.wires)
    if keys[0] == keys[1]:
        first, second = wires[keys[0]]
    else:
        first, second = (wires.get(key, (GROUND,))[0] for key in keys)
    return first, second


def conducting_pairs(topology: Topology) -> Iterator[Pair]:
    """Give every pair of nodes between which something fixes or passes a voltage."""
    for supply in topology.supplies:
        yield supply.node, GROUND
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
    found: list[Controlled] = []
    for part in topology.parts:
        if _is_controlled(part):
            found.append(_controlled(part))
        for i, (flows, senses) in enumerate(KINDS[part.kind].controls):
            name = f"{part.name}.{i}" if i else part.name
            pairs = _nodes_of(part, flows), _nodes_of(part, senses)
            found.append(Controlled(name, *pairs, None, is_current=True))
    return tuple(found)


def fixed_nodes(topology: Topology) -> frozenset[str]:
    """Give ground and every node that supplies and voltage drives tie to it."""
    fixed = {GROUND, *(supply.node for supply in topology.supplies)}
    pairs = [drive.nodes for drive in topology.drives if drive.quantity == "voltage"]
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
