"""The making of a diagram: all states of one bundle after the other, then their values from the end."""

from __future__ import annotations

from collections.abc import Sequence

from derive.algebra.diagram import Diagram
from derive.algebra.diagram_forks import Fork
from derive.algebra.diagram_labels import Labels, Move, Step, begin, order_sign, steps
from derive.algebra.diagram_order import ordered
from derive.algebra.diagram_terms import Bundle, Pair, Term, bundle, vertices
from derive.errors import TooLargeError

# Some seconds and a hundred megabytes; sparse matrices of 26 rows need a few thousand.
STATE_LIMIT = 100_000
# Pairs of edges (rows, columns) that every product is to hold besides its names.
Taken = Sequence[tuple[Pair, Pair]]
State = tuple[Labels, Labels]
# A state's children, taken and left: (sign, number among the next bundle's states), None where zero.
Children = tuple[tuple[int, int] | None, tuple[int, int] | None]


def build(
    terms: Sequence[Term], size: int, taken: Sequence[Taken] = ((),), limit: int = STATE_LIMIT
) -> Diagram:
    """Make the diagram of the determinant of a sum of terms, a matrix of `size` rows and columns.

    Given: for each determinant wanted, pairs of edges `taken` in advance: the determinant is then the
    coefficient of the product of as many further generators that stand at these pairs, in this order.
    Raises: TooLargeError beyond `limit` states.
    """
    bundles = bundle(terms)
    special = _special(taken, 0), _special(taken, 1)
    bundles = ordered(bundles, size, special)
    used = _used(bundles, 0), _used(bundles, 1)
    whole = frozenset(range(size))
    sign = order_sign([item.rows for item in bundles], special[0])
    sign *= order_sign([item.columns for item in bundles], special[1])
    starts: list[tuple[int, State] | None] = []
    for pairs in taken:
        rows = begin([pair[0] for pair in pairs], special[0], used[0])
        columns = begin([pair[1] for pair in pairs], special[1], used[1])
        covered = all(used[side].union(special[side]) >= whole for side in (0, 1))
        if rows is None or columns is None or not covered:
            starts.append(None)
        else:
            starts.append((sign * rows[1] * columns[1], (rows[0], columns[0])))
    roots, layers = _grow(bundles, special, starts, limit)
    forks, values = _reduce(layers)
    ends = tuple(
        (0, 0) if root is None else (root[0] * values[root[1]][0], values[root[1]][1]) for root in roots
    )
    return Diagram(
        tuple(terms), tuple(bundles), tuple(forks), tuple((sign or 1, fork) for sign, fork in ends)
    )


def _special(taken: Sequence[Taken], side: int) -> list[int]:
    return sorted(vertices(pair[side] for pairs in taken for pair in pairs))


def _used(bundles: Sequence[Bundle], side: int) -> frozenset[int]:
    return frozenset(vertices((item.rows, item.columns)[side] for item in bundles))


def _grow(
    bundles: Sequence[Bundle],
    special: tuple[Sequence[int], Sequence[int]],
    starts: Sequence[tuple[int, State] | None],
    limit: int,
) -> tuple[list[tuple[int, int] | None], list[list[Children]]]:
    """Give the starts as (sign, number of state), and the children of every bundle's states."""
    states: dict[State, int] = {}
    roots = [
        None if start is None else (start[0], states.setdefault(start[1], len(states)))
        for start in starts
    ]
    layers = []
    total = 0
    rows = steps([item.rows for item in bundles], special[0])
    columns = steps([item.columns for item in bundles], special[1])
    for row_step, column_step in zip(rows, columns, strict=True):
        total += len(states)
        layer, states = _advance(states, row_step, column_step, limit - total)
        if layer is None:
            raise TooLargeError(
                f"a determinant of {len(bundles)} groups of terms has more than {limit:,} states",
                cure="split it into stages, or merge its parallel and series parts",
            )
        layers.append(layer)
    return roots, layers


def _advance(
    states: dict[State, int], rows: Step, columns: Step, room: int
) -> tuple[list[Children] | None, dict[State, int]]:
    """Give the children of each state and the states that they are; None where there is no room."""
    row_moves: dict[Labels, tuple[Move, Move]] = {}
    column_moves: dict[Labels, tuple[Move, Move]] = {}
    after: dict[State, int] = {}
    layer: list[Children] = []
    for row_labels, column_labels in states:
        row = row_moves.get(row_labels)
        if row is None:
            row = row_moves[row_labels] = rows.moves(row_labels)
        column = column_moves.get(column_labels)
        if column is None:
            column = column_moves[column_labels] = columns.moves(column_labels)
        layer.append((_child(row[0], column[0], after), _child(row[1], column[1], after)))
        if len(after) > room:
            return None, after
    return layer, after


def _child(row: Move, column: Move, after: dict[State, int]) -> tuple[int, int] | None:
    if row is None or column is None:
        return None
    return row[1] * column[1], after.setdefault((row[0], column[0]), len(after))


def _reduce(layers: Sequence[Sequence[Children]]) -> tuple[list[Fork], list[tuple[int, int]]]:
    """Give the forks, and what each state of the first layer is: a sign and a fork, (1, 0) for zero.

    Equal forks are made once; a state whose bundle cannot be taken is what is left of it.
    """
    forks: list[Fork] = []
    known: dict[Fork, int] = {}
    # After the last bundle nothing is half done: there is one state, the number 1.
    below: list[tuple[int, int]] = [(1, 1)]
    for number in range(len(layers) - 1, -1, -1):
        values = []
        for taken, left in layers[number]:
            sign, high = (1, 0) if taken is None else _signed(taken, below)
            other, low = (1, 0) if left is None else _signed(left, below)
            if not high:
                values.append((other, low))
                continue
            fork = Fork(number, high, low, sign * other if low else 1)
            if fork not in known:
                known[fork] = len(forks) + 2
                forks.append(fork)
            values.append((sign, known[fork]))
        below = values
    return forks, below


def _signed(child: tuple[int, int], below: Sequence[tuple[int, int]]) -> tuple[int, int]:
    sign, fork = below[child[1]]
    return child[0] * sign, fork
