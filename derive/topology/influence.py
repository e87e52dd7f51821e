"""How far a change of some node voltages can spread: the ground under the checks of circuits.

Every answer errs on the side of more influence, so that a check which refuses a circuit because
nothing can come back refuses only circuits that have no unique solution.
"""

from __future__ import annotations

from derive.topology.network import (
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
        self.fixed = fixed_nodes(topology.drives)
        self.sources = controlled_sources(topology)
        self.parts = {part.name: part for part in topology.parts}
        coupled = {name for part in topology.parts for name in part.coils or ()}
        # The current of these may change while the voltages at both their ends stand still.
        self.always_sensed = (
            coupled
            | {drive.name for drive in topology.drives}
            | {part.name for part in topology.parts if output_pair(part)}
        )
        self.near: dict[str, list[str]] = {}
        self._join(topology)

    def spread(
        self, start: frozenset[str], *, without: str = "", rigid: bool = False
    ) -> tuple[set[str], set[str]]:
        """Give the nodes and the sources that a change at the start nodes can move.

        Given: `without` names a source that is left out; with `rigid` the start nodes move together,
        so that a pair inside them senses nothing.
        """
        moved = self._reach(set(start), set(start))
        sources: set[str] = set()
        grew = True
        while grew:
            grew = False
            for source in self.sources:
                if source.name in sources or source.name == without:
                    continue
                if self._senses(source, moved, start if rigid else frozenset(), sources):
                    sources.add(source.name)
                    ends = {node for node in source.feeds if node not in self.fixed}
                    moved |= self._reach(ends, moved)
                    grew = True
        return moved, sources

    def _senses(
        self, source: Controlled, moved: set[str], rigid: frozenset[str], sources: set[str]
    ) -> bool:
        if source.senses_nodes:
            plus, minus = source.senses_nodes
            if plus in rigid and minus in rigid:
                return False
            return plus in moved or minus in moved
        sensed = source.senses_part or ""
        if sensed in self.always_sensed or sensed in sources:
            return True
        part = self.parts.get(sensed)
        return part is not None and any(node in moved for node in part.all_nodes)

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
