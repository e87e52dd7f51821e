"""Sentences on lines by hand with their maths set: expressions and names, and the numbers of lines as links."""

from __future__ import annotations

import re
from collections.abc import Collection, Sequence

from derive.expressions.names import GREEK
from derive.expressions.text import to_text
from derive.expressions.tree import Expression, Name
from derive.handcheck.report import LineVerdict
from derive.readable.measure import leaves
from derive.sheet.document import Inline, Line, Maths, Reference, Text
from derive.sheet.view import MOST_LEAVES
from derive.sheet.wording import joined

_LINES = re.compile(r"(\b[Ll]ines? (?:\d+(?:, | and | to )?)+)")
_WORD = re.compile(r"(?<!\w)([A-Za-z][A-Za-z0-9]*(?:_[A-Za-z0-9]+)*)(?!\w)")


def anchor(number: int) -> str:
    """Give the anchor of a line."""
    return f"hand-{number}"


def label(number: int) -> str:
    """Give a line's number as printed; the letter tells it from the machine's equations."""
    return f"H{number}"


def expressions_of(verdict: LineVerdict) -> tuple[Expression, ...]:
    """Give the expressions that the sentences on a line may hold."""
    found = [verdict.ratio, verdict.difference]
    for edit in verdict.edits:
        found += [edit.after, edit.before]
    return tuple(e for e in found if e is not None and leaves(e) <= MOST_LEAVES)


def with_maths(
    words: str, parts: Sequence[Expression] = (), linked: Collection[int] = frozenset()
) -> Line:
    """Set names, and the expressions among `parts`, as maths where they stand in words.

    The numbers of lines become links, but for those of lines that are not `linked`.
    """
    known = {to_text(part): part for part in parts}
    if not known:
        return joined(_without_parts(words, linked))
    between = "|".join(re.escape(text) for text in sorted(known, key=len, reverse=True))
    line: list[Inline] = []
    for piece in re.split(rf"(?<![\w)])({between})(?![\w(])", words):
        line += [Maths(known[piece])] if piece in known else _without_parts(piece, linked)
    return joined(tuple(line))


def _without_parts(words: str, linked: Collection[int]) -> Line:
    line: list[Inline] = []
    for place, piece in enumerate(_LINES.split(words)):
        line += _links(piece, linked) if place % 2 else _names(piece)
    return tuple(line)


def _links(words: str, linked: Collection[int]) -> list[Inline]:
    pieces = [piece for piece in re.split(r"(\d+)", words) if piece]
    return [
        Reference(anchor(int(piece)), label(int(piece)))
        if piece.isdigit() and int(piece) in linked
        else Text(f"H{piece}" if piece.isdigit() else piece)
        for piece in pieces
    ]


def _names(words: str) -> list[Inline]:
    # A name is told from a word by its subscript, or by being a Greek letter's.
    return [
        Maths(Name(piece)) if place % 2 and ("_" in piece or piece in GREEK) else Text(piece)
        for place, piece in enumerate(_WORD.split(words))
        if piece
    ]
