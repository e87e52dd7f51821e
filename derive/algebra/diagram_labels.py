"""One graph's part of a state: which of the half-done vertices have been joined.

A state is a tuple of labels, one for each half-done vertex in the order in which these were begun:
0 where the vertex is joined to the reference, else the number of its block, blocks being numbered by
first appearance. A block is a column of the incidence matrix that remains, in that order; vertices not
yet begun come after them. All signs are those of that matrix's determinant.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from derive.algebra.diagram_terms import Pair, vertices

Labels = tuple[int, ...]
# The labels after a step and its sign; None where no product can come of it.
Move = tuple[Labels, int] | None


def joined(labels: Sequence[int], one: int, other: int) -> Move:
    """Take the edge from block `one` to block `other` (0 is the reference): they become one block."""
    if one == other:
        return None
    low, high = (one, other) if one < other else (other, one)
    # Adding column `high` to `low` leaves the edge's row with one entry, in column `high`.
    sign = 1 if (high == one) == bool(high & 1) else -1
    after = tuple(low if label == high else label - (label > high) for label in labels)
    return after, sign


def without(labels: Sequence[int], leaving: Sequence[int]) -> Move:
    """Leave out the vertices at some positions; a block that has no other can no longer be joined."""
    kept = [label for place, label in enumerate(labels) if place not in leaving]
    present = list(dict.fromkeys(label for label in kept if label))
    if len(present) != max(labels, default=0):
        return None
    renamed = {old: new for new, old in enumerate(present, 1)}
    renamed[0] = 0
    return tuple(renamed[label] for label in kept), _parity(present)


@dataclass(frozen=True, slots=True)
class Step:
    """What deciding one bundle does to one graph's labels: where its edge is, who comes and who goes."""

    one: int | None
    other: int | None
    coming: int
    leaving: tuple[int, ...]

    def moves(self, labels: Labels) -> tuple[Move, Move]:
        """Give the labels after the bundle is taken, and after it is left."""
        begun = max(labels, default=0)
        wide = (*labels, *range(begun + 1, begun + 1 + self.coming))
        one = 0 if self.one is None else wide[self.one]
        other = 0 if self.other is None else wide[self.other]
        taken = joined(wide, one, other)
        if not self.leaving:
            return taken, (wide, 1)
        if taken is not None:
            after = without(taken[0], self.leaving)
            taken = None if after is None else (after[0], after[1] * taken[1])
        return taken, without(wide, self.leaving)


def steps(edges: Sequence[Pair], special: Sequence[int]) -> list[Step]:
    """Follow the half-done vertices through a sequence of edges; `special` ones are so from the start."""
    last = {vertex: step for step, edge in enumerate(edges) for vertex in edge if vertex is not None}
    open_ones = [vertex for vertex in special if vertex in last]
    found = []
    for number, edge in enumerate(edges):
        new = [vertex for vertex in edge if vertex is not None and vertex not in open_ones]
        open_ones += new
        one, other = (None if vertex is None else open_ones.index(vertex) for vertex in edge)
        leaving = tuple(place for place, vertex in enumerate(open_ones) if last[vertex] == number)
        found.append(Step(one, other, len(new), leaving))
        open_ones = [vertex for vertex in open_ones if last[vertex] != number]
    return found


def order_sign(edges: Sequence[Pair], special: Sequence[int]) -> int:
    """Give the sign of putting the vertices into the order in which they are begun."""
    return _parity(list(dict.fromkeys([*special, *vertices(edges)])))


def begin(taken: Sequence[Pair], special: Sequence[int], used: frozenset[int]) -> Move:
    """Give the labels at the start, after some edges have been taken, and their sign."""
    place = {vertex: position for position, vertex in enumerate(special)}
    labels: Labels = tuple(range(1, len(special) + 1))
    total = 1
    for edge in taken:
        one, other = (0 if vertex is None else labels[place[vertex]] for vertex in edge)
        move = joined(labels, one, other)
        if move is None:
            return None
        labels, sign = move
        total *= sign
    move = without(labels, [position for vertex, position in place.items() if vertex not in used])
    return None if move is None else (move[0], move[1] * total)


def _parity(order: Sequence[int]) -> int:
    """Give 1 for an even permutation of rising numbers and −1 for an odd one."""
    sign = 1
    for place, value in enumerate(order):
        if sum(other > value for other in order[:place]) & 1:
            sign = -sign
    return sign
