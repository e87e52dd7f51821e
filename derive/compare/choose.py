"""Chooses what is compared: one quantity of each topology, all of one kind."""

from __future__ import annotations

from collections.abc import Sequence

from derive.errors import InputError
from derive.expressions.tree import Name
from derive.quantities.dimension import CURRENT, RESISTANCE, VOLTAGE, Dimension
from derive.quantities.words import did_you_mean, listed, quoted
from derive.sheet.document import Inline, Line, Maths, Text
from derive.topology.topology import GROUND, Find, Topology


def choose(topologies: Sequence[Topology], name: str | None) -> tuple[Find, ...]:
    """Give the quantity that each topology is compared by.

    Given: its `name`, or None for the first voltage or current that each asks for.
    Raises: InputError where a topology has no such quantity, or where they are not of one kind.
    """
    chosen = tuple(
        _first(topology) if name is None else _named(topology, name) for topology in topologies
    )
    first, first_topology = chosen[0], topologies[0]
    for find, topology in zip(chosen, topologies, strict=True):
        if dimension_of(find, topology) != dimension_of(first, first_topology):
            raise InputError(
                f"{find.name} is {kind_of(find, topology)}, but {first.name} of {_file(first_topology)} is "
                f"{kind_of(first, first_topology)}: these cannot stand side by side",
                where=str(find.place),
                cure="compare stages that ask for quantities of one kind, or name one with --find",
            )
    return chosen


def dimension_of(find: Find, topology: Topology) -> Dimension:
    """Give the dimension of a wanted quantity."""
    if find.quantity == "impedance":
        return RESISTANCE
    above = CURRENT if find.quantity == "current" else VOLTAGE
    return above / (CURRENT if _drive_kind(find, topology) == "current" else VOLTAGE)


def kind_of(find: Find, topology: Topology) -> str:
    """Say what kind of quantity is wanted: "a voltage per voltage"."""
    if find.quantity == "impedance":
        return "an impedance"
    return f"a {find.quantity} per {_drive_kind(find, topology)}"


def asked(find: Find) -> Line:
    """Say what is wanted of a stage, as its user wrote it: "voltage at node out per V_s"."""
    if find.quantity == "current":
        line: tuple[Inline, ...] = (Text("current through "), Maths(Name(find.part or "")))
    else:
        plus, minus = find.nodes or ("", "")
        against = "" if minus == GROUND else f" against {minus}"
        between = f"impedance between {plus} and {minus}"
        words = between if find.quantity == "impedance" else f"voltage at node {plus}{against}"
        line = (Text(words),)
    for place, (drive, weight) in enumerate(find.per):
        share = "" if weight == 1 else f"{weight} ".replace("-", "−")
        line = (*line, Text(f"{', ' if place else ' per '}{share}"), Maths(Name(drive)))
    return line


def _drive_kind(find: Find, topology: Topology) -> str:
    kinds = {drive.name: drive.quantity for drive in topology.drives}
    return "current" if {kinds[name] for name, _ in find.per} == {"current"} else "voltage"


def _file(topology: Topology) -> str:
    """Give the file as its user named it: several may be called topology.toml."""
    return topology.finds[0].place.file


def _first(topology: Topology) -> Find:
    found = next((find for find in topology.finds if find.quantity != "impedance"), None)
    if found is None:
        names = listed(find.name for find in topology.finds)
        raise InputError(
            f"no voltage or current is wanted in this topology, only {names}: there is no gain to compare",
            where=_file(topology),
            cure="add a table [find.NAME] with voltage or current and per, or name an impedance with --find",
        )
    return found


def _named(topology: Topology, name: str) -> Find:
    found = next((find for find in topology.finds if find.name == name), None)
    if found is None:
        names = [find.name for find in topology.finds]
        raise InputError(
            f"nothing named {quoted(name)} is wanted in this topology",
            where=_file(topology),
            cure=did_you_mean(name, names, f"it has {', '.join(names)}"),
        )
    return found
