"""Holds a sheet of an earlier version against the fresh one: its layout may be another, its results may not.

Lost is what the issued sheet states and the fresh one does not confirm: a value, an equation, a number. Reworded
is what is said otherwise, or has come in since.
"""

from __future__ import annotations

import hashlib
import json
import re
from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass
from typing import Any

from derive.errors import DeriveError
from derive.expressions.parse import parse_expression
from derive.expressions.walk import evaluate_modulo
from derive.review.issued import Difference, Issued, Item
from derive.review.ledgers import Change, changes
from derive.review.places import place_of
from derive.review.remake import Fresh

_PRIME = (1 << 61) - 1
_POINTS = 3
_MOST_WORDS = 40
# Three figures and more: what has fewer counts pages, steps and sections.
_NUMBER = re.compile(r"\d[\d.]*(?: × 10[⁻⁰¹²³⁴⁵⁶⁷⁸⁹]+)?")
_IDENTITIES = {
    "results": ("find", "band"),
    "checks": ("name",),
    "estimates": ("name",),
    "time_constants": ("part", "kind"),
    "approximations": ("that",),
    "stages": ("name",),
}


@dataclass(frozen=True, slots=True)
class Found:
    """What an earlier sheet states that is not confirmed, what is said otherwise, and remarks."""

    lost: tuple[Difference, ...]
    reworded: tuple[Difference, ...]
    remarks: tuple[str, ...]


def compare_with_earlier(issued: Issued, fresh: Fresh) -> Found:
    """Hold the results of an earlier sheet, and all equations and numbers on it, against the fresh one."""
    lost: list[Difference] = []
    reworded: list[Difference] = []
    old, new = named(issued.ledger), named(json.loads(fresh.sheet.ledger_text))
    for change in changes(old, new, exactly=False):
        if change.path[:1] == ("made_by",):
            continue
        stands = change.of_words or _equal_expressions(change, old, new)
        (reworded if stands else lost).append(change.difference())
    remarks: tuple[str, ...] = ()
    if issued.kind != "json":
        theirs, ours = shown_on(issued.kind, issued.data), shown_on(issued.kind, fresh.data)
        lost += _unconfirmed(theirs, ours)
        other = list(_other_words(theirs, ours))
        reworded += other[:_MOST_WORDS]
        if len(other) > _MOST_WORDS:
            remarks = (f"{len(other) - _MOST_WORDS} more pieces of text read otherwise",)
    return Found(tuple(lost), tuple(reworded), remarks)


def shown_on(kind: str, data: bytes) -> tuple[Item, ...]:
    """Give all items of a page or of all pages."""
    if kind == "html":
        from derive.review.html_text import items

        return items(data.decode("utf-8"))
    from derive.review.pdf import read_pdf

    pages = read_pdf(data, "the sheet").pages
    found = read_pdf(data, "the sheet", range(1, pages + 1)).items
    return tuple(item for page in sorted(found) for item in found[page])


def named(ledger: Any) -> Any:
    """Give a ledger whose lists of named things are found by name: one may have come in between."""
    if isinstance(ledger, dict):
        return {key: _by_name(key, value) for key, value in ledger.items()}
    return [named(entry) for entry in ledger] if isinstance(ledger, list) else ledger


def _by_name(key: str, value: Any) -> Any:
    identity = _IDENTITIES.get(key)
    if identity and isinstance(value, list) and all(isinstance(entry, dict) for entry in value):
        names = [", ".join(str(entry.get(part)) for part in identity) for entry in value]
        if len(set(names)) == len(names):
            return {name: named(entry) for name, entry in zip(names, value, strict=True)}
    return named(value)


def _equal_expressions(change: Change, old: Any, new: Any) -> bool:
    """Say whether two expressions of one result are equal for all values of what is in them."""
    if not isinstance(change.issued, str) or not isinstance(change.fresh, str):
        return False
    if change.path[:1] != ("results",) or "topology" in change.path:
        return False
    return all(
        (left := _residue(change.issued, change.path, old, point)) is not None
        and left == _residue(change.fresh, change.path, new, point)
        for point in range(_POINTS)
    )


def _residue(text: str, path: tuple[str | int, ...], ledger: Any, point: int) -> int | None:
    """Give the value of an expression in a prime field, at a point that its names decide."""
    values: dict[str, int] = _Values(point)
    try:
        for name, meaning in ledger["results"][path[1]].get("definitions", []):
            values[name] = evaluate_modulo(parse_expression(meaning), values, _PRIME)
        return evaluate_modulo(parse_expression(text), values, _PRIME)
    except (DeriveError, ZeroDivisionError, KeyError, TypeError, ValueError, RecursionError):
        return None


class _Values(dict[str, int]):
    """A value for every name, always the same one."""

    def __init__(self, point: int) -> None:
        super().__init__()
        self._point = point

    def __missing__(self, name: str) -> int:
        digest = hashlib.sha256(f"{self._point} {name}".encode()).digest()
        return int.from_bytes(digest[:8], "big") % _PRIME

    def __contains__(self, name: object) -> bool:
        return True


def _unconfirmed(theirs: Sequence[Item], ours: Sequence[Item]) -> Iterator[Difference]:
    """Give each equation and each number of the issued sheet that is nowhere on the fresh one."""
    equations = {item.text for item in ours if item.aspect == "equation"}
    numbers = {number for item in ours for number in _numbers(item.text)}
    for at, item in enumerate(theirs):
        if item.aspect == "equation" and item.text not in equations:
            yield Difference("equation", place_of(theirs, at, item), item.text, "")
        elif item.aspect == "words":
            for number in _numbers(item.text):
                if number not in numbers:
                    yield Difference("words", f"number on {place_of(theirs, at, item)}", number, "")


def _numbers(text: str) -> Iterator[str]:
    for found in _NUMBER.finditer(text):
        if sum(letter.isdigit() for letter in found.group().partition(" ")[0]) >= 3:
            yield found.group().rstrip(".")


def _other_words(theirs: Sequence[Item], ours: Sequence[Item]) -> Iterator[Difference]:
    known: Mapping[str, None] = dict.fromkeys(item.text for item in ours)
    for at, item in enumerate(theirs):
        if item.aspect == "words" and item.text not in known:
            yield Difference("words", place_of(theirs, at, item), item.text, "")
