"""Leads wires along the lines of a grid, net by net, by the way with least length, bends and crossings.

Wires of two nets may cross at a right angle, and never share a point otherwise. Where a net finds no way
it is led first and all others anew.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from heapq import heappop, heappush

from derive.drawing.drawing import Point, Wire
from derive.drawing.grid import DIRECTIONS, Edge, Grid, Spot, edge_of
from derive.drawing.layout import Layout

_BEND, _CROSSING, _BRANCH = 18.0, 45.0, 3.0
_OFF_ROW = 1.5  # times the length of a level wire that is not on its node's row
_ATTEMPTS = 14
_FAR = 1e18


@dataclass(slots=True)
class _Nets:
    """Where wires run so far: the directions in which each net leaves each crossing, and its pins."""

    pins: dict[Spot, str]
    ways: dict[Spot, dict[str, set[Spot]]] = field(default_factory=dict)

    def run(self, net: str, here: Spot, way: Spot) -> None:
        there = (here[0] + way[0], here[1] + way[1])
        self.ways.setdefault(here, {}).setdefault(net, set()).add(way)
        self.ways.setdefault(there, {}).setdefault(net, set()).add((-way[0], -way[1]))

    def shorten(self, net: str, begin: Spot) -> None:
        """Take off the end of a level wire to the right of everything that is joined to it."""
        here = begin
        while (1, 0) in self.ways.get(here, {}).get(net, ()):
            here = (here[0] + 1, here[1])
        while here != begin and self.ways[here][net] == {(-1, 0)} and here not in self.pins:
            del self.ways[here][net]
            here = (here[0] - 1, here[1])
            self.ways[here][net].discard((1, 0))

    def strange(self, net: str, spot: Spot) -> bool:
        """Say whether another net is at a crossing."""
        here = self.ways.get(spot)
        return here is not None and any(other != net for other in here)

    def may_cross(self, net: str, spot: Spot, way: Spot) -> bool:
        """Say whether the other nets at a crossing run straight through, at a right angle to this way."""
        for other, ways in self.ways.get(spot, {}).items():
            if other == net:
                continue
            if len(ways) != 2 or any(abs(w[0]) == abs(way[0]) for w in ways):
                return False
        return True


def lead_wires(layout: Layout, grid: Grid) -> tuple[tuple[Wire, ...], tuple[Point, ...]] | None:
    """Give the wires, and the dots where they are joined; None where some net found no way."""
    terminals: dict[str, list[Spot]] = {}
    for _, _, net, at, _ in layout.pins:
        terminals.setdefault(net, []).append(grid.at(at))
    order = sorted(terminals, key=lambda net: (_is_rail(layout, net), _span(terminals[net]), net))
    order.sort(key=lambda net: not _is_rail(layout, net))
    pins = {spot: net for net, spots in terminals.items() for spot in spots}
    for _ in range(_ATTEMPTS):
        nets = _Nets(pins)
        failed = next((net for net in order if not _lead(net, terminals[net], nets, grid, layout)), None)
        if failed is None:
            return _drawn(nets, terminals, grid)
        order.remove(failed)
        order.insert(0, failed)
    return None


def _is_rail(layout: Layout, net: str) -> bool:
    return any(rail[0] == net for rail in layout.rails)


def _span(spots: list[Spot]) -> int:
    across, down = [i for i, _ in spots], [j for _, j in spots]
    return max(across) - min(across) + max(down) - min(down)


def _lead(net: str, terminals: list[Spot], nets: _Nets, grid: Grid, layout: Layout) -> bool:
    """Join all pins of a net, the nearest first; say whether all could be joined."""
    tree = {terminals[0]}
    for rail, y, left, right in layout.rails:
        if rail == net:
            here, last = grid.at((left, y)), grid.at((right, y))
            tree.add(here)
            while here != last:
                nets.run(net, here, (1, 0))
                here = (here[0] + 1, here[1])
                tree.add(here)
            if terminals[0] not in nets.ways:
                tree.discard(terminals[0])
    missing = set(terminals) - tree
    line = _main_line(net, terminals, layout, grid)
    if line and not tree & {spot for spot in nets.ways if net in nets.ways[spot]}:
        tree, missing = {line[0]}, set(terminals) - {line[0]}
    while missing:
        way = _search(net, tree, missing & set(line) or missing, nets, grid)
        if way is None:
            return False
        for here, step in way:
            nets.run(net, here, step)
            tree |= {here, (here[0] + step[0], here[1] + step[1])}
        missing -= tree
    for rail, y, left, _ in layout.rails:
        if rail == net:
            nets.shorten(net, grid.at((left, y)))
    return True


def _main_line(net: str, terminals: list[Spot], layout: Layout, grid: Grid) -> list[Spot]:
    """Give the pins that look sideways on the row that most of them share: they are joined first."""
    aside = [grid.at(at) for _, _, other, at, way in layout.pins if other == net and way[0]]
    rows = [j for _, j in aside]
    best = max(rows, key=lambda j: (rows.count(j), -j), default=None)
    return sorted(spot for spot in aside if spot[1] == best)


def _search(
    net: str, tree: set[Spot], goals: set[Spot], nets: _Nets, grid: Grid
) -> list[tuple[Spot, Spot]] | None:
    """Find the cheapest way from what is joined already to one more pin.

    What is missing to the nearest pin in a straight line is counted ahead, so that the search goes there.
    """
    ends = [grid.point(goal) for goal in sorted(goals)]
    ahead: dict[Spot, float] = {}
    queue: list[tuple[float, float, Spot, int]] = []
    best: dict[tuple[Spot, int], float] = {}
    came: dict[tuple[Spot, int], tuple[Spot, int]] = {}

    def push(cost: float, spot: Spot, facing: int) -> None:
        if spot not in ahead:
            x, y = grid.point(spot)
            ahead[spot] = min(abs(x - a) + abs(y - b) for a, b in ends)
        best[spot, facing] = cost
        heappush(queue, (cost + ahead[spot], cost, spot, facing))

    for spot in sorted(tree):
        if not nets.strange(net, spot):
            push(0.0, spot, -1)
    while queue:
        _, cost, spot, facing = heappop(queue)
        if cost > best[spot, facing]:
            continue
        if spot in goals:
            return _back(came, (spot, facing))
        bound = facing >= 0 and nets.strange(net, spot)
        for turn, there, length in grid.ways(spot):
            if there in tree or (
                facing >= 0 and (turn == (facing + 2) % 4 or (bound and turn != facing))
            ):
                continue
            step = _step(net, spot, facing, turn, there, length, nets, grid)
            if step is not None and cost + step < best.get((there, turn), _FAR):
                came[there, turn] = (spot, facing)
                push(cost + step, there, turn)
    return None


def _step(
    net: str, spot: Spot, facing: int, turn: int, there: Spot, length: float, nets: _Nets, grid: Grid
) -> float | None:
    """Give what one piece of line costs; None where it may not be taken."""
    way = DIRECTIONS[turn]
    cost = length
    if way[0] and grid.off_row(net, spot):
        cost *= _OFF_ROW
    if facing < 0:
        cost += _leaving(net, spot, way, nets, grid)
    elif turn != facing:
        cost += _BEND
    if there in nets.pins:
        if nets.pins[there] != net:
            return None
        if (-way[0], -way[1]) not in grid.straight[there]:
            cost += _BEND
    if there in nets.ways and nets.strange(net, there):
        if not nets.may_cross(net, there, way):
            return None
        cost += _CROSSING
    return cost


def _leaving(net: str, spot: Spot, way: Spot, nets: _Nets, grid: Grid) -> float:
    """Give what it costs to begin at a point of the net: a branch, or a bend at the end of a wire or symbol."""
    ways = nets.ways.get(spot, {}).get(net, set())
    if not ways:
        return 0.0 if way in grid.straight.get(spot, ()) else _BEND
    if len(ways) == 1 and spot not in nets.pins:
        return 0.0 if (-way[0], -way[1]) in ways else _BEND
    return _BRANCH


def _back(
    came: dict[tuple[Spot, int], tuple[Spot, int]], state: tuple[Spot, int]
) -> list[tuple[Spot, Spot]]:
    steps: list[tuple[Spot, Spot]] = []
    while state in came:
        steps.append((came[state][0], DIRECTIONS[state[1]]))
        state = came[state]
    return steps[::-1]


def _drawn(
    nets: _Nets, terminals: dict[str, list[Spot]], grid: Grid
) -> tuple[tuple[Wire, ...], tuple[Point, ...]]:
    """Join pieces of line to straight wires, and find the dots."""
    wires: list[Wire] = []
    dots: list[Point] = []
    edges: dict[tuple[str, bool], set[Edge]] = {}
    for spot in sorted(nets.ways):
        for net, ways in nets.ways[spot].items():
            for way in sorted(ways):
                edges.setdefault((net, bool(way[0])), set()).add(edge_of(spot, way))
            if len(ways) + terminals[net].count(spot) > 2:
                dots.append(grid.point(spot))
    for (_, level), found in edges.items():
        step = (1, 0) if level else (0, 1)
        begins = sorted(e for e in found if (e[0] - step[0], e[1] - step[1], level) not in found)
        for i, j, _ in begins:
            end = (i, j)
            while (*end, level) in found:
                end = (end[0] + step[0], end[1] + step[1])
            wires.append(Wire(grid.point((i, j)), grid.point(end)))
    for spots in terminals.values():
        for spot in dict.fromkeys(spots):
            if spots.count(spot) > 2 and spot not in nets.ways:
                dots.append(grid.point(spot))
    return tuple(wires), tuple(dots)
