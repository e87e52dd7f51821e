"""The nouns of what is to be drawn: items with the nodes of their pins, before anything has a place."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

from derive.drawing.letters import Words

Look = Literal[
    "resistor",
    "capacitor",
    "inductor",
    "diode",
    "box",
    "voltage drive",
    "current drive",
    "controlled voltage",
    "controlled current",
    "npn",
    "pnp",
    "n-channel mosfet",
    "p-channel mosfet",
    "n-channel jfet",
    "p-channel jfet",
    "opamp",
    "supply",
    "ground",
]
TRANSISTORS = frozenset(
    ["npn", "pnp", "n-channel mosfet", "p-channel mosfet", "n-channel jfet", "p-channel jfet"]
)
# What lets a direct current through, as far as the look of a schematic is concerned.
CONDUCTORS = frozenset(["resistor", "inductor", "diode", *TRANSISTORS])


@dataclass(frozen=True, slots=True)
class Item:
    """A part or element to be drawn: its look, and the node of each pin, in an order that the look fixes.

    Two pins: the first is the positive or the first one written. Transistors: control, then the pin that is
    drawn above (an npn's collector, a pnp's emitter), then the other, then a bulk. Op amps: plus, minus, output.
    """

    name: str
    look: Look
    pins: tuple[tuple[str, str], ...]
    title: Words
    value: Words = ()
    dotted: bool = False

    def node(self, pin: int) -> str:
        """Give the node of a pin by its place."""
        return self.pins[pin][1]

    @property
    def nodes(self) -> tuple[str, ...]:
        """Give the node of every pin."""
        return tuple(node for _, node in self.pins)


@dataclass(frozen=True, slots=True)
class Sense:
    """What a controlled source follows: the voltage between two nodes, or the current of an item."""

    source: str
    between: tuple[str, str] | None = None
    through: str | None = None


@dataclass(frozen=True, slots=True)
class Scene:
    """All that is to be drawn.

    `top` and `bottom` are the nodes of supplies, above and below the signals; `starts` and `ends` the nodes
    where a signal enters and leaves; `upright` holds (item, the node at its upper end) where the circuit
    itself says so, and `level` the items that lie; `order` the nodes from left to right, as far as they were
    told; `notes` stand beneath the drawing.
    """

    items: tuple[Item, ...]
    senses: tuple[Sense, ...] = ()
    top: tuple[str, ...] = ()
    bottom: tuple[str, ...] = ()
    starts: tuple[str, ...] = ()
    ends: tuple[str, ...] = ()
    upright: tuple[tuple[str, str], ...] = ()
    level: tuple[str, ...] = ()
    mirrored: tuple[str, ...] = ()
    order: tuple[str, ...] = ()
    notes: tuple[Words, ...] = ()
    rectangles: bool = False

    @property
    def rails(self) -> tuple[str, ...]:
        """Give every node that is a supply's."""
        return (*self.top, *self.bottom)
