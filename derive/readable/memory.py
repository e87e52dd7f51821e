"""What searches over one circuit's names came to, kept for those that ask the same.

The same resistance is met in many ratios, each over a ring of its own names. A polynomial's text is the same in
all of them, and what was found for it holds in all. It is taken over only where the search that asks would come
to the same, and it counts as much against that search's budget: so no form hangs on what was asked before.
"""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass, field
from functools import lru_cache
from typing import Any

from derive.expressions.tree import Expression
from derive.readable.workspace import Workspace, workspace_of

Keys = frozenset[str]


@dataclass(slots=True, eq=False)
class Shelf:
    """What was found where names have the same weights; all by the text of polynomials and ratios.

    `settled` holds forms that hang on nothing but the ratio, each with all the ratios that were looked at for it.
    """

    settled: dict[str, tuple[Expression, Keys]] = field(default_factory=dict)
    written: dict[str, Expression] = field(default_factory=dict)
    guesses: dict[str, int] = field(default_factory=dict)


@dataclass(slots=True, eq=False)
class Record:
    """What one search looked at for each ratio: `closures` holds None where the form hangs on more than it.

    A form hangs on more where the budget ran out on the way, or where a ratio was met again while it was worked.
    """

    closures: dict[str, Keys | None] = field(default_factory=dict)
    under_way: list[set[str] | None] = field(default_factory=list)

    def begin(self, key: str) -> None:
        """Take note that a ratio is being worked."""
        self.under_way.append({key})

    def end(self, key: str) -> Keys | None:
        """Give what was looked at for the ratio that was begun last."""
        looked_at = self.under_way.pop()
        self.closures[key] = None if looked_at is None else frozenset(looked_at)
        self.used(key)
        return self.closures[key]

    def used(self, key: str) -> None:
        """Take note that the form of a ratio is used for the one under way."""
        if not self.under_way:
            return
        needs, mine = self.closures[key], self.under_way[-1]
        if needs is None or mine is None:
            self.under_way[-1] = None
        else:
            mine |= needs

    def spoil(self) -> None:
        """Take note that all that is under way hangs on more than its ratio."""
        self.under_way[:] = [None] * len(self.under_way)

    def spoilt(self, keys: Iterable[str]) -> bool:
        """Whether the form of one of these hangs on more than its ratio."""
        return any(self.closures.get(key, ()) is None for key in keys)


@dataclass(slots=True, eq=False)
class Memory:
    """What was found with one vocabulary: workspaces by names, shelves by weights, forms by what was asked."""

    numbers: dict[str, int]
    spaces: dict[tuple[str, ...], Workspace] = field(default_factory=dict)
    shelves: dict[Any, Shelf] = field(default_factory=dict)
    forms: dict[tuple[Any, ...], Expression] = field(default_factory=dict)
    guesses: dict[str, int] = field(default_factory=dict)

    def space(self, names: tuple[str, ...]) -> Workspace:
        """Give the workspace over these names."""
        found = self.spaces.get(names)
        if found is None:
            found = self.spaces[names] = workspace_of(names, self.numbers)
        return found

    def shelf(self, key: Any) -> Shelf:
        """Give the shelf of what was found under these conditions."""
        found = self.shelves.get(key)
        if found is None:
            found = self.shelves[key] = Shelf(guesses=self.guesses)
        return found


@lru_cache(maxsize=8)
def memory_of(names: tuple[str, ...], vocabulary: str) -> Memory:
    """Give the memory for these names, most significant first, and the vocabulary with this key."""
    return Memory({name: number for number, name in enumerate(names)})
