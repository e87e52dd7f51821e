"""The operating point: DC voltages and currents, how the currents follow, and what the checks on them say."""

from __future__ import annotations

import math

from derive.bias.operating_point import CurrentDerivation, NewtonCheck, OperatingPoint
from derive.check.verdict import Outcome
from derive.devices.parameters import DevicePoint
from derive.quantities.dimension import CURRENT, VOLTAGE
from derive.quantities.format import engineering
from derive.sheet.document import (
    Block,
    Column,
    Display,
    Line,
    Mark,
    Paragraph,
    Section,
    Table,
    Text,
)
from derive.sheet.figures import newton_difference
from derive.sheet.view import bias_wording
from derive.sheet.wording import marked

ORDER = 22
SCOPE = "sheet"
POWER_UNIT = "W"
METHODS = {
    "linear": "Junction voltages and current gains are taken as constant, so that the DC circuit is linear.",
    "square law, closed form": "The drain current follows from the square law in closed form.",
    "square law, numeric": "Several devices follow the square law; their currents were found numerically.",
    "exponential law, numeric": "With constant base–emitter voltages a device would not conduct: the currents "
    "were found numerically from the exponential laws.",
}
WORDS = {True: "pass", False: "fail"}


def compose(outcome: Outcome) -> tuple[Section, ...]:
    """Give the section; nothing where no operating point was asked for."""
    point = outcome.point
    if point is None:
        return ()
    supplies = outcome.circuit.topology.supplies
    fed = ", ".join(
        f"{supply.name} = {supply.dc.text.replace('-', '−')} at node {supply.node}" for supply in supplies
    )
    lead = (
        f"Capacitors are open, inductors short, drives at zero. Supplies: {fed}. {METHODS[point.method]}"
    )
    blocks: list[Block] = [Paragraph(marked(lead)), _devices(point), _nodes(point)]
    main = Section("Operating point", tuple(blocks))
    parts = [_derived(place, found) for place, found in enumerate(point.derivations, 1)]
    return (main, *parts, Section("Checks on the operating point", (_regions(point), _newton(point)), 2))


def _columns(*headings: str, numeric: tuple[str, ...] = ()) -> tuple[Column, ...]:
    return tuple(Column((Text(heading),), heading in numeric) for heading in headings)


def _cells(*words: str) -> tuple[Line, ...]:
    return tuple(marked(word) for word in words)


def _devices(point: OperatingPoint) -> Table:
    power = dict(point.dissipation)
    rows = []
    for device in point.devices:
        lost = power.get(device.part)
        watts = "" if lost is None else engineering(lost, VOLTAGE, 4, unit=POWER_UNIT)
        current = engineering(device.current, CURRENT, 4)
        rows.append(_cells(device.part, current, _terminals(device), watts))
    columns = _columns(
        "Device", "Current", "Terminal voltages", "Dissipation", numeric=("Current", "Dissipation")
    )
    return Table("Devices at DC", columns, tuple(rows))


def _terminals(device: DevicePoint) -> str:
    return ", ".join(f"{key} {engineering(volts, VOLTAGE, 4)}" for key, volts in device.voltages)


def _nodes(point: OperatingPoint) -> Table:
    rows = [_cells(node, engineering(volts, VOLTAGE, 4)) for node, volts in point.nodes]
    return Table("Node voltages at DC", _columns("Node", "Voltage", numeric=("Voltage",)), tuple(rows))


def _derived(place: int, found: CurrentDerivation) -> Section:
    title = f"Current of {found.part}"
    if found.derivation is None:
        return Section(title, (Paragraph(marked(_sentence(found.says))),), 2)
    wording = bias_wording(found.derivation, place)
    blocks: list[Block] = [Paragraph(marked(_sentence(found.says)))] if found.says else []
    if found.broken:
        broken = "; ".join(f"({wording.label(number)}) {why}" for number, why in found.broken)
        blocks.append(Paragraph((Text(f"Steps whose proof failed: {broken}."),), "alarm"))
    for step in found.steps:
        number = step.number
        blocks.append(
            Display(step.equation, wording.says(step), wording.label(number), wording.anchor(number))
        )
    return Section(title, tuple(blocks), 2)


def _sentence(words: str) -> str:
    return f"{words[:1].upper()}{words[1:]}."


def _regions(point: OperatingPoint) -> Table:
    rows = [
        (
            *_cells(region.part, region.measured, region.limit),
            (Mark(region.passed, WORDS[region.passed]),),
        )
        for region in point.regions
    ]
    return Table("Regions of operation", _columns("Device", "Measured", "Limit", "Verdict"), tuple(rows))


def _newton(point: OperatingPoint) -> Table:
    rows: list[tuple[Line, ...]] = []
    for check in point.newton:
        cells = _cells(check.part, _current(check), newton_difference(check), check.limit)
        rows.append((*cells, (Mark(check.passed, WORDS[check.passed]),)))
    columns = _columns(
        "Device", "Current", "Difference", "Limit", "Verdict", numeric=("Current", "Difference")
    )
    return Table("The same currents by Newton's method on the devices' own laws", columns, tuple(rows))


def _current(check: NewtonCheck) -> str:
    if math.isnan(check.current):
        return "did not converge"
    return engineering(check.current, CURRENT, 4)
