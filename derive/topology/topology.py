"""The nouns of a topology file: everything the user wrote, each item with its file and line."""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from typing import Literal

from derive.expressions.tree import Expression
from derive.quantities.symbol import Value
from derive.topology.sign_off import Reviewed, Revision

GROUND = "gnd"
# What a capacitor or inductor is for; it says in which bands it acts. "" is kept in every band.
Role = Literal["", "coupling", "bypass", "parasitic"]
BandName = Literal["low", "mid", "high", "full"]
# How results are to be derived: "" leaves it to the count of terms.
SheetForm = Literal["", "nested", "expanded"]
# What a sheet can plot, and what it plots where the user says nothing.
PlotKind = Literal["response", "poles", "step", "delay"]
PLOTS: tuple[PlotKind, ...] = ("response", "poles", "step")
# 27 °C, common practice for small-signal parameters.
ROOM_TEMPERATURE = Fraction("300.15")


@dataclass(frozen=True, slots=True)
class Place:
    """A line of a file, counted from 1."""

    file: str
    line: int

    def __str__(self) -> str:
        return f"{self.file}:{self.line}"


@dataclass(frozen=True, slots=True)
class Part:
    """One line of [parts].

    `wires` holds the node lists by the key they were written under: (("flows", ("c", "e")),
    ("senses", ("b", "e"))); a single node is a tuple of one. `senses_part` is the part whose current
    is sensed; `coils` the two inductors of a coupling; `parameters` further values by key (A_0, ...),
    those of the part's own before those of its model; `words` its choices by key (polarity, ...).
    """

    name: str
    kind: str
    place: Place
    value: Value | None = None
    model: str | None = None
    wires: tuple[tuple[str, tuple[str, ...]], ...] = ()
    senses_part: str | None = None
    coils: tuple[str, str] | None = None
    parameters: tuple[tuple[str, Value], ...] = ()
    words: tuple[tuple[str, str], ...] = ()
    tolerance: Fraction | None = None
    role: Role = ""

    def nodes(self, key: str) -> tuple[str, ...]:
        """Give the nodes written under `key`; a KeyError where the kind has no such key."""
        return dict(self.wires)[key]

    @property
    def all_nodes(self) -> tuple[str, ...]:
        """Every node that the part names, in the order written, repeats kept."""
        return tuple(node for _, nodes in self.wires for node in nodes)


@dataclass(frozen=True, slots=True)
class Drive:
    """An independent small-signal source: plus and minus node, or current from first to second."""

    name: str
    place: Place
    quantity: Literal["voltage", "current"]
    nodes: tuple[str, str]


@dataclass(frozen=True, slots=True)
class Supply:
    """A DC supply from a node to ground: signal ground in every band; `dc` is used for the bias."""

    name: str
    place: Place
    node: str
    dc: Value


@dataclass(frozen=True, slots=True)
class Merge:
    """A name that the user gives to parts in parallel or in series: one line of [merge]."""

    name: str
    place: Place
    parts: tuple[str, ...]


@dataclass(frozen=True, slots=True)
class Find:
    """A quantity that is wanted.

    `nodes` is the pair (plus, minus) for a voltage or impedance; `part` the part whose current is
    wanted. `per` holds (drive, weight); it is empty for an impedance.
    """

    name: str
    place: Place
    quantity: Literal["voltage", "current", "impedance"]
    nodes: tuple[str, str] | None = None
    part: str | None = None
    per: tuple[tuple[str, Fraction], ...] = ()


@dataclass(frozen=True, slots=True)
class DrawingHints:
    """The [drawing] table: how the circuit is to be drawn, as far as the user cares.

    `order` holds nodes from left to right; `upright` and `level` parts that stand or lie; `mirrored` devices
    whose control comes from the right.
    """

    order: tuple[str, ...] = ()
    upright: tuple[str, ...] = ()
    level: tuple[str, ...] = ()
    mirrored: tuple[str, ...] = ()
    resistors: Literal["zigzag", "rectangle"] = "zigzag"


AssumptionForm = Literal["to_inf", "to_zero", "much_greater", "much_less", "equal"]


@dataclass(frozen=True, slots=True)
class Assumption:
    """An engineering approximation: left -> inf, left -> 0, left >> right, left << right or left = right.

    `that` is the statement as it was written; `right` is None for a limit. `finds` and `bands` name the
    results that it is made for; empty for all. `by` says who made it: the user, or the tool, whose
    assumptions have no place.
    """

    that: str
    form: AssumptionForm
    left: Expression
    right: Expression | None = None
    because: str = ""
    place: Place | None = None
    by: Literal["user", "tool"] = "user"
    finds: tuple[str, ...] = ()
    bands: tuple[BandName, ...] = ()


@dataclass(frozen=True, slots=True)
class Budget:
    """What assumptions may cost: errors as fractions, decibels and degrees, over a range of frequencies.

    `range_hz` is None where the user stated none. `simplify` asks for further assumptions by the tool.
    """

    gain: Fraction = Fraction(2, 100)
    magnitude_db: Fraction = Fraction(1, 2)
    phase_deg: Fraction = Fraction(5)
    range_hz: tuple[Fraction, Fraction] | None = None
    simplify: bool = False
    place: Place | None = None


@dataclass(frozen=True, slots=True)
class TitleBlock:
    """The [sheet] table; "" where nothing was written."""

    title: str
    number: str = ""
    revision: str = ""
    prepared: str = ""
    checked: str = ""
    approved: str = ""
    date: str = ""
    project: str = ""
    notes: str = ""


@dataclass(frozen=True, slots=True)
class Attached:
    """A file that the topology names: `name` as written there, `path` for messages, and its text."""

    name: str
    path: str
    text: str
    place: Place


@dataclass(frozen=True, slots=True)
class Topology:
    """One stage as its user described it, with the text it was read from.

    `bands` is empty where the user chose none; `temperature` is that of the junctions, in kelvin. `hand` is the hand
    derivation that goes beside the results, None where there is none.
    """

    file: str
    text: str
    title_block: TitleBlock
    node_words: tuple[tuple[str, str], ...]
    drives: tuple[Drive, ...]
    parts: tuple[Part, ...]
    finds: tuple[Find, ...]
    supplies: tuple[Supply, ...] = ()
    bands: tuple[BandName, ...] = ()
    temperature: Fraction = ROOM_TEMPERATURE
    merges: tuple[Merge, ...] = ()
    assumptions: tuple[Assumption, ...] = ()
    budget: Budget = Budget()
    form: SheetForm = ""
    revisions: tuple[Revision, ...] = ()
    reviews: tuple[Reviewed, ...] = ()
    plots: tuple[PlotKind, ...] = PLOTS
    drawing: DrawingHints = DrawingHints()
    hand: Attached | None = None
