"""The nouns of a drawing: what lies where, in units of which a page is 640 wide; y grows downwards."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

from derive.drawing.letters import Words
from derive.drawing.scene import Look

Point = tuple[float, float]
Side = Literal["start", "middle", "end"]
LabelKind = Literal["part", "value", "node", "note"]


@dataclass(frozen=True, slots=True)
class Box:
    """A rectangle that something takes up."""

    left: float
    top: float
    right: float
    bottom: float

    def meets(self, other: Box) -> bool:
        """Say whether the two share more than an edge."""
        across = self.left < other.right - 1e-6 and other.left < self.right - 1e-6
        return across and self.top < other.bottom - 1e-6 and other.top < self.bottom - 1e-6

    def grown(self, by: float) -> Box:
        """Give the box with so much more on every side."""
        return Box(self.left - by, self.top - by, self.right + by, self.bottom + by)


@dataclass(frozen=True, slots=True)
class Stroke:
    """A run of points that is drawn through, closed or not, filled or not; `bend` takes them as a curve.

    A curve has one point, then three for each piece: two controls and an end.
    """

    points: tuple[Point, ...]
    closed: bool = False
    filled: bool = False
    bend: bool = False


@dataclass(frozen=True, slots=True)
class Ring:
    """A circle."""

    centre: Point
    radius: float
    filled: bool = False


@dataclass(frozen=True, slots=True)
class Placed:
    """A symbol in its place: its pins, the box that it takes up, and the lines that it is drawn with."""

    name: str
    look: Look
    pins: tuple[tuple[str, Point], ...]
    box: Box
    shapes: tuple[Stroke | Ring, ...]


@dataclass(frozen=True, slots=True)
class Wire:
    """A straight piece of wire, level or upright."""

    start: Point
    end: Point


@dataclass(frozen=True, slots=True)
class Label:
    """Words on the drawing; `at` is where they begin, end or have their middle (`side`), on their base line.

    `of` says what it is the label of: a part or node by its name. A node's is read at `anchor`, a point on
    its wire.
    """

    words: Words
    at: Point
    side: Side
    box: Box
    kind: LabelKind
    of: str = ""
    anchor: Point | None = None


@dataclass(frozen=True, slots=True)
class Mark:
    """A coloured sign beside a wire: what a controlled source follows is counted from + to −.

    An arrow stands at the end of a part whose current is followed. `anchor` is the point on the wire;
    `colour` tells the sources of one drawing apart.
    """

    source: str
    sign: Literal["+", "-", "arrow"]
    at: Point
    anchor: Point
    box: Box
    colour: int
    part: str = ""
    towards: Point = (0.0, 0.0)


@dataclass(frozen=True, slots=True)
class Drawing:
    """A circuit as it is drawn: symbols, wires, dots where wires are joined, labels and marks.

    `supplies` holds (supply, its node): the line of a supply bears the supply's name.
    """

    symbols: tuple[Placed, ...]
    wires: tuple[Wire, ...]
    dots: tuple[Point, ...]
    labels: tuple[Label, ...]
    marks: tuple[Mark, ...]
    supplies: tuple[tuple[str, str], ...]
    width: float
    height: float


@dataclass(frozen=True, slots=True)
class NotDrawn:
    """A circuit that is not drawn, with a sentence that says why."""

    why: str
