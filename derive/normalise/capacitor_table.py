"""Why a capacitor is a short or open: its reactance at the band's edges against what it sees.

The resistance is that between the part's two nodes with the part taken out, drives at zero, and the
other reactances as they are at mid-band: coupling and bypass capacitors short, parasitic ones and those
without a role open, inductors the reverse. For the low band that is the resistance of the short-circuit
time constants, for the high band that of the open-circuit time constants (Gray and Searle, Electronic
Principles, 1969; from memory). An op amp counts with its gain at low frequency.
"""

from __future__ import annotations

import math
from dataclasses import dataclass, replace
from fractions import Fraction
from typing import Literal

from derive.bands.choose import State, state_in
from derive.bands.rewire import label_of, rewire
from derive.bands.wiring import ends_of
from derive.devices.elements import (
    Capacitor,
    CurrentDrive,
    Element,
    Inductor,
    OnePoleGain,
    SmallSignal,
    VirtualShort,
)
from derive.errors import InputError
from derive.nodal.write import nodes_of
from derive.normalise.band_edges import BandEdges
from derive.normalise.exact_response import driving_point
from derive.topology.topology import GROUND, BandName, Find, Place, Role


@dataclass(frozen=True, slots=True)
class ReactanceAt:
    """The reactance in ohms at a frequency, and its ratio to the resistance that the part sees.

    `where` is "lower edge", "upper edge" or "centre". `ratio` is None where the resistance is zero,
    infinite or not known: what carries a given current is no short by its small reactance.
    """

    where: Literal["lower edge", "upper edge", "centre"]
    hertz: float
    ohms: float
    ratio: float | None


@dataclass(frozen=True, slots=True)
class CapacitorRow:
    """One capacitor or inductor of the circuit in one band.

    `symbol` is its symbol, `resistance` what it sees in ohms: `says` tells in words where that is None
    ("infinite", and why) or could not be worked. `at` is empty where its value is open or the band has no edge.
    """

    symbol: str
    part: str
    kind: Literal["capacitor", "inductor"]
    role: Role
    state: State
    resistance: Fraction | None
    says: str
    at: tuple[ReactanceAt, ...]


def capacitor_table(circuit: SmallSignal, band: BandName, edges: BandEdges) -> tuple[CapacitorRow, ...]:
    """Give a row for every capacitor and inductor of the full circuit, in its order.

    Given: the circuit before any band's changes, and its `band_edges`.
    """
    return tuple(
        _row(circuit, element, band, edges)
        for element in circuit.elements
        if isinstance(element, Capacitor | Inductor)
    )


def _row(
    circuit: SmallSignal, element: Capacitor | Inductor, band: BandName, edges: BandEdges
) -> CapacitorRow:
    role = dict(circuit.roles).get(element.name, "")
    inductor = isinstance(element, Inductor)
    resistance, says = resistance_seen(circuit, element)
    value = next(symbol.value for symbol in circuit.symbols if symbol.name == label_of(element))
    at: list[ReactanceAt] = []
    for where, hertz in _frequencies(band, edges):
        if value is None:
            continue
        omega = 2 * math.pi * hertz
        ohms = omega * float(value) if inductor else 1 / (omega * float(value))
        ratio = ohms / float(resistance) if resistance else None
        at.append(ReactanceAt(where, hertz, ohms, ratio))
    return CapacitorRow(
        label_of(element),
        element.part,
        "inductor" if inductor else "capacitor",
        role,
        state_in(role, band, inductor=inductor),
        resistance,
        says,
        tuple(at),
    )


def _frequencies(
    band: BandName, edges: BandEdges
) -> list[tuple[Literal["lower edge", "upper edge", "centre"], float]]:
    lower, upper = edges.of(band)
    found: list[tuple[Literal["lower edge", "upper edge", "centre"], float]] = []
    if lower is not None:
        found.append(("lower edge", lower))
    if lower is not None and upper is not None and lower < upper:
        found.append(("centre", math.sqrt(lower * upper)))
    if upper is not None and upper != lower:
        found.append(("upper edge", upper))
    return found


def resistance_seen(circuit: SmallSignal, element: Capacitor | Inductor) -> tuple[Fraction | None, str]:
    """Give the resistance between a part's nodes, and "" or words where there is no number.

    The words are "infinite" with the reason where it is plain, "a value is left open", or what makes the
    circuit unworkable.
    """
    changed = _resistive(circuit)
    changed[element.name] = "open"
    bare = replace(
        circuit,
        elements=tuple(map(_at_low_frequency, circuit.elements)),
        topology=replace(circuit.topology, finds=()),
    )
    grounded = [supply.node for supply in circuit.topology.supplies]
    try:
        rewired = rewire(bare, changed, grounded)
        names = dict(rewired.nodes)
        first, second = (names.get(node, node) for node in element.between)
        if first == second:
            return Fraction(0), ""
        if any(symbol.value is None for symbol in rewired.circuit.symbols):
            return None, "a value is left open"
        find = Find("Z", Place(circuit.topology.file, 0), "impedance", nodes=(first, second))
        if not {first, second} <= {*nodes_of(rewired.circuit), GROUND}:
            return None, _infinite(circuit, element)
        found = driving_point(rewired.circuit, find)
    except InputError as error:
        return None, error.what
    return (None, _infinite(circuit, element)) if found is None else (found, "")


def _infinite(circuit: SmallSignal, element: Capacitor | Inductor) -> str:
    """Word an infinite resistance; where the part alone carries on the current of a drive, that is said."""
    for node in element.between:
        others = [item for item in circuit.elements if item != element and node in ends_of(item)]
        drives = [drive for drive in circuit.drives if node in drive.nodes]
        if not others and len(drives) == 1 and isinstance(drives[0], CurrentDrive):
            return f"infinite: in series with the current drive {drives[0].name}"
    return "infinite"


def _resistive(circuit: SmallSignal) -> dict[str, State]:
    """Give every reactance the state that it has at mid-band."""
    roles = dict(circuit.roles)
    found: dict[str, State] = {}
    for element in circuit.elements:
        if isinstance(element, Capacitor | Inductor):
            inductor = isinstance(element, Inductor)
            state = state_in(roles.get(element.name, ""), "mid", inductor=inductor)
            resting: State = "short" if inductor else "open"
            found[element.name] = resting if state == "kept" else state
    return found


def _at_low_frequency(element: Element) -> Element:
    """Give an op amp its gain at low frequency; everything else stays."""
    if not isinstance(element, OnePoleGain):
        return element
    if element.dc_gain is None:
        return VirtualShort(element.name, element.part, element.output, element.inputs)
    return replace(element, unity=None)
