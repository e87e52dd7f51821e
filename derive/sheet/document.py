"""The nouns of a sheet: sections and blocks that say what is shown, never how it looks."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

from derive.expressions.tree import Equation, Expression


@dataclass(frozen=True, slots=True)
class Text:
    """Plain words."""

    text: str


@dataclass(frozen=True, slots=True)
class Maths:
    """An expression or equation set within a line of words."""

    content: Expression | Equation


@dataclass(frozen=True, slots=True)
class Reference:
    """The number of an equation of this sheet, as a link: "(7)"."""

    anchor: str
    number: str


@dataclass(frozen=True, slots=True)
class Mark:
    """A verdict: passed, failed, or neither."""

    passed: bool | None
    text: str


Inline = Text | Maths | Reference | Mark
Line = tuple[Inline, ...]


@dataclass(frozen=True, slots=True)
class Paragraph:
    """Words with maths among them."""

    line: Line
    tone: Literal["plain", "note", "alarm"] = "plain"


@dataclass(frozen=True, slots=True)
class Matrix:
    """matrix · unknowns = right side."""

    rows: tuple[tuple[Expression, ...], ...]
    unknowns: tuple[Expression, ...]
    right: tuple[Expression, ...]


@dataclass(frozen=True, slots=True)
class Display:
    """An equation on a line of its own with the reason at its side.

    `number` is printed as (n) and `anchor` is what a Reference points to; both may be absent.
    """

    content: Equation | Expression | Matrix
    reason: Line = ()
    number: str | None = None
    anchor: str = ""
    boxed: bool = False


@dataclass(frozen=True, slots=True)
class Column:
    """A table's column: its heading, and whether its cells are numbers (set to the right)."""

    heading: Line
    numeric: bool = False


@dataclass(frozen=True, slots=True)
class Table:
    """A table with a caption; every row has one line of inline content a column."""

    caption: str
    columns: tuple[Column, ...]
    rows: tuple[tuple[Line, ...], ...]


@dataclass(frozen=True, slots=True)
class SourceText:
    """Text shown to the letter, as it stands in a file."""

    text: str


Block = Paragraph | Display | Table | SourceText


@dataclass(frozen=True, slots=True)
class Section:
    """A headed part of the sheet; `level` 1 is a main section, 2 a part of one.

    `about` is set as maths behind the words of the title.
    """

    title: str
    blocks: tuple[Block, ...]
    level: Literal[1, 2] = 1
    about: Maths | None = None


@dataclass(frozen=True, slots=True)
class Field:
    """A labelled entry of the title block."""

    label: str
    text: str


@dataclass(frozen=True, slots=True)
class Sheet:
    """The whole document, with the two files that it carries.

    `passed` says whether no check failed; `failures` names those that did, for the first page.
    """

    title: str
    fields: tuple[Field, ...]
    passed: bool
    failures: tuple[str, ...]
    sections: tuple[Section, ...]
    topology_name: str
    topology_text: str
    ledger_name: str
    ledger_text: str
    language: str = "en"
