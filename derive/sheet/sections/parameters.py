"""The small-signal parameters of every device: value, origin, and the equation that gives them."""

from __future__ import annotations

from derive.check.verdict import Outcome
from derive.devices.parameters import DeviceParameters, ParameterLine
from derive.devices.thermal import thermal_voltage
from derive.expressions.tree import Name
from derive.expressions.walk import names_of
from derive.quantities.dimension import VOLTAGE
from derive.quantities.format import engineering
from derive.sheet.document import Block, Column, Line, Maths, Paragraph, Section, Table, Text
from derive.sheet.wording import marked, told

ORDER = 26
SCOPE = "sheet"


def compose(outcome: Outcome) -> tuple[Section, ...]:
    """Give the section; nothing where the circuit has no device."""
    devices = [device for device in outcome.circuit.devices if device.lines or device.left_out]
    if not devices:
        return ()
    kelvin = outcome.circuit.topology.temperature
    volts = engineering(thermal_voltage(kelvin), VOLTAGE, 6)
    lead: Line = (
        Text("Thermal voltage "),
        Maths(Name("V_T")),
        Text(f" = kT/q = {volts} at {engineering(kelvin, VOLTAGE, 6, unit='K')} (k and q: CODATA 2018)."),
    )
    blocks: list[Block] = [Paragraph(lead)] if _uses_temperature(devices) else []
    blocks.append(_table([line for device in devices for line in device.lines]))
    blocks += [Paragraph(marked(words), "note") for device in devices for words in _left_out(device)]
    return (Section("Small-signal parameters", tuple(blocks)),)


def _uses_temperature(devices: list[DeviceParameters]) -> bool:
    """Whether a parameter follows from the thermal voltage; those of field-effect devices do not."""
    equations = (line.equation for device in devices for line in device.lines)
    return any(equation is not None and "V_T" in names_of(equation) for equation in equations)


def _table(lines: list[ParameterLine]) -> Table:
    columns = tuple(
        Column((Text(heading),), heading == "Value")
        for heading in ("Parameter", "Value", "Origin", "From")
    )
    rows = tuple((_symbol(line), _value(line), told(line.says), _equation(line)) for line in lines)
    return Table("Small-signal parameters", columns, rows)


def _symbol(line: ParameterLine) -> Line:
    return (Maths(Name(line.symbol)),)


def _value(line: ParameterLine) -> Line:
    if line.value is None:
        return (Text("open (?)"),)
    return (Text(engineering(line.value, line.dimension, 5)),)


def _equation(line: ParameterLine) -> Line:
    return (Maths(line.equation),) if line.equation is not None else (Text("–"),)


def _left_out(device: DeviceParameters) -> list[str]:
    return [f"{device.part} without {left.symbol}, {left.why}." for left in device.left_out]
