"""The lines along which wires may run, and which pieces of them symbols and words block."""

from __future__ import annotations

from bisect import bisect_left, bisect_right
from collections.abc import Iterator
from dataclasses import dataclass, field

from derive.drawing.drawing import Box, Point
from derive.drawing.layout import Layout

Spot = tuple[int, int]
Edge = tuple[int, int, bool]  # from (i, j) to the right, or downwards
DIRECTIONS: tuple[Spot, ...] = ((1, 0), (0, 1), (-1, 0), (0, -1))
CLEAR = 4.0  # of a symbol
WORDS_CLEAR = 1.5


def edge_of(here: Spot, way: Spot) -> Edge:
    """Give the piece of line from a crossing in a direction."""
    i, j = here
    if way[0]:
        return (i if way[0] > 0 else i - 1, j, True)
    return (i, j if way[1] > 0 else j - 1, False)


@dataclass(slots=True)
class Grid:
    """The crossings of all lines; `owners` tells which boxes block a piece of line.

    `straight` holds the directions in which a wire leaves the pins at a crossing without a bend.
    """

    xs: tuple[float, ...]
    ys: tuple[float, ...]
    heights: dict[str, float]
    owners: dict[Edge, set[int]] = field(default_factory=dict)
    straight: dict[Spot, set[Spot]] = field(default_factory=dict)
    known: dict[Spot, list[tuple[int, Spot, float]]] = field(default_factory=dict)

    def at(self, point: Point) -> Spot:
        """Give the crossing at a point that lies on one."""
        return bisect_left(self.xs, point[0] - 1e-4), bisect_left(self.ys, point[1] - 1e-4)

    def point(self, spot: Spot) -> Point:
        """Give the point of a crossing."""
        return self.xs[spot[0]], self.ys[spot[1]]

    def inside(self, spot: Spot) -> bool:
        """Say whether there is such a crossing."""
        return 0 <= spot[0] < len(self.xs) and 0 <= spot[1] < len(self.ys)

    def ways(self, spot: Spot) -> list[tuple[int, Spot, float]]:
        """Give (direction, next crossing, length) of each open piece of line at a crossing."""
        if spot not in self.known:
            made = []
            for turn, way in enumerate(DIRECTIONS):
                there = (spot[0] + way[0], spot[1] + way[1])
                if self.inside(there) and not self.owners.get(edge_of(spot, way)):
                    (a, b), (c, d) = self.point(spot), self.point(there)
                    made.append((turn, there, abs(a - c) + abs(b - d)))
            self.known[spot] = made
        return self.known[spot]

    def off_row(self, net: str, spot: Spot) -> bool:
        """Say whether a crossing is off the row on which a net's wire lies if it can."""
        return net in self.heights and abs(self.heights[net] - self.ys[spot[1]]) > 1e-4

    def block(self, box: Box, owner: int) -> None:
        """Close every piece of line that enters a box."""
        for edge in self._within(box):
            self.owners.setdefault(edge, set()).add(owner)

    def _within(self, box: Box) -> Iterator[Edge]:
        xs, ys = self.xs, self.ys
        for j in range(bisect_right(ys, box.top), bisect_left(ys, box.bottom)):
            for i in range(
                max(bisect_right(xs, box.left) - 1, 0), min(bisect_left(xs, box.right), len(xs) - 1)
            ):
                yield (i, j, True)
        for i in range(bisect_right(xs, box.left), bisect_left(xs, box.right)):
            for j in range(
                max(bisect_right(ys, box.top) - 1, 0), min(bisect_left(ys, box.bottom), len(ys) - 1)
            ):
                yield (i, j, False)

    def open_pin(self, pin: Point, way: Point, box: Box, owner: int) -> None:
        """Let wires leave a pin: straight on, and to both sides along the end of its own symbol."""
        spot = self.at(pin)
        self.straight.setdefault(spot, set()).add((int(way[0]), int(way[1])))
        for direction in DIRECTIONS:
            if direction[0] == -way[0] and direction[1] == -way[1]:
                continue
            here = spot
            while self.inside(here) and _holds(box, self.point(here)):
                self.owners.get(edge_of(here, direction), set()).discard(owner)
                here = (here[0] + direction[0], here[1] + direction[1])


def _holds(box: Box, point: Point) -> bool:
    return box.left < point[0] < box.right and box.top < point[1] < box.bottom


def grid_of(layout: Layout) -> Grid:
    """Give the grid of a layout, with everything blocked that wires have to keep off."""
    grid = Grid(
        layout.across, tuple(sorted({*layout.down, *(rail[1] for rail in layout.rails)})), layout.heights
    )
    boxes: dict[str, tuple[int, Box]] = {}
    for owner, symbol in enumerate(layout.symbols):
        boxes[symbol.name] = (owner, symbol.box.grown(CLEAR))
        grid.block(symbol.box.grown(CLEAR), owner)
    for owner, label in enumerate(layout.labels, len(layout.symbols)):
        grid.block(label.box.grown(WORDS_CLEAR), owner)
    for item, _, _, at, way in layout.pins:
        owner, box = boxes[item]
        grid.open_pin(at, way, box, owner)
    return grid
