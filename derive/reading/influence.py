"""How far a change of some node voltages can spread: the ground under the checks of circuits.

Every answer errs on the side of more influence, so that a check which refuses a circuit because
nothing can come back refuses only circuits that have no unique solution.
"""

from __future__ import annotations

from derive.reading.network import (
    Controlled,
    controlled_sources,
    fixed_nodes,
    output_pair,
    passive_pairs,
)
from derive.topology.topology import Topology


class Influence:
    """What each node and source of one circuit can move."""

    def __init__(self, topology: Topology) -> None:
        self.fixed = fixed_nodes(topology)
        self.sources = controlled_sources(topology)
        self.parts = {part.name: part for part in topology.parts}
        coupled = {name for part in topology.parts for name in part.coils or ()}
        # The current of these may change while the voltages at both their ends stand still.
        self.always_sensed = (
            coupled
            | {drive.name for drive in topology.drives}
            | {part.name for part in topology.parts if output_pair(part)}
        )
        self.unbound: list[Controlled] = []
        self.by_node: dict[str, list[Controlled]] = {}
        self.by_part: dict[str, list[Controlled]] = {}
        self._index()
        self.near: dict[str, list[str]] = {}
        self._join(topology)

    def spread(
        self, start: frozenset[str], *, without: str = "", rigid: bool = False
    ) -> tuple[set[str], set[str]]:
        """Give the nodes and the sources that a change at the start nodes can move.

        Given: `without` names a source that is left out; with `rigid` the start nodes move together,
        so that a pair among them senses nothing until a source has moved.
        """
        moved = self._reach(set(start), set(start))
        fired: dict[str, None] = {}
        held: list[Controlled] = []
        waiting = [*self.unbound, *self._sensing(sorted(moved))]
        while waiting:
            source = waiting.pop()
            if source.name in fired or source.name == without:
                continue
            if rigid and not fired and start.issuperset(source.senses_nodes or ("",)):
                held.append(source)
                continue
            fired[source.name] = None
            ends = {node for node in source.feeds if node not in self.fixed}
            new = self._reach(ends, moved) - moved
            moved |= new
            waiting += [*held, *self._sensing(sorted(new)), *self.by_part.get(source.name, ())]
            held = []
        return moved, set(fired)

    def _sensing(self, nodes: list[str]) -> list[Controlled]:
        return [source for node in nodes for source in self.by_node.get(node, ())]

    def _index(self) -> None:
        """File every source under the nodes, and the source, that it answers to."""
        for source in self.sources:
            sensed = source.senses_part
            if sensed in self.always_sensed:
                self.unbound.append(source)
                continue
            nodes: tuple[str, ...] = source.senses_nodes or ()
            if sensed is not None:
                self.by_part.setdefault(sensed, []).append(source)
                nodes = self.parts[sensed].all_nodes
            for node in nodes:
                self.by_node.setdefault(node, []).append(source)

    def _reach(self, begin: set[str], known: set[str]) -> set[str]:
        found = set(begin)
        waiting = sorted(begin)
        while waiting:
            for node in self.near.get(waiting.pop(), ()):
                if node not in found and node not in known:
                    found.add(node)
                    waiting.append(node)
        return found

    def _join(self, topology: Topology) -> None:
        pairs = [drive.nodes for drive in topology.drives if drive.quantity == "voltage"]
        for part in topology.parts:
            pairs += passive_pairs(part)
            output = output_pair(part)
            if output:
                pairs.append(output)
            if part.coils:
                ends = [self.parts[coil].all_nodes for coil in part.coils]
                pairs += [(first, second) for first in ends[0] for second in ends[1]]
        for first, second in pairs:
            if first not in self.fixed and second not in self.fixed:
                self.near.setdefault(first, []).append(second)
                self.near.setdefault(second, []).append(first)
