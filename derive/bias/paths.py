"""The DC circuit as a graph: what joins nodes, by which way, and what a set of joins holds together."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass

from derive.topology.topology import GROUND

Pair = tuple[str, str]


@dataclass(frozen=True, slots=True)
class Join:
    """Two nodes between which an item lets a current through."""

    item: str
    ends: Pair
    is_control: bool = False


def reached(start: str, joins: Iterable[Join]) -> frozenset[str]:
    """Give every node that the joins lead to from a node, itself among them."""
    return frozenset(_from(start, tuple(joins)))


def way(start: str, end: str, joins: Iterable[Join]) -> tuple[str, ...]:
    """Give the items on a shortest way from one node to another; () where there is none."""
    before = _from(start, tuple(joins))
    items: list[str] = []
    node = end
    while (step := before.get(node)) is not None:
        node, item = step
        items.append(item)
    return tuple(reversed(items))


def leaders(nodes: Sequence[str], joins: Sequence[Join]) -> dict[str, str]:
    """Give for each node the first node of its group, ground before all others."""
    found: dict[str, str] = {}
    for start in (GROUND, *nodes):
        if start not in found:
            found |= dict.fromkeys(_from(start, joins), start)
    return found


def _from(start: str, joins: Sequence[Join]) -> dict[str, tuple[str, str] | None]:
    """Give every node reached with the (node, item) by which it was reached first."""
    near: dict[str, list[tuple[str, str]]] = {}
    for join in joins:
        one, other = join.ends
        near.setdefault(one, []).append((other, join.item))
        near.setdefault(other, []).append((one, join.item))
    before: dict[str, tuple[str, str] | None] = {start: None}
    waiting = [start]
    while waiting:
        node = waiting.pop(0)
        for other, item in near.get(node, ()):
            if other not in before:
                before[other] = (node, item)
                waiting.append(other)
    return before
