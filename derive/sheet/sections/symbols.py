"""List of symbols: every name in the formulas, with its value, unit and origin."""

from __future__ import annotations

from derive.check.verdict import Outcome
from derive.devices.thermal import thermal_voltage
from derive.expressions.tree import Expression, Name
from derive.quantities.dimension import VOLTAGE
from derive.quantities.format import engineering
from derive.quantities.symbol import Symbol
from derive.sheet.definitions import definitions_of
from derive.sheet.document import Column, Line, Maths, Section, Table, Text
from derive.sheet.wording import joined, marked, told

ORDER = 84
SCOPE = "sheet"
READ_DIGITS = 6
Row = tuple[str, Line, Line]


def compose(outcome: Outcome) -> tuple[Section, ...]:
    """Give the section: names in the order of the alphabet, those with a subscript after their letter."""
    found: dict[str, Row] = {}
    for name, value, origin in (
        *_of_the_circuit(outcome),
        *_merged(outcome),
        *_words(outcome),
        *_of_results(outcome),
        *_general(outcome),
    ):
        found.setdefault(name, (name, value, origin))
    rows = tuple(
        ((Maths(Name(name)),), value, origin)
        for name, value, origin in sorted(found.values(), key=lambda row: _place(row[0]))
    )
    columns = (
        Column((Text("Symbol"),)),
        Column((Text("Value"),), numeric=True),
        Column((Text("What it is, and where it comes from"),)),
    )
    return (Section("List of symbols", (Table("Symbols of this sheet", columns, rows),)),)


def _place(name: str) -> tuple[str, str, str]:
    """Give the place of a name in the alphabet: its letter, small or capital together, then what follows."""
    base, _, rest = name.partition("_")
    return base.casefold(), base, rest.rjust(40) if rest.isdigit() else rest


def _of_the_circuit(outcome: Outcome) -> list[Row]:
    rows: list[Row] = []
    devices = {
        line.symbol: f"{device.part}: {line.says}"
        for device in outcome.circuit.devices
        for line in device.lines
    }
    for symbol in outcome.circuit.symbols:
        tolerance = f" ± {float(100 * symbol.tolerance):g} %" if symbol.tolerance else ""
        origin = devices.get(symbol.name, symbol.origin)
        rows.append((symbol.name, _value(symbol), told(f"{origin}{tolerance}")))
    for drive in outcome.circuit.topology.drives:
        plus, minus = drive.nodes
        where = (
            f"between {plus} and {minus}" if drive.quantity == "voltage" else f"from {plus} to {minus}"
        )
        rows.append((drive.name, (Text("drive"),), (Text(f"{drive.quantity} source {where}"),)))
    for supply in outcome.circuit.topology.supplies:
        value = supply.dc.exact
        volts = "open (?)" if value is None else engineering(value, VOLTAGE, READ_DIGITS)
        rows.append((supply.name, (Text(volts),), (Text(f"supply at node {supply.node}"),)))
    return rows


def _value(symbol: Symbol) -> Line:
    if symbol.value is None:
        return (Text("open (?)"),)
    return (Text(engineering(symbol.value, symbol.dimension, READ_DIGITS)),)


def _merged(outcome: Outcome) -> list[Row]:
    bands = outcome.bands.bands if outcome.bands else ()
    return [
        _defined(merged.name, merged.definition, "merged parts")
        for band in bands
        for merged in band.circuit.definitions
    ]


def _words(outcome: Outcome) -> list[Row]:
    return [
        _defined(name, value, "in readable forms")
        for result in outcome.results
        for name, value in definitions_of(result.solution)
    ]


def _defined(name: str, value: Expression, what: str) -> Row:
    return name, (Text("defined"),), (Maths(value), Text(f", {what}"))


def _of_results(outcome: Outcome) -> list[Row]:
    """Name what is sought, and the unknowns of the equations."""
    words = dict(outcome.circuit.topology.node_words)
    rows: list[Row] = []
    for result in outcome.results:
        system = result.solution.derivation.system
        rows.append((system.find.name, (Text("result"),), (Text(f"{system.find.quantity} sought"),)))
        for unknown in system.unknowns:
            kind = "voltage at node" if unknown.quantity == "voltage" else "current through"
            said = f" ({words[unknown.subject]})" if unknown.subject in words else ""
            rows.append((unknown.name, (Text("unknown"),), marked(f"{kind} {unknown.subject}{said}")))
    return rows


def _general(outcome: Outcome) -> list[Row]:
    rows: list[Row] = [
        ("s", (Text("variable"),), (Text("complex angular frequency, j·2πf for a sine wave"),)),
        ("K", (Text("result"),), (Text("gain in front of the normal form"),)),
        (
            "a_k",
            (Text("result"),),
            joined((Text("coefficient of the numerator at the k-th power of "), Maths(Name("s")))),
        ),
        (
            "b_k",
            (Text("result"),),
            joined((Text("coefficient of the denominator at the k-th power of "), Maths(Name("s")))),
        ),
    ]
    if outcome.circuit.devices:
        kelvin = outcome.circuit.topology.temperature
        volts = engineering(thermal_voltage(kelvin), VOLTAGE, READ_DIGITS)
        words = f"thermal voltage kT/q at {engineering(kelvin, VOLTAGE, READ_DIGITS, unit='K')}"
        rows.append(("V_T", (Text(volts),), (Text(words),)))
    return rows
