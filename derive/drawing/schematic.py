"""The scene of a schematic: every part of a topology with its symbol, its supplies and its drives."""

from __future__ import annotations

from fractions import Fraction

from derive.devices.registry import models
from derive.drawing.currents import upright_parts
from derive.drawing.letters import Run, Words, name_words, plain_words
from derive.drawing.scene import Item, Look, Scene, Sense
from derive.quantities.format import engineering
from derive.topology.topology import GROUND, Part, Supply, Topology

_DIGITS = 15
_TWO_PINS: dict[str, tuple[Look, str]] = {
    "resistor": ("resistor", "between"),
    "capacitor": ("capacitor", "between"),
    "inductor": ("inductor", "between"),
    "transconductance": ("controlled current", "flows"),
    "current_gain": ("controlled current", "flows"),
    "voltage_gain": ("controlled voltage", "output"),
    "transresistance": ("controlled voltage", "output"),
}
# The keys of a transistor's control, of what is drawn above for an n-type, and of the other.
_TRANSISTORS: dict[str, tuple[str, str, str]] = {
    "bipolar": ("base", "collector", "emitter"),
    "mosfet": ("gate", "drain", "source"),
    "jfet": ("gate", "drain", "source"),
}


class NoSymbolError(Exception):
    """A part that there is no symbol for."""


def scene_of_topology(topology: Topology) -> Scene:
    """Give the scene of the schematic.

    Raises: NoSymbolError for a kind of part with more pins than any symbol that there is.
    """
    dotted = {coil for part in topology.parts for coil in part.coils or ()}
    items = [_drive(d.name, d.quantity, d.nodes) for d in topology.drives]
    items += [_item(part, part.name in dotted) for part in topology.parts if part.coils is None]
    above, below = _supplies(topology)
    items += [_supply(supply) for supply in topology.supplies]
    hints = topology.drawing
    told = tuple(item for item in items if item.name in hints.upright)
    return Scene(
        tuple(items),
        tuple(sense for part in topology.parts for sense in _senses(part)),
        above,
        below,
        starts=starts_of(tuple(drive.nodes for drive in topology.drives)),
        ends=ends_of(topology),
        upright=(
            *((item.name, item.node(0)) for item in told),
            *upright_parts(tuple(items), above, below),
        ),
        level=hints.level,
        mirrored=hints.mirrored,
        order=hints.order,
        notes=tuple(_coupling(part) for part in topology.parts if part.coils is not None),
        rectangles=hints.resistors == "rectangle",
    )


def starts_of(drives: tuple[tuple[str, str], ...]) -> tuple[str, ...]:
    """Give the nodes that drives drive, in order."""
    return tuple(dict.fromkeys(node for nodes in drives for node in nodes if node != GROUND))


def ends_of(topology: Topology) -> tuple[str, ...]:
    """Give the nodes where a result is looked for, voltages before impedances."""
    wanted = sorted(topology.finds, key=lambda find: find.quantity == "impedance")
    nodes = (node for find in wanted for node in find.nodes or ())
    return tuple(dict.fromkeys(node for node in nodes if node != GROUND))


def _drive(name: str, quantity: str, nodes: tuple[str, str]) -> Item:
    if quantity == "voltage":
        return Item(name, "voltage drive", (("plus", nodes[0]), ("minus", nodes[1])), name_words(name))
    return Item(name, "current drive", (("from", nodes[0]), ("to", nodes[1])), name_words(name))


def _supplies(topology: Topology) -> tuple[tuple[str, ...], tuple[str, ...]]:
    """Give the nodes of supplies above and below: by the sign of the voltage, the highest outermost."""
    volts = {supply.node: supply.dc.exact or Fraction(0) for supply in topology.supplies}
    above = sorted((node for node in volts if volts[node] >= 0), key=lambda node: volts[node])
    below = sorted((node for node in volts if volts[node] < 0), key=lambda node: -volts[node])
    return tuple(above), tuple(below)


def _supply(supply: Supply) -> Item:
    value = plain_words(f"  {supply.dc.text.replace('-', '−')}")
    return Item(supply.name, "supply", (("node", supply.node),), (*name_words(supply.name), *value))


def _item(part: Part, dotted: bool) -> Item:
    title, value = name_words(part.name), _value(part)
    if part.kind in _TWO_PINS:
        look, key = _TWO_PINS[part.kind]
        first, second = part.nodes(key)
        return Item(part.name, look, (("1", first), ("2", second)), title, value, dotted)
    if part.kind in _TRANSISTORS:
        return _transistor(part, title)
    if part.kind == "diode":
        pins = tuple((key, part.nodes(key)[0]) for key in ("anode", "cathode"))
        return Item(part.name, "diode", pins, title, value)
    if part.kind in ("ideal_opamp", "opamp"):
        return opamp_item(part.name, part.nodes("inputs"), part.nodes("output")[0], title)
    pins = tuple((key, nodes[0]) for key, nodes in part.wires)
    pins = pins if len(pins) != 1 else tuple(zip("12", part.all_nodes, strict=False))
    if len(pins) != 2:
        raise NoSymbolError(part.kind)
    return Item(part.name, "box", pins, title, value)


def opamp_item(name: str, inputs: tuple[str, ...], output: str, title: Words) -> Item:
    """Give an op amp as an item."""
    return Item(name, "opamp", (("plus", inputs[0]), ("minus", inputs[1]), ("output", output)), title)


def _transistor(part: Part, title: Words) -> Item:
    keys = _TRANSISTORS[part.kind]
    polarity = dict(part.words).get("polarity", "npn" if part.kind == "bipolar" else "n-channel")
    n_type = polarity in ("npn", "n-channel")
    control, upper, lower = keys if n_type else (keys[0], keys[2], keys[1])
    pins = [(key, part.nodes(key)[0]) for key in (control, upper, lower)]
    if "bulk" in dict(part.wires):
        pins.append(("bulk", part.nodes("bulk")[0]))
    looks: dict[str, tuple[Look, Look]] = {
        "bipolar": ("npn", "pnp"),
        "mosfet": ("n-channel mosfet", "p-channel mosfet"),
        "jfet": ("n-channel jfet", "p-channel jfet"),
    }
    return Item(part.name, looks[part.kind][0 if n_type else 1], tuple(pins), title)


def _value(part: Part) -> Words:
    spec = models()[part.kind].SPEC
    if part.value is None or spec.dimension is None:
        return ()
    if part.value.exact is None:
        return plain_words("?")
    return plain_words(engineering(part.value.exact, spec.dimension, _DIGITS).replace("-", "−"))


def _senses(part: Part) -> tuple[Sense, ...]:
    if part.senses_part:
        return (Sense(part.name, through=part.senses_part),)
    if part.kind in ("transconductance", "voltage_gain"):
        plus, minus = part.nodes("senses")
        return (Sense(part.name, (plus, minus)),)
    return ()


def _coupling(part: Part) -> Words:
    first, second = part.coils or ("", "")
    value = f" = {part.value.text}" if part.value and part.value.exact is not None else ""
    return (
        *name_words(part.name),
        Run(f"{value} couples "),
        *name_words(first),
        Run(" and "),
        *name_words(second),
        Run("; dots at their first ends"),
    )
