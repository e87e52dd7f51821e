"""How each item stands and on which row each node lies: currents go down, signals go to the right.

A row is half of a symbol's length. Demands that contradict each other are given up one by one, the
later ones first; what was given up costs a bend in a wire, never a wrong connection.
"""

from __future__ import annotations

from dataclasses import dataclass

from derive.drawing.paths import main_path
from derive.drawing.scene import TRANSISTORS, Item, Scene
from derive.topology.topology import GROUND

_LOWEST = 2  # the row of a node that nothing lifts


@dataclass(frozen=True, slots=True)
class Stance:
    """What is known before anything has a column.

    `upper` holds the place of the pin at the upper end of each item of two pins that stands; `rows` the row
    of each node, and of the middle of each device by `middle_of`; `path` the nodes from where the signal
    enters to where it leaves; `plus_above` the op amps that have their plus input above.
    """

    upper: dict[str, int]
    rows: dict[str, int]
    path: tuple[str, ...]
    plus_above: frozenset[str]


def middle_of(item: Item) -> str:
    """Give the name under which a device's own row is kept; no node is called so."""
    return f"{item.name}!"


class _Rows:
    """Demands "this row is at least so much above that one", kept only while all can be met."""

    def __init__(self, scene: Scene) -> None:
        self.fixed = {GROUND, *scene.bottom}
        self.demands: list[tuple[str, str, int]] = []
        self.names = list(dict.fromkeys(node for item in scene.items for node in item.nodes))
        self.names += [middle_of(i) for i in scene.items if i.look in TRANSISTORS or i.look == "opamp"]
        self.floor = {name: 0 if name in self.fixed else _LOWEST for name in self.names}
        self.rows = self._solve() or {}

    def add(self, *demands: tuple[str, str, int]) -> bool:
        """Take the demands on together if they can be met; say whether they were."""
        if any(upper in self.fixed and step > 0 for upper, _, step in demands):
            return False
        before = len(self.demands)
        self.demands += [d for d in demands if d[0] not in self.fixed]
        rows = self._solve()
        if rows is None:
            del self.demands[before:]
            return False
        self.rows = rows
        return True

    def _solve(self) -> dict[str, int] | None:
        rows = dict(self.floor)
        for _ in range(len(rows) + 1):
            changed = False
            for upper, lower, step in self.demands:
                if rows[lower] + step > rows[upper]:
                    rows[upper] = rows[lower] + step
                    changed = True
            if not changed:
                return rows
        return None


def find_stance(scene: Scene) -> Stance:
    """Give how the items of a scene stand."""
    told = dict(reversed(scene.upright))
    path = main_path(scene, told)
    plus_above = frozenset(
        i.name for i in scene.items if i.look == "opamp" and _plus_above(i, scene, path)
    )
    told = {**_dividers(scene, plus_above), **told}
    rows = _Rows(scene)
    _stand_devices(scene, rows)
    upper = _stand_parts(scene, rows, told)
    _lie_along(scene, rows, upper, path, plus_above)
    return Stance(upper, rows.rows, path, plus_above)


def _plus_above(item: Item, scene: Scene, path: tuple[str, ...]) -> bool:
    plus, minus, output = item.nodes[:3]
    if plus not in path or minus in path[: path.index(plus)] or minus == output:
        return False
    return minus not in path or path.index(minus) > path.index(plus)


def _dividers(scene: Scene, plus_above: frozenset[str]) -> dict[str, str]:
    """Stand the feedback of a non-inverting op amp upright, over what leads from there to ground."""
    found: dict[str, str] = {}
    for amp in scene.items:
        if amp.name not in plus_above:
            continue
        _, minus, output = amp.nodes[:3]
        grounded = any(set(i.nodes) == {minus, GROUND} for i in scene.items if len(i.pins) == 2)
        beside = [i.name for i in scene.items if len(i.pins) == 2 and set(i.nodes) == {minus, output}]
        if grounded:
            found |= dict.fromkeys(beside[:1], output)
    return found


def _stand_devices(scene: Scene, rows: _Rows) -> None:
    for item in scene.items:
        if item.look in TRANSISTORS:
            middle = middle_of(item)
            rows.add((item.node(1), middle, 1))
            rows.add((middle, item.node(2), 1))


def _stand_parts(scene: Scene, rows: _Rows, told: dict[str, str]) -> dict[str, int]:
    """Decide which items of two pins stand; what leads to a supply or to ground always does."""
    upper: dict[str, int] = {}
    order = sorted(scene.items, key=lambda i: not set(i.nodes) & {GROUND, *scene.rails})
    for item in order:
        if len(item.pins) != 2 or item.name in scene.level:
            continue
        first, second = item.nodes
        place = _upper_end(item, scene, told)
        if place is None:
            continue
        high, low = (first, second) if place == 0 else (second, first)
        if rows.add((high, low, 2)) or low in {GROUND, *scene.rails} or high in scene.rails:
            upper[item.name] = place
    return upper


def _upper_end(item: Item, scene: Scene, told: dict[str, str]) -> int | None:
    first, second = item.nodes
    height = {GROUND: -1} | {node: 2 + k for k, node in enumerate(scene.top)}
    height |= {node: -2 - k for k, node in enumerate(scene.bottom)}
    if first in height or second in height:
        return 0 if height.get(first, 0) >= height.get(second, 0) else 1
    if item.name in told and told[item.name] in item.nodes:
        return item.nodes.index(told[item.name])
    return None


def _lie_along(
    scene: Scene, rows: _Rows, upper: dict[str, int], path: tuple[str, ...], plus_above: frozenset[str]
) -> None:
    """Keep nodes on one row where a lying item or a device's control joins them, the main line first."""

    def late(item: Item) -> int:
        return -sum(node in path for node in item.nodes)

    for item in scene.items:
        if item.look in TRANSISTORS:
            _level(rows, middle_of(item), item.node(0), 0)
    amps = [item for item in scene.items if item.look == "opamp"]
    for item in sorted(amps, key=late):
        middle = middle_of(item)
        turn = 1 if item.name in plus_above else -1
        inputs = [(item.node(0), turn), (item.node(1), -turn)]
        for node, step in sorted(inputs, key=lambda pair: pair[0] not in path):
            _level(rows, node, middle, step)
        _level(rows, middle, item.node(2), 0)
    for item in sorted(scene.items, key=late):
        if len(item.pins) == 2 and item.name not in upper:
            _level(rows, item.node(0), item.node(1), 0)


def _level(rows: _Rows, node: str, other: str, step: int) -> None:
    """Ask for the row of `node` to be just so much above the other's."""
    if not {node, other} & rows.fixed:
        rows.add((node, other, step), (other, node, -step))
