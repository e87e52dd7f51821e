"""Holds one ledger against another, key by key, and tells facts from words."""

from __future__ import annotations

import math
from collections.abc import Iterator
from dataclasses import dataclass
from typing import Any

from derive.review.issued import Difference

LONGEST = 160
# What a later version may say otherwise without the result being another one.
WORDS = frozenset(
    {
        "version",
        "says",
        "rule",
        "method",
        "measured",
        "limit",
        "why",
        "origin",
        "readable",
        "remark",
        "remarks",
    }
)
# Numbers of two versions that agree to here are the same: they were rounded by other steps.
ALIKE = 1e-9
_ABSENT = object()


@dataclass(frozen=True, slots=True)
class Change:
    """One place in a ledger where the issued and the fresh one part; `path` is how it is reached."""

    path: tuple[str | int, ...]
    where: str
    issued: Any
    fresh: Any

    @property
    def of_words(self) -> bool:
        """Whether only wording differs, or something has come in that the issued one did not have."""
        return self.issued is _ABSENT or any(key in WORDS for key in self.path) or "steps" in self.path

    def difference(self) -> Difference:
        """Give it for a reader."""
        return Difference("ledger", self.where, shown(self.issued), shown(self.fresh))


def changes(issued: Any, fresh: Any, *, exactly: bool = True) -> Iterator[Change]:
    """Give each place where two ledgers part.

    Given: whether numbers must agree to the last digit.
    """
    waiting: list[tuple[tuple[str | int, ...], str, Any, Any]] = [((), "ledger", issued, fresh)]
    while waiting:
        path, where, old, new = waiting.pop()
        if isinstance(old, dict) and isinstance(new, dict):
            keys = [*old, *(key for key in new if key not in old)]
            waiting += [
                ((*path, key), f"{where}, {key}", old.get(key, _ABSENT), new.get(key, _ABSENT))
                for key in reversed(keys)
            ]
        elif isinstance(old, list) and isinstance(new, list) and not _is_root(old, new):
            most = max(len(old), len(new))
            waiting += [
                (
                    (*path, place),
                    _entry(where, path, place, old, new),
                    old[place] if place < len(old) else _ABSENT,
                    new[place] if place < len(new) else _ABSENT,
                )
                for place in reversed(range(most))
            ]
        elif not _same(old, new, exactly):
            yield Change(path, where, old, new)


def _same(old: Any, new: Any, exactly: bool) -> bool:
    if type(old) is not type(new) and not (_number(old) and _number(new) and not exactly):
        return False
    if not exactly and _number(old):
        return math.isclose(old, new, rel_tol=ALIKE)
    if not exactly and isinstance(old, list):
        size = max((abs(part) for part in (*old, *new)), default=0.0)
        return all(
            math.isclose(a, b, rel_tol=ALIKE, abs_tol=ALIKE * size) for a, b in zip(old, new, strict=True)
        )
    # Written out, so that −0.0 is not 0.0.
    return bool(old == new) and repr(old) == repr(new)


def _number(value: Any) -> bool:
    return isinstance(value, int | float) and not isinstance(value, bool)


def _is_root(old: list[Any], new: list[Any]) -> bool:
    """Say whether two lists are complex numbers, which are compared by their size."""
    return len(old) == len(new) == 2 and all(isinstance(value, float) for value in (*old, *new))


def _entry(where: str, path: tuple[str | int, ...], place: int, old: list[Any], new: list[Any]) -> str:
    """Name an entry of a list by what a reader knows it by."""
    entry = old[place] if place < len(old) else new[place]
    if isinstance(entry, dict):
        if path == ("results",):
            return f"{entry.get('find')}, {entry.get('band')} band"
        for key, word in (("n", "step"), ("name", ""), ("part", ""), ("that", "")):
            if isinstance(entry.get(key), str | int):
                return f"{where}: {word} {entry[key]}".replace(":  ", ": ")
    if path and path[-1] in ("numerator", "denominator"):
        return f"{where} of s^{place}"
    return f"{where} {place + 1}"


def shown(value: Any) -> str:
    """Give a value of a ledger as a reader sees it."""
    if value is _ABSENT:
        return ""
    text = value if isinstance(value, str) else repr(value)
    flat = " ".join(text.split())
    return flat if len(flat) <= LONGEST else f"{flat[:LONGEST]}…"
