"""The order in which bundles are decided: such that few vertices are half done at any time.

A vertex is half done from the first bundle that touches it to the last; the size of a diagram grows
exponentially with their number, so a good order is everything. Vertices are finished one after the other;
of all sets of finished vertices the cheapest few are kept and carried on (a beam search). The choice of
next vertex by the least growth alone gave diagrams ten times as large for matrices of 26 rows.
"""

from __future__ import annotations

from collections.abc import Sequence

from derive.algebra.diagram_terms import Bundle, Pair, vertices

# Wider beams found orders less than a tenth better, and took longer than that saves.
WIDTH = 12
# In larger graphs only what is near may come next, or the search would take longer than the rest.
ALL_CANDIDATES = 40
# What one more half-done vertex, in both graphs or in one, multiplies the number of states by, about.
GROWTH, GROWTH_OF_ONE = 3.0, 1.7
Special = tuple[Sequence[int], Sequence[int]]


def ordered(bundles: Sequence[Bundle], size: int, special: Special) -> list[Bundle]:
    """Put bundles into an order that keeps the diagram small; the same for the same input.

    Given: `special`, the vertices of the row and of the column graph that are half done from the start.
    """
    touched = [vertices((item.rows, item.columns)) for item in bundles]
    neighbours, degrees = [0] * size, [0] * size
    for found in touched:
        mask = sum(1 << vertex for vertex in found)
        for vertex in found:
            neighbours[vertex] |= mask
            degrees[vertex] += 1
    begun = sum(1 << vertex for vertex in {*special[0], *special[1]})
    sequences = [_sequence(neighbours, begun, weights) for weights in ([1] * size, degrees)]
    orders = [_by_vertex(bundles, touched, sequence) for sequence in sequences]
    return min(orders, key=lambda order: _cost(order, special))


def _sequence(neighbours: Sequence[int], begun: int, weights: Sequence[int]) -> list[int]:
    """Order the vertices such that the sum of weight times the number of states is small."""
    growth = [GROWTH**count for count in range(len(neighbours) + 1)]
    # By the set of finished vertices: the cost so far, and the half-done vertices.
    beam: dict[int, tuple[float, int]] = {0: (0.0, begun)}
    before: list[dict[int, int]] = []
    for _ in neighbours:
        found: dict[int, tuple[float, int]] = {}
        chosen: dict[int, int] = {}
        for done, (cost, half_done) in beam.items():
            for vertex in _candidates(neighbours, done, half_done):
                finished = done | 1 << vertex
                wide = (half_done | neighbours[vertex] | 1 << vertex) & ~done
                total = cost + weights[vertex] * growth[wide.bit_count()]
                known = found.get(finished)
                if known is None or total < known[0]:
                    found[finished] = total, wide & ~finished
                    chosen[finished] = vertex
        kept = sorted(found, key=lambda finished: (found[finished][0], finished))[:WIDTH]
        beam = {finished: found[finished] for finished in kept}
        before.append(chosen)
    finished = (1 << len(neighbours)) - 1
    sequence = []
    for chosen in reversed(before):
        sequence.append(chosen[finished])
        finished ^= 1 << chosen[finished]
    return sequence[::-1]


def _candidates(neighbours: Sequence[int], done: int, half_done: int) -> list[int]:
    """Give the vertices that may come next; in a large graph those half done and their neighbours."""
    if len(neighbours) <= ALL_CANDIDATES:
        return [vertex for vertex in range(len(neighbours)) if not done >> vertex & 1]
    near = half_done
    rest = half_done
    while rest:
        vertex = (rest & -rest).bit_length() - 1
        rest &= rest - 1
        near |= neighbours[vertex]
    near &= ~done
    return [vertex for vertex in range(len(neighbours)) if (near or ~done) >> vertex & 1]


def _by_vertex(
    bundles: Sequence[Bundle], touched: Sequence[Sequence[int]], sequence: Sequence[int]
) -> list[Bundle]:
    """Order the bundles by the first of their vertices, then by the last of them."""
    place = {vertex: position for position, vertex in enumerate(sequence)}
    keys = [sorted(place[vertex] for vertex in found) for found in touched]
    order = sorted(range(len(bundles)), key=lambda k: (keys[k][0], keys[k][::-1], k))
    return [bundles[k] for k in order]


def _cost(bundles: Sequence[Bundle], special: Special) -> float:
    """Estimate the size of the diagram from the number of vertices half done at each step."""
    counts = [0] * len(bundles)
    for side in (0, 1):
        edges: list[Pair] = [(item.columns if side else item.rows) for item in bundles]
        first: dict[int, int] = dict.fromkeys(special[side], 0)
        last: dict[int, int] = {}
        for step, edge in enumerate(edges):
            for vertex in edge:
                if vertex is not None:
                    first.setdefault(vertex, step)
                    last[vertex] = step
        for vertex, end in last.items():
            for step in range(first[vertex], end):
                counts[step] += 1
    return sum(GROWTH_OF_ONE**count for count in counts)
