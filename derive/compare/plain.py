"""A comparison as plain text, for a terminal or a notebook."""

from __future__ import annotations

import textwrap
from collections.abc import Iterator

from derive.compare.comparison import Comparison
from derive.compare.notes import failures, notes
from derive.compare.table import tables
from derive.sheet.document import Table
from derive.sheet.plain import line_text

LEAST_CELL = 16
GAP = 2


def plain_comparison(comparison: Comparison, width: int = 120) -> str:
    """Give the table, what failed, and what is particular to a stage, no line wider than asked for.

    A width too small for the stages side by side gives a table for as many as fit, one after another.
    """
    label = max(len(line_text(row[0])) for row in tables(comparison)[0].rows)
    most = max(1, (width - label) // (LEAST_CELL + GAP))
    lines: list[str] = []
    for table in tables(comparison, most):
        lines += [*_table(table, width, label), ""]
    found = [f"✗ {words}" for words in failures(comparison)]
    found += [f"{name}: {words}" for name, words in notes(comparison)]
    for words in found:
        lines += textwrap.wrap(words, max(width, LEAST_CELL), subsequent_indent="  ")
    return "\n".join(lines).rstrip() + "\n"


def _table(table: Table, width: int, label: int) -> Iterator[str]:
    count = len(table.columns) - 1
    room = max(LEAST_CELL, (width - label - GAP * count) // count)
    heads = [line_text(column.heading) for column in table.columns]
    rows = [heads, *([line_text(cell) for cell in row] for row in table.rows)]
    wrapped = [
        [_wrapped(cell, room if place else label) for place, cell in enumerate(row)] for row in rows
    ]
    widths = [max(len(line) for row in wrapped for line in row[place]) for place in range(count + 1)]
    for row in wrapped:
        for depth in range(max(map(len, row))):
            cells = [lines[depth] if depth < len(lines) else "" for lines in row]
            pairs = zip(cells, widths, strict=True)
            yield (" " * GAP).join(cell.ljust(wide) for cell, wide in pairs).rstrip()


def _wrapped(cell: str, room: int) -> list[str]:
    """Break a cell: each of several roots stands on a line of its own."""
    parts = cell.split("\n")
    return [line for part in parts for line in textwrap.wrap(part, room)] or [""]
