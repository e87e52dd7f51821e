"""Plain text laid out as its formula is: which words stand on which line of it, and where.

A formula is broken by the structure of its tree, its text by its words; a line is given the words that its share of the
formula's area asks for. Joined by spaces, the lines are the whole text again, to the letter.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from derive.render.breaking import Row


@dataclass(frozen=True, slots=True)
class TextLine:
    """Words on one line of a picture: where it begins and how high and wide it is, as shares of the picture."""

    text: str
    top: float
    height: float
    width: float = 1.0


def whole(text: str) -> tuple[TextLine, ...]:
    """Return the one line of a formula that was not broken."""
    return (TextLine(text, 0.0, 1.0),) if text else ()


def spread(text: str, pictures: Sequence[Sequence[Row]]) -> list[tuple[TextLine, ...]]:
    """Return for each picture of a broken formula its lines of text, from the rows that stand in it."""
    rows = [row for picture in pictures for row in picture]
    shares = iter(_shares(text.split(" "), [row.width * max(row.height, 1.0) for row in rows]))
    widest = max(row.width for row in rows)
    made = []
    for picture in pictures:
        total = sum(row.height for row in picture)
        lines, top = [], 0.0
        for row in picture:
            height = row.height / total
            words = next(shares)
            if words:
                lines.append(TextLine(" ".join(words), top, height, row.width / widest))
            top += height
        made.append(tuple(lines))
    return made


def _shares(words: Sequence[str], weights: Sequence[float]) -> list[list[str]]:
    """Deal words out in order, to each line about as many letters as its weight asks for."""
    letters, total = sum(len(word) + 1 for word in words), sum(weights)
    made: list[list[str]] = []
    place, used, due = 0, 0, 0.0
    for number, weight in enumerate(weights):
        due += letters * weight / total
        line: list[str] = []
        last = number == len(weights) - 1
        while place < len(words) and (last or used + (len(words[place]) + 1) / 2 <= due):
            line.append(words[place])
            used += len(words[place]) + 1
            place += 1
        made.append(line)
    return made
