"""The nouns of issuing: revisions of a sheet, and what its checker looked at."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

ReviewVerdict = Literal["accepted", "conditional", "rejected"]


@dataclass(frozen=True, slots=True)
class Revision:
    """One line of the revision table: its mark, what changed, when and by whom; "" where not written."""

    mark: str
    what: str
    date: str = ""
    by: str = ""


@dataclass(frozen=True, slots=True)
class Reviewed:
    """One item that somebody has looked at, with the verdict; a conditional one has its condition as remark."""

    item: str
    by: str
    verdict: ReviewVerdict
    remark: str = ""
    date: str = ""
