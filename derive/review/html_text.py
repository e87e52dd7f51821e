"""Reads an issued page: what it carries, and what it shows, in order.

A scanner of our own goes over the text once: it takes whatever a file holds, in time that grows with its length.
"""

from __future__ import annotations

import html
import re
from collections.abc import Iterator
from dataclasses import dataclass

from derive.review.issued import Aspect, Item

# Between these nothing is markup until the element is closed.
_RAW = ("script", "style")
# An element of these is one thing to a reader.
_WHOLE: dict[str, Aspect] = {"math": "equation", "svg": "drawing"}
_NAME = re.compile(r"<(/?)([A-Za-z][A-Za-z0-9]*)")
_ATTRIBUTE = re.compile(r'([a-z-]+)="([^"]*)"')
_HEADING = frozenset({"h1", "h2", "h3", "h4", "h5", "h6"})
_SPACES = re.compile(r"\s+")


@dataclass(frozen=True, slots=True)
class Piece:
    """A tag, a comment, a run of text, or an element that is taken whole; `name` is the element's."""

    kind: str
    name: str
    raw: str


def pieces(page: str) -> Iterator[Piece]:
    """Give the pieces of a page in order; put together again they are the page."""
    place = 0
    while place < len(page):
        start = page.find("<", place)
        start = len(page) if start < 0 else start
        if start > place:
            yield Piece("text", "", page[place:start])
        if start == len(page):
            return
        piece = _tag(page, start)
        yield piece
        place = start + len(piece.raw)


def _tag(page: str, start: int) -> Piece:
    if page.startswith("<!--", start):
        return Piece("comment", "", page[start : _after(page, "-->", start)])
    found = _NAME.match(page, start)
    if found is None:
        return Piece("tag", "", page[start : _after(page, ">", start)])
    name, end = found.group(2).lower(), _after(page, ">", start)
    if not found.group(1) and (name in _RAW or name in _WHOLE):
        end = _after(page, ">", _after(page, f"</{name}", end) - 1)
        return Piece("whole", name, page[start:end])
    return Piece("end" if found.group(1) else "tag", name, page[start:end])


def _after(page: str, mark: str, start: int) -> int:
    """Give the place behind the next mark; the page's end where there is none."""
    found = page.find(mark, start)
    return len(page) if found < 0 else found + len(mark)


def carried(page: str) -> dict[str, str]:
    """Give the data scripts of a page by their identifier, the first of each."""
    scripts: dict[str, str] = {}
    for piece in pieces(page):
        opening = piece.raw[: piece.raw.find(">") + 1]
        attributes = dict(_ATTRIBUTE.findall(opening))
        if piece.name == "script" and attributes.get("type") == "application/json":
            body = piece.raw[len(opening) : piece.raw.rfind("</")]
            scripts.setdefault(attributes.get("id", ""), body)
    return scripts


def items(page: str) -> tuple[Item, ...]:
    """Give what a page shows, each with the markup before it; together they hold the whole page."""
    found: list[Item] = []
    section, heading, before = "", 0, ""
    words: list[str] = []
    for piece in pieces(page):
        if piece.name in _HEADING:
            heading = len(words) if piece.kind == "tag" else heading
            if piece.kind == "end":
                section = _SPACES.sub(" ", " ".join(words[heading:])).strip()
        if piece.kind == "text" and piece.raw.strip():
            text = _SPACES.sub(" ", html.unescape(piece.raw)).strip()
            words.append(text)
            found.append(Item("words", text, before + piece.raw, section))
            before = ""
        elif piece.name in _WHOLE and piece.kind == "whole":
            text = visible(piece.raw)
            words.append(text)
            found.append(Item(_WHOLE[piece.name], text, before + piece.raw, section))
            before = ""
        elif piece.name in _RAW:
            found.append(Item("markup", f"<{piece.name}>", before + piece.raw, section))
            before = ""
        else:
            before += piece.raw
    if before:
        found.append(Item("markup", "", before, section))
    return tuple(found)


def visible(markup: str) -> str:
    """Give the letters that a run of markup shows."""
    letters = (html.unescape(piece.raw) for piece in pieces(markup[1:]) if piece.kind == "text")
    # The first letter was cut off so that the element itself is not taken whole again.
    return _SPACES.sub(" ", " ".join("".join(letters).partition(">")[2].split("\n"))).strip()
