"""The nouns of reviewing an issued sheet: what it carries, what it shows, and how far that differs."""

from __future__ import annotations

import hashlib
from dataclasses import dataclass, field
from typing import Any, Literal

Kind = Literal["pdf", "html", "json"]
SheetKind = Literal["sheet", "comparison", "redline", "handcheck"]
# same: nothing differs. newer: an earlier version made it, and its results stand. differs: something does not.
Standing = Literal["same", "newer", "differs"]
Aspect = Literal["source", "ledger", "equation", "words", "drawing", "markup", "file", "derivation"]

_WEIGHTS: tuple[Aspect, ...] = (
    *("source", "derivation", "ledger", "equation", "words", "drawing", "markup", "file"),
)


@dataclass(frozen=True, slots=True)
class Carried:
    """A topology that a sheet carries: the stage it describes, "" where there is one only, its file and text.

    `digest` is what the sheet says of the text, None where it says nothing beside it.
    """

    stage: str
    file: str
    text: str
    digest: str | None = None

    @property
    def true_digest(self) -> str:
        """The SHA-256 of the text as it is."""
        return hashlib.sha256(self.text.encode("utf-8", "replace")).hexdigest()


@dataclass(frozen=True, slots=True)
class Issued:
    """An issued sheet as it was found: its bytes, and the source and ledger that it carries.

    `ledger_name` is the name that its ledger bears, "" where the file does not say.
    """

    file: str
    kind: Kind
    data: bytes = field(repr=False)
    sources: tuple[Carried, ...] = ()
    ledger_name: str = ""
    ledger_text: str = field(default="", repr=False)
    ledger: dict[str, Any] = field(default_factory=dict, repr=False)

    @property
    def holds(self) -> SheetKind:
        """Whether it is that of one topology, of several, of what changed between two, or of a hand derivation."""
        kinds: tuple[SheetKind, ...] = ("comparison", "redline", "handcheck")
        return next((kind for kind in kinds if kind in self.ledger), "sheet")

    @property
    def version(self) -> str:
        """The version that says it made the sheet."""
        return str(self.ledger["made_by"]["version"])


@dataclass(frozen=True, slots=True)
class Item:
    """A piece of what a page shows, in reading order.

    `text` is what is read, "" for what is drawn only; `raw` is all of it, to the letter or as a digest.
    `section` is the heading it stands under, `page` its page, 0 where there are no pages, and `height` how high
    it stands on that, in points.
    """

    aspect: Aspect
    text: str
    raw: str
    section: str = ""
    page: int = 0
    height: float = 0.0


@dataclass(frozen=True, slots=True)
class Difference:
    """One thing that is not as it is when derived anew.

    `where` says the place to a reader; `issued` and `fresh` are "" where that side has nothing.
    """

    aspect: Aspect
    where: str
    issued: str
    fresh: str


@dataclass(frozen=True, slots=True)
class Recheck:
    """What came of rechecking one issued sheet.

    `passed` says whether the fresh derivation passed its own checks, None where there was none.
    """

    issued: Issued
    standing: Standing
    differences: tuple[Difference, ...]
    remarks: tuple[str, ...] = ()
    passed: bool | None = None

    @property
    def by_weight(self) -> tuple[Difference, ...]:
        """The differences, what matters most first: a source before a result, a result before its looks."""
        return tuple(sorted(self.differences, key=lambda difference: _WEIGHTS.index(difference.aspect)))

    @property
    def holds(self) -> bool:
        """Whether everything printed still holds."""
        return self.standing != "differs"
