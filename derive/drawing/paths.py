"""The main line of a drawing: the longest way of the signal from where it enters to where it leaves."""

from __future__ import annotations

from derive.drawing.scene import TRANSISTORS, Item, Scene
from derive.topology.topology import GROUND

Links = dict[str, list[tuple[str, str]]]
_STEPS = 4000  # of the search; a count and no clock, so that the same circuit is drawn the same


def main_path(scene: Scene, upright: dict[str, str]) -> tuple[str, ...]:
    """Give the nodes of the main line from left to right; a told order goes before all else.

    Given: `upright` holds the items that stand: the main line goes along those that lie, if it can.
    """
    nodes = signal_nodes(scene)
    if not nodes:
        return ()
    links = links_of(scene, upright, lying_only=True)
    start = next((node for node in scene.starts if node in nodes), nodes[0])
    ends = [node for node in scene.ends if node in nodes and node != start]
    for end in ends:
        for known in (links, links_of(scene, upright, lying_only=False)):
            found = _longest(known, start, end)
            if found:
                return _in_order(found, scene.order)
    return _in_order(max(_everywhere(links, start, nodes), key=len), scene.order)


def shortest_path(scene: Scene) -> tuple[str, ...]:
    """Give the nodes of the shortest way from where a signal enters to the first place where it leaves."""
    links = links_of(scene, {}, lying_only=False)
    known = signal_nodes(scene)
    came = {node: "" for node in scene.starts[:1] if node in known}
    queue = list(came)
    for node in queue:
        for there, _ in links.get(node, []):
            if there not in came:
                came[there] = node
                queue.append(there)
    path = [next((end for end in scene.ends if end in came), "")]
    while came.get(path[-1]):
        path.append(came[path[-1]])
    return tuple(reversed(path)) if path[0] else ()


def signal_nodes(scene: Scene) -> list[str]:
    """Give every node but ground and supplies, in the order of the items."""
    rails = {GROUND, *scene.rails}
    return list(dict.fromkeys(n for item in scene.items for n in item.nodes if n not in rails))


def links_of(scene: Scene, upright: dict[str, str], *, lying_only: bool) -> Links:
    """Give the ways of a signal: from each node (the next node, the item that leads there)."""
    rails = {GROUND, *scene.rails}
    follows = {sense.source: sense.between or () for sense in scene.senses}
    links: Links = {}
    for item in scene.items:
        for here, there in _ways(item, follows.get(item.name, ()), lying_only and item.name in upright):
            if here not in rails and there not in rails and here != there:
                links.setdefault(here, []).append((there, item.name))
    return links


def _ways(item: Item, senses: tuple[str, ...], stands: bool) -> list[tuple[str, str]]:
    if item.look in TRANSISTORS:
        control, upper, lower = item.nodes[:3]
        through = (lower, upper) if item.look in _N_TYPES else (upper, lower)
        return [(control, upper), (control, lower), through]
    if item.look == "opamp":
        plus, minus, output = item.nodes
        return [(plus, output), (minus, output)]
    if len(item.pins) != 2:
        return []
    first, second = item.nodes
    ways = [(sense, end) for sense in senses for end in (first, second)]
    if item.look.startswith("controlled") or stands:
        return ways
    return [(first, second), (second, first), *ways]


_N_TYPES = frozenset(["npn", "n-channel mosfet", "n-channel jfet"])


def _longest(links: Links, start: str, end: str) -> tuple[str, ...]:
    best: tuple[str, ...] = ()
    steps = 0
    stack: list[tuple[tuple[str, ...], frozenset[str]]] = [((start,), frozenset())]
    while stack and steps < _STEPS:
        steps += 1
        path, used = stack.pop()
        if path[-1] == end:
            best = path if len(path) > len(best) else best
            continue
        for there, item in reversed(links.get(path[-1], [])):
            if there not in path and item not in used:
                stack.append(((*path, there), used | {item}))
    return best


def _everywhere(links: Links, start: str, nodes: list[str]) -> list[tuple[str, ...]]:
    return [(start,), *(_longest(links, start, node) for node in nodes if node != start)]


def _in_order(path: tuple[str, ...], order: tuple[str, ...]) -> tuple[str, ...]:
    """Give the path in the order that was told, with the nodes told beside it where they were told."""
    if not order:
        return path
    rest = [node for node in path if node not in order]
    told = list(order)
    for node in rest:
        before = [told.index(other) for other in path[: path.index(node)] if other in told]
        told.insert(max(before) + 1 if before else 0, node)
    return tuple(told)
