"""Gives every item its column and row: node by node along the main line, then what lies beside it.

Columns are filled from the left; an item takes the first column where all the rows that it needs are
free, so that no two items can overlap.
"""

from __future__ import annotations

from dataclasses import dataclass, field

from derive.drawing.columns import LYING, Columns
from derive.drawing.scene import TRANSISTORS, Item, Scene
from derive.drawing.spots import GROUND_ROWS, SKY, Spot, hung_level, middle_row
from derive.drawing.stance import Stance, middle_of
from derive.drawing.symbols import Pose
from derive.topology.topology import GROUND

_AMP_ROWS = 1.6
_LONELY = 2  # the row of an item that lies by itself
_NEAR = 3  # columns that an item may go away from its node to reach the ground line


@dataclass(slots=True)
class Placer:
    """Items as they get their places; `start` and `last` hold the first and last column of each node."""

    scene: Scene
    stance: Stance
    spots: dict[str, Spot] = field(default_factory=dict)
    columns: Columns = field(default_factory=Columns)
    start: dict[str, int] = field(default_factory=dict)
    last: dict[str, int] = field(default_factory=dict)
    decks: set[str] = field(default_factory=set)

    def run(self) -> dict[str, Spot]:
        """Place everything."""
        path = self.stance.path
        for place, node in enumerate(path):
            if node not in self.start:
                self._visit(node, self._free_from(node, path[place - 1]) if place else 0)
            if place + 1 < len(path):
                self._link(node, path[place + 1])
        while self._beside():
            pass
        while self._waiting():
            self._anywhere(self._waiting()[0])
            while self._beside():
                pass
        return hung_level(self.scene, self.stance, self.spots)

    def _waiting(self) -> list[Item]:
        return [i for i in self.scene.items if i.name not in self.spots and i.look != "supply"]

    def _is_rail(self, node: str) -> bool:
        return node == GROUND or node in self.scene.rails

    def _row(self, node: str) -> float:
        return float(self.stance.rows[node])

    def _free_from(self, node: str, before: str) -> int:
        """Give the first column to the right of the node before, and of all that shares the node's row."""
        return max(self.columns.last_on(self._row(node)), self.last[before]) + 1

    def _take(self, item: Item, column: int, span: tuple[float, float], ends: tuple[str, str]) -> None:
        self.columns.take(column, *span, ends)
        for node in item.nodes:
            if not self._is_rail(node):
                self.last[node] = max(self.last.get(node, 0), column)

    def _visit(self, node: str, column: int) -> None:
        """Begin a node at a column, and put in place all that hangs on it."""
        if node in self.start or self._is_rail(node):
            return
        self.start[node] = column
        self.last[node] = max(self.last.get(node, 0), column)
        mine = [item for item in self._waiting() if node in item.nodes]
        later = [item.name for item in mine if self._comes_later(item, node)]
        for item in sorted(mine, key=lambda item: self._rank(item, node)):
            if item.name in self.stance.upper:
                if item.name not in later and not (later and self._rises(item, node)):
                    self._stand(item, node)
            elif item.look in TRANSISTORS and node in item.nodes[1:3]:
                self._stack(item, node)

    def _rises(self, item: Item, node: str) -> bool:
        """Say whether an item leads up from a node to another that is no supply's."""
        above = item.node(self.stance.upper[item.name])
        return above != node and not self._is_rail(above)

    def _comes_later(self, item: Item, node: str) -> bool:
        """Say whether an item leads to a node further along the main line, at which it is to stand."""
        if item.name not in self.stance.upper:
            return False
        path = self.stance.path
        (other,) = set(item.nodes) - {node}
        if other not in path or other in self.start:
            return False
        return node not in path or path.index(other) > path.index(node)

    def _rank(self, item: Item, node: str) -> int:
        """Give the order in which items stand beside each other at a node."""
        if item.look.endswith("drive"):
            return 0
        if item.look in TRANSISTORS:
            return 4
        if item.look.startswith("controlled"):
            return 1
        if any(map(self._is_rail, item.nodes)):
            return 2
        others = set(item.nodes) - {node}
        leads_on = any(
            i.name not in self.stance.upper and len(i.pins) == 2 and others & set(i.nodes)
            for i in self._waiting()
        )
        return 5 if leads_on else 3

    def _stand(self, item: Item, node: str) -> None:
        """Place an item that stands, at the first free column from the node's start."""
        if item.name in self.spots:
            return
        place = self.stance.upper[item.name]
        high, low = item.node(place), item.node(1 - place)
        top = SKY if high in self.scene.top else self._row(high) if high != GROUND else 0.0
        bottom = 0.0 if self._is_rail(low) else self._row(low)
        if low in self.scene.bottom:
            bottom = -SKY
        if high == GROUND or top - bottom < 2:
            top = bottom + 2 if top < SKY else top
        first = self.start[node]
        column = self.columns.first_free(first, bottom, top, (low, high))
        grounded = 0.0 if low == GROUND else None
        local = top - 2 - GROUND_ROWS
        if low == GROUND and top < SKY and (column > first + _NEAR or self.decks & set(item.nodes)):
            column = self.columns.first_free(first, local, top, (low, high))
            bottom, grounded = local, top - 2
        turns = 1 if place == 0 else 3
        self.spots[item.name] = Spot(
            column, self._middle(item, bottom, top, grounded), Pose(turns), grounded
        )
        self._take(item, column, (bottom, top), (low, high))
        for other in self._waiting():
            if set(other.nodes) == {low, high} and other.name in self.stance.upper:
                self._stand(other, node)
        for other_node in (low, high):
            self._visit(other_node, column)

    def _middle(self, item: Item, bottom: float, top: float, grounded: float | None) -> float:
        """Give the row of the middle of an item that stands, off the rows that wires are still to cross."""
        open_ones = {node for other in self._waiting() for node in other.nodes} - set(item.nodes)
        crossed = {
            float(row): 3 if node in self.stance.path else 1
            for node, row in self.stance.rows.items()
            if node in open_ones and row > 0
        }
        return middle_row(item, bottom, top, grounded, crossed)

    def _stack(self, item: Item, node: str) -> None:
        """Put a transistor over or under the node, where its current goes on."""
        if item.name in self.spots:
            return
        middle = self._row(middle_of(item))
        column = self.columns.first_free(
            self.start[node], middle - 1, middle + 1, (item.node(2), item.node(1))
        )
        self._put_device(item, column, middle)

    def _put_device(self, item: Item, column: int, middle: float) -> None:
        self.spots[item.name] = Spot(column, middle, Pose())
        upper, lower = item.node(1), item.node(2)
        low = middle - 1 - (GROUND_ROWS if lower == GROUND else 0)
        high = SKY if upper in self.scene.top else middle + 1
        self._take(item, column, (low, high), (lower, upper))
        for node in (lower, upper):
            self._visit(node, column)
        if not self._is_rail(item.node(0)):
            self._visit(item.node(0), column + 1)

    def _link(self, node: str, following: str) -> None:
        """Place what leads along the main line from one node to the next."""
        for item in self._waiting():
            if not {node, following} <= set(item.nodes) or item.name in self.spots:
                continue
            if len(item.pins) == 2 and item.name not in self.stance.upper:
                self._lie(item, self._row(node), self.last[node] + 1)
                self._visit(following, self.spots[item.name].column + 1)
                return
            if len(item.pins) > 2:
                self._device(item, node)
                return

    def _lie(self, item: Item, row: float, first: int) -> None:
        ends = (item.node(0), item.node(0))
        column = self.columns.first_free(first, row - LYING, row + LYING, ends)
        self._put_lying(item, row, column)

    def _put_lying(self, item: Item, row: float, column: int) -> None:
        begins = [self.start.get(node, 999) for node in item.nodes]
        turns = 0 if begins[0] <= begins[1] else 2
        self.spots[item.name] = Spot(column, row, Pose(turns))
        self._take(item, column, (row - LYING, row + LYING), ("", ""))

    def _device(self, item: Item, node: str) -> None:
        """Place a device to the right of a node that it follows."""
        middle = self._row(middle_of(item))
        reach = _AMP_ROWS if item.look == "opamp" else 1
        first = max((self.last[n] for n in item.nodes if n in self.last), default=0) + 1
        if item.look in TRANSISTORS:
            first = self.last[node] + 1
            self._put_device(item, self.columns.first_free(first, middle - 1, middle + 1), middle)
            return
        column = self.columns.first_free(first, middle - reach, middle + reach)
        above = item.name in self.stance.plus_above
        self.spots[item.name] = Spot(column, middle, Pose(plus_above=above))
        self._take(item, column, (middle - reach, middle + reach), ("", ""))
        self._visit(item.node(2), column + 1)
        for other in item.nodes[:2]:
            self._visit(other, column + 1)

    def _beside(self) -> bool:
        """Place one more item that touches what is placed already; say whether there was one."""
        known = [i for i in self._waiting() if any(node in self.start for node in i.nodes)]
        between = [i for i in known if all(n in self.start or self._is_rail(n) for n in i.nodes)]
        if between:
            short = min(between, key=self._reach)
            self._bridge(short) if len(short.pins) == 2 else self._device(short, self._seen(short))
            return True
        if not known:
            return False
        standing = [item for item in known if item.name in self.stance.upper]
        if standing:
            ranked = min(standing, key=lambda item: self._rank(item, self._seen(item)))
            self._stand(ranked, self._seen(ranked))
            return True
        item = known[0]
        node = self._seen(item)
        if len(item.pins) > 2:
            self._device(item, node)
            return True
        (other,) = (n for n in item.nodes if n != node)
        self._branch(item, node, other)
        return True

    def _seen(self, item: Item) -> str:
        return next(node for node in item.nodes if node in self.start)

    def _reach(self, item: Item) -> int:
        columns = [self.start[node] for node in item.nodes if node in self.start]
        return max(columns) - min(columns)

    def _branch(self, item: Item, node: str, other: str) -> None:
        """Lead a lying item off the main line to a node of its own, on the first deck with room for it."""
        row = self._row(node)
        hangs = any(i.name in self.stance.upper and other in i.nodes for i in self._waiting())
        step = 4 if hangs else 2
        begin = self.start[node] + 1
        end = max(self.last[node] + 1, self.columns.end) + 1
        places = [
            (deck - row + column - begin + 3 * self.columns.blocked(deck, begin, column), deck, column)
            for deck in (row, *(row + step + 2 * k for k in range(6)))
            for column in range(begin, end)
            if self.columns.lies_free(column, deck) and (deck != row or column > self.last[node])
        ]
        _, deck, column = min(places)
        self._put_lying(item, deck, column)
        if deck != row:
            self.decks.add(other)
        self.stance.rows[other] = int(deck)
        self._visit(other, column + 1)

    def _bridge(self, item: Item) -> None:
        """Put an item over the span between its two nodes, as low and as near the middle as there is room."""
        if item.name in self.stance.upper:
            self._stand(item, self._seen(item))
            return
        ends = sorted((n for n in item.nodes if n in self.start), key=lambda n: self.start[n])
        left, right = self.last[ends[0]], self.start[ends[-1]]
        first, end = self.start[ends[0]], max(self.last[n] for n in ends)
        middle = (first + end) / 2 if left >= right else (left + right) / 2
        rows = [self._row(n) for n in ends]
        beside = self._parallel(item)
        middle = middle if beside is None else beside.column
        lowest = max(rows) if beside is None else max(*rows, beside.row + 2)
        places = [
            (
                (row - lowest) * 1.5 + abs(column - middle) + 4 * (not self.columns.is_used(column)),
                row,
                column,
            )
            for row in (lowest + k for k in range(14))
            for column in range(first, end + 2)
            if self.columns.lies_free(column, row) and (row not in rows or left < column <= right)
        ]
        _, row, column = min(places)
        self._put_lying(item, row, column)

    def _parallel(self, item: Item) -> Spot | None:
        """Give the place of the highest item that lies between the same two nodes already."""
        lying = [
            self.spots[other.name]
            for other in self.scene.items
            if other.name in self.spots
            and other.name not in self.stance.upper
            and len(other.pins) == 2
            and set(other.nodes) == set(item.nodes)
        ]
        return max(lying, key=lambda spot: spot.row, default=None)

    def _anywhere(self, item: Item) -> None:
        """Begin anew to the right of everything, with an item that touches nothing placed so far."""
        column = self.columns.end
        free = [node for node in item.nodes if not self._is_rail(node)]
        for node in free:
            self._visit(node, column)
        if item.name in self.spots:
            return
        if item.name in self.stance.upper:
            self.start[item.node(0)] = column
            self._stand(item, item.node(0))
            del self.start[item.node(0)]
        elif len(item.pins) == 2:
            self._put_lying(item, float(_LONELY), column)
        else:
            self.last |= {node: self.last.get(node, column) for node in item.nodes}
            self._device(item, item.node(0))
