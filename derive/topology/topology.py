"""The nouns of a topology file: everything the user wrote, each item with its file and line."""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from typing import Literal

from derive.quantities.symbol import Value

GROUND = "gnd"


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
    is sensed; `coils` the two inductors of a coupling; `parameters` further values by key (A_0, ...).
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
    tolerance: Fraction | None = None

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
class Topology:
    """One stage as its user described it, with the text it was read from."""

    file: str
    text: str
    title_block: TitleBlock
    node_words: tuple[tuple[str, str], ...]
    drives: tuple[Drive, ...]
    parts: tuple[Part, ...]
    finds: tuple[Find, ...]
