"""The nouns of a sheet: sections and blocks that say what is shown, never how it looks."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

from derive.drawing.drawing import Drawing
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


@dataclass(frozen=True, slots=True)
class Revised:
    """Words that a revision added, removed or changed; `sign` says which, besides the colour."""

    sign: Literal["added", "removed", "changed"]
    text: str


Inline = Text | Maths | Reference | Mark | Revised
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
    """A table's column: its heading, and whether its cells are numbers (set to the right).

    Where `leads` is set its cells are the headings of their rows.
    """

    heading: Line
    numeric: bool = False
    leads: bool = False


@dataclass(frozen=True, slots=True)
class Table:
    """A table with a caption; every row has one line of inline content a column.

    `by_hand` says whether it has room for what people write into it on paper.
    """

    caption: str
    columns: tuple[Column, ...]
    rows: tuple[tuple[Line, ...], ...]
    by_hand: bool = False


@dataclass(frozen=True, slots=True)
class SourceText:
    """Text shown to the letter, as it stands in a file."""

    text: str


@dataclass(frozen=True, slots=True)
class Axis:
    """What an axis counts, in which unit, and how it is divided.

    A "decades" axis is logarithmic and takes positive values only; one in "degrees" is divided as a circle
    is. `ends` are its least and greatest value; None where the points decide.
    """

    title: str
    unit: str = ""
    scale: Literal["linear", "degrees", "decades"] = "linear"
    ends: tuple[float, float] | None = None


@dataclass(frozen=True, slots=True)
class Curve:
    """A line through points (across, up), by rising `across`; curves of one name look alike in all panels."""

    name: str
    points: tuple[tuple[float, float], ...]


@dataclass(frozen=True, slots=True)
class Spot:
    """A point that is marked on the curve of that name: a ring, a cross (a pole) or a dot."""

    curve: str
    across: float
    up: float
    shape: Literal["ring", "cross", "dot"] = "ring"


@dataclass(frozen=True, slots=True)
class Area:
    """What lies between two curves, (across, low, high) by rising `across`: shaded, and named in the legend."""

    name: str
    points: tuple[tuple[float, float, float], ...]


@dataclass(frozen=True, slots=True)
class Panel:
    """One field of a plot; `guides` are values at which a line goes across, such as 0 dB."""

    up: Axis
    curves: tuple[Curve, ...]
    spots: tuple[Spot, ...] = ()
    guides: tuple[float, ...] = ()
    areas: tuple[Area, ...] = ()


@dataclass(frozen=True, slots=True)
class Plot:
    """A figure of one panel or several, one below the other, that share the axis across.

    `words` say what the picture shows to those who do not see it; a `narrow` one takes half the page's width.
    """

    caption: str
    across: Axis
    panels: tuple[Panel, ...]
    words: str
    narrow: bool = False


@dataclass(frozen=True, slots=True)
class RootMap:
    """Poles and zeros (real, imaginary, multiplicity) of one response in the plane of s, in rad/s."""

    name: str
    poles: tuple[tuple[float, float, int], ...]
    zeros: tuple[tuple[float, float, int], ...]
    origin: int = 0


@dataclass(frozen=True, slots=True)
class RootMaps:
    """A figure of the roots of several responses side by side, each map labelled with its name.

    `origin` of a map counts zeros at the origin, poles negative. `words` are as those of a plot.
    """

    caption: str
    maps: tuple[RootMap, ...]
    words: str


@dataclass(frozen=True, slots=True)
class Circuit:
    """A figure of a circuit; `words` say how it is connected to those who do not see it."""

    caption: str
    drawing: Drawing
    words: str


@dataclass(frozen=True, slots=True)
class Folded:
    """Blocks that a screen shows when asked to and paper in smaller type, under a line of words."""

    title: Line
    blocks: tuple[Paragraph | Display | Table, ...]


Block = Paragraph | Display | Table | SourceText | Plot | RootMaps | Circuit | Folded


@dataclass(frozen=True, slots=True)
class Section:
    """A headed part of the sheet; `level` 1 is a main section, 2 a part of one.

    `about` is set as maths behind the words of the title. One that `folds` is shown by a screen when asked to.
    """

    title: str
    blocks: tuple[Block, ...]
    level: Literal[1, 2] = 1
    about: Maths | None = None
    folds: bool = False


def unfolded(blocks: tuple[Block, ...]) -> tuple[Block, ...]:
    """Give blocks in their order, each folded one followed by those within it."""
    found: list[Block] = []
    for block in blocks:
        found.append(block)
        if isinstance(block, Folded):
            found += block.blocks
    return tuple(found)


@dataclass(frozen=True, slots=True)
class Field:
    """A labelled entry of the title block."""

    label: str
    text: str


@dataclass(frozen=True, slots=True)
class Source:
    """A topology that a sheet carries: the stage that it describes, the file it was read from, and its text."""

    stage: str
    file: str
    text: str


@dataclass(frozen=True, slots=True)
class Sheet:
    """The whole document, with the files that it carries.

    `passed` says whether no check failed; `failures` names those that did, for the first page, `left_open`
    counts those that did not come to an end. A sheet on several topologies has them in `sources`, and no topology
    of its own. `status` and `warning` are what the title block and the note over the failures say of it, "" for
    what is said of every sheet.
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
    sources: tuple[Source, ...] = ()
    status: str = ""
    warning: str = ""
    left_open: int = 0
