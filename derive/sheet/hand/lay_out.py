"""Lays a line's own text out in rows of a terminal, with marks under the place that is meant."""

from __future__ import annotations

import unicodedata
from dataclasses import dataclass


@dataclass(frozen=True, slots=True)
class Row:
    """One row: its text, and the marks that stand under it, "" for none."""

    text: str
    marks: str


def tidy(text: str) -> str:
    """Give text on one line, with a sign in place of what would move a terminal's cursor."""
    return "".join(c if c.isprintable() else " " if c.isspace() else "�" for c in text)


def cells(sign: str) -> int:
    """Give how many columns of a terminal a sign takes."""
    if unicodedata.combining(sign):
        return 0
    return 2 if unicodedata.east_asian_width(sign) in "WF" else 1


def rows_of(text: str, room: int, place: tuple[int, int] | None) -> list[Row]:
    """Give the text in rows of so many columns, broken at spaces where it can be.

    Given: the place to be marked, from a sign to before another; it may be the end of the text.
    """
    shown = tidy(text)
    found = []
    for start, end in _ranges(shown, room):
        last = end == len(shown)
        found.append(
            Row(shown[start:end], "" if place is None else _marks(shown, start, end, place, last))
        )
    return found


def _ranges(text: str, room: int) -> list[tuple[int, int]]:
    found: list[tuple[int, int]] = []
    start = 0
    while True:
        used, end, space = 0, start, -1
        while end < len(text) and used + cells(text[end]) <= room:
            used += cells(text[end])
            space = end if text[end] == " " else space
            end += 1
        if end == len(text):
            return [*found, (start, end)]
        # A row ends behind a space, so that every sign of the text stands in some row.
        end = space + 1 if space > start else max(end, start + 1)
        found.append((start, end))
        start = end


def _marks(text: str, start: int, end: int, place: tuple[int, int], last: bool) -> str:
    first, behind = max(place[0], start), min(place[1], end)
    if last and place[0] >= end:
        first, behind = end, end + 1
    if first >= behind:
        return ""
    before = sum(cells(sign) for sign in text[start:first])
    width = sum(cells(sign) for sign in text[first:behind]) or 1
    return " " * before + "^" * width
