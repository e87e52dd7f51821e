"""The nouns of a redline: each single change, under the heading that it belongs to."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

from derive.check.verdict import Outcome
from derive.sheet.document import Line
from derive.topology.topology import Topology

Sign = Literal["added", "removed", "changed"]
TITLE, CIRCUIT, ASKED, ASSUMED, POINT = (
    *("Title block", "Circuit", "What is asked for", "Assumptions"),
    "Operating point and parameters",
)


@dataclass(frozen=True, slots=True)
class Change:
    """One change: what it is of, in which respect, and how that reads before and after.

    `group` is the heading it stands under, `subject` a name as the topology or the result has it (R_E, b_1),
    `aspect` the respect ("value", "nodes", "term above the bar"). `before` is () for what was added, `after`
    for what was removed.
    """

    sign: Sign
    group: str
    subject: str
    aspect: str
    before: Line = ()
    after: Line = ()


@dataclass(frozen=True, slots=True)
class Side:
    """One of the two revisions: its file as it was named, its topology and its results."""

    file: str
    topology: Topology
    outcome: Outcome


@dataclass(frozen=True, slots=True)
class Redline:
    """Two revisions and all that changed from the one to the other."""

    old: Side
    new: Side
    changes: tuple[Change, ...]
    remarks: tuple[str, ...] = ()

    @property
    def groups(self) -> tuple[tuple[str, tuple[Change, ...]], ...]:
        """The changes under their headings, in order."""
        found: dict[str, list[Change]] = {}
        for change in self.changes:
            found.setdefault(change.group, []).append(change)
        return tuple((group, tuple(changes)) for group, changes in found.items())
