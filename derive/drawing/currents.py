"""Which parts of a schematic stand upright: those that carry the direct current from supply to ground.

Every conductor is taken for the same resistance and the highest supply for one volt; what a current then
flows through stands upright, its higher end above. It is how a schematic is read: currents go down.
"""

from __future__ import annotations

from derive.drawing.scene import CONDUCTORS, TRANSISTORS, Item
from derive.topology.topology import GROUND

_LEAST = 1e-6  # of the current in one conductor between the supplies


def upright_parts(
    items: tuple[Item, ...], top: tuple[str, ...], bottom: tuple[str, ...]
) -> tuple[tuple[str, str], ...]:
    """Give (item, the node at its upper end) of the items with two pins that carry direct current.

    Given: the nodes of supplies, above and below ground.
    """
    if not top and not bottom:
        return ()
    held = {GROUND: 1.0 if not top else 0.0}
    held |= dict.fromkeys(top, 1.0) | dict.fromkeys(bottom, -1.0 if top else 0.0)
    paths = [(item, *_path(item)) for item in items if item.look in CONDUCTORS]
    level = _levels([(upper, lower) for _, upper, lower in paths], held)
    found: list[tuple[str, str]] = []
    for item, first, second in paths:
        drop = level.get(first, 0.0) - level.get(second, 0.0)
        if item.look not in TRANSISTORS and abs(drop) > _LEAST:
            found.append((item.name, first if drop > 0 else second))
    return tuple(found)


def _path(item: Item) -> tuple[str, str]:
    return (item.node(1), item.node(2)) if item.look in TRANSISTORS else (item.node(0), item.node(1))


def _levels(paths: list[tuple[str, str]], held: dict[str, float]) -> dict[str, float]:
    """Solve the nodes' voltages by elimination; nodes that nothing holds are left out."""
    reached = set(held)
    for _ in paths:
        reached |= {node for path in paths if reached & set(path) for node in path}
    free = [n for n in dict.fromkeys(node for path in paths for node in path) if n in reached - set(held)]
    rows = {node: dict.fromkeys([*free, ""], 0.0) for node in free}
    for here, there in [*paths, *((b, a) for a, b in paths)]:
        if here not in rows or here == there:
            continue
        rows[here][here] += 1.0
        if there in held:
            rows[here][""] += held[there]
        else:
            rows[here][there] -= 1.0
    for node in free:
        pivot = rows[node]
        scale = pivot[node]
        for key in pivot:
            pivot[key] /= scale
        for other in free:
            factor = rows[other][node]
            if other != node and factor:
                for key in pivot:
                    rows[other][key] -= factor * pivot[key]
    return held | {node: rows[node][""] for node in free}
