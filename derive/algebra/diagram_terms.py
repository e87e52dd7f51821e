"""Terms of a matrix that is a sum of rank-one pieces, and bundles of those that stand in one place."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass

# Two vertices of a graph; None is the reference, which has no row or column of its own.
Pair = tuple[int | None, int | None]


@dataclass(frozen=True, slots=True)
class Term:
    """The piece name·x^degree·(e_a − e_b)·(e_c − e_d)ᵀ with rows = (a, b) and columns = (c, d).

    e_None is zero. x is the degree variable of all terms together.
    """

    name: str
    rows: Pair
    columns: Pair
    degree: int = 0


@dataclass(frozen=True, slots=True)
class Entry:
    """One term within a bundle: its number in the list of terms, its sign there, name and degree."""

    number: int
    sign: int
    name: str
    degree: int


@dataclass(frozen=True, slots=True)
class Bundle:
    """Terms with the same pair of edges; a product never has two of them, so they act as their sum."""

    rows: Pair
    columns: Pair
    entries: tuple[Entry, ...]


def bundle(terms: Sequence[Term]) -> list[Bundle]:
    """Gather terms with equal edges, in order of first appearance; those that are zero are left out.

    Raises: ValueError where a degree is negative.
    """
    gathered: dict[tuple[Pair, Pair], list[Entry]] = {}
    for number, term in enumerate(terms):
        if term.degree < 0:
            raise ValueError(f"term {number} has a negative degree")
        rows, row_sign = _directed(term.rows)
        columns, column_sign = _directed(term.columns)
        if row_sign and column_sign:
            entry = Entry(number, row_sign * column_sign, term.name, term.degree)
            gathered.setdefault((rows, columns), []).append(entry)
    return [Bundle(rows, columns, tuple(entries)) for (rows, columns), entries in gathered.items()]


def vertices(pairs: Iterable[Pair]) -> list[int]:
    """Give the vertices of some edges but the reference, in order of first appearance."""
    return list(dict.fromkeys(vertex for pair in pairs for vertex in pair if vertex is not None))


def _directed(pair: Pair) -> tuple[Pair, int]:
    """Turn an edge so that its smaller vertex comes first, the reference last; the sign says whether."""
    one, other = pair
    if one == other:
        return pair, 0
    if one is None or (other is not None and other < one):
        return (other, one), -1
    return pair, 1
