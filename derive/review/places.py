"""Holds what an issued page shows against the fresh one, and says where they part."""

from __future__ import annotations

import re
from collections.abc import Iterator, Sequence
from difflib import SequenceMatcher
from itertools import zip_longest

from derive.review.issued import Difference, Item

_NUMBER = re.compile(r"\((?:\d+(?:\.\d+)*|[A-Za-z]?\d+)\)")
_NEAR = 8  # items: an equation's number stands no farther behind it
_LINE_POINTS = 16.0
LONGEST = 160  # letters of what is quoted
# Past this many items no one asks which came in between: they are set side by side.
_MOST_MATCHED = 4_000


def compare_items(issued: Sequence[Item], fresh: Sequence[Item]) -> Iterator[Difference]:
    """Give each difference between two pages, in order."""
    first, last = _alike(issued, fresh)
    left, right = issued[first : len(issued) - last], fresh[first : len(fresh) - last]
    for theirs, ours in _pairs(left, right):
        at = first + (theirs if theirs is not None else min(len(left), _before(ours, right, left)))
        yield _difference(
            issued,
            min(at, len(issued) - 1),
            left[theirs] if theirs is not None else None,
            right[ours] if ours is not None else None,
        )


def _alike(issued: Sequence[Item], fresh: Sequence[Item]) -> tuple[int, int]:
    """Count the items that are the same at the beginning and at the end."""
    shorter = min(len(issued), len(fresh))
    first = 0
    while first < shorter and issued[first].raw == fresh[first].raw:
        first += 1
    last = 0
    while last < shorter - first and issued[-1 - last].raw == fresh[-1 - last].raw:
        last += 1
    return first, last


def _pairs(left: Sequence[Item], right: Sequence[Item]) -> Iterator[tuple[int | None, int | None]]:
    """Give the places of what differs, side by side where one took the other's place."""
    if len(left) == len(right) or len(left) + len(right) > _MOST_MATCHED:
        for place, (theirs, ours) in enumerate(zip_longest(left, right)):
            if theirs is None or ours is None or theirs.raw != ours.raw:
                yield (None if theirs is None else place), (None if ours is None else place)
        return
    matcher = SequenceMatcher(None, [i.raw for i in left], [i.raw for i in right], autojunk=False)
    for tag, a, b, c, d in matcher.get_opcodes():
        if tag != "equal":
            yield from zip_longest(range(a, b), range(c, d))


def _before(ours: int | None, right: Sequence[Item], left: Sequence[Item]) -> int:
    return min(ours or 0, max(len(left) - 1, 0)) if right else 0


def _difference(issued: Sequence[Item], at: int, theirs: Item | None, ours: Item | None) -> Difference:
    shown = theirs or ours
    assert shown is not None
    aspect = shown.aspect
    old, new = theirs.text if theirs else "", ours.text if ours else ""
    if theirs and ours and old == new and aspect in ("words", "equation"):
        # The letters agree: what differs is the markup that they stand in.
        aspect = "markup"
    if theirs and ours and aspect == "markup":
        old, new = theirs.raw, ours.raw
    return Difference(aspect, place_of(issued, at, shown), *quoted(old, new))


def place_of(items: Sequence[Item], at: int, shown: Item) -> str:
    """Say where an item stands: its page, its section, and the number of the equation next to it."""
    words = [f"page {shown.page}"] if shown.page else []
    if shown.section:
        words.append(f"section “{shown.section}”")
    if shown.aspect == "equation":
        number = _number_near(items, at, shown)
        words += [f"equation {number}"] if number else []
    if shown.aspect == "drawing" and not shown.text:
        after = next((i.text for i in items[at : at + 2] if i.text), "")
        words += [f"what is drawn for “{after[:60]}”" if after else "what is drawn"]
    if not words:
        near = next((i.text for i in reversed(items[: at + 1]) if i.text), "")
        words = [f"at “{near[:60]}”" if near else "at the beginning"]
    return ", ".join(words)


def _number_near(items: Sequence[Item], at: int, shown: Item) -> str:
    """Give the number of an equation: it stands behind it, on paper at its height."""
    if not shown.page:
        return next((i.text for i in items[at : at + _NEAR] if _NUMBER.fullmatch(i.text)), "")
    numbers = [i for i in items if i.page == shown.page and _NUMBER.fullmatch(i.text)]
    nearest = min(numbers, key=lambda i: abs(i.height - shown.height), default=None)
    return nearest.text if nearest and abs(nearest.height - shown.height) < _LINE_POINTS else ""


def quoted(old: str, new: str) -> tuple[str, str]:
    """Shorten two texts to where they part, so that the difference is seen."""
    if max(len(old), len(new)) <= LONGEST:
        return old, new
    shorter = min(len(old), len(new))
    first = next((i for i in range(shorter) if old[i] != new[i]), shorter)
    start = max(0, first - 40)
    lead = "…" if start else ""
    return tuple(  # type: ignore[return-value]
        f"{lead}{text[start : start + LONGEST]}{'…' if len(text) > start + LONGEST else ''}"
        if text
        else ""
        for text in (old, new)
    )
