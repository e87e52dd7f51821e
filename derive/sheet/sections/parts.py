"""Parts as read: every item of the topology with its nodes, value and tolerance."""

from __future__ import annotations

from fractions import Fraction

from derive.check.verdict import Outcome
from derive.devices.registry import biased_device, models
from derive.expressions.tree import Equation, Name, Product, Root
from derive.quantities.format import engineering
from derive.quantities.symbol import Symbol
from derive.sheet.document import Block, Column, Line, Maths, Paragraph, Section, Table, Text
from derive.sheet.view import mutual_names
from derive.topology.topology import Part, Supply

ORDER = 20
SCOPE = "sheet"
# A value is shown as it was read, not rounded; more figures than this no part has.
READ_DIGITS = 15
# Their parameters stand in a section of their own.
BIASED = frozenset(kind for kind in models() if biased_device(kind) is not None)
KIND_WORDS = {
    "transconductance": "transconductance",
    "voltage_gain": "voltage gain",
    "current_gain": "current gain",
    "ideal_opamp": "ideal op amp",
    "opamp": "op amp",
}


def compose(outcome: Outcome) -> tuple[Section, ...]:
    """Give the section."""
    topology = outcome.circuit.topology
    blocks: list[Block] = []
    if topology.supplies:
        heads = _columns("Supply", "Connected", "DC value", numeric=("DC value",))
        blocks.append(Table("Supplies", heads, tuple(map(_supply_row, topology.supplies))))
    if topology.drives:
        rows = [_drive_row(drive.name, drive.quantity, drive.nodes) for drive in topology.drives]
        blocks.append(Table("Drives", _columns("Drive", "Kind", "Connected"), tuple(rows)))
    rows = [_part_row(part, outcome) for part in topology.parts]
    heads = _columns("Part", "Kind", "Connected", "Value", "Tolerance", numeric=("Value", "Tolerance"))
    if not any(part.tolerance is not None for part in topology.parts):
        heads, rows = heads[:-1], [row[:-1] for row in rows]
    blocks.append(Table("Parts as read", heads, tuple(rows)))
    if topology.node_words:
        nodes = [((Text(node),), (Text(words),)) for node, words in topology.node_words]
        blocks.append(Table("Nodes", _columns("Node", "What it is"), tuple(nodes)))
    for coupling in mutual_names(outcome):
        coils = tuple(Name(coil) for coil in coupling.coils)
        root = Product((Name(coupling.coefficient), Root(Product(coils))))
        line: Line = (
            Text("The mutual inductance is written "),
            Maths(Equation(Name(coupling.mutual), root)),
            Text(", a symbol of its own, because its square root is no polynomial."),
        )
        blocks.append(Paragraph(line, "note"))
    return (Section("Parts", tuple(blocks)),)


def _columns(*headings: str, numeric: tuple[str, ...] = ()) -> tuple[Column, ...]:
    return tuple(Column((Text(heading),), heading in numeric) for heading in headings)


def _supply_row(supply: Supply) -> tuple[Line, ...]:
    where = (Text(f"{supply.node} against ground"),)
    return (Maths(Name(supply.name)),), where, (Text(supply.dc.text.replace("-", "−")),)


def _drive_row(name: str, quantity: str, nodes: tuple[str, str]) -> tuple[Line, ...]:
    if quantity == "voltage":
        return (Maths(Name(name)),), (Text("voltage source"),), (Text(f"{nodes[0]} +, {nodes[1]} −"),)
    return (Maths(Name(name)),), (Text("current source"),), (Text(f"from {nodes[0]} to {nodes[1]}"),)


def _part_row(part: Part, outcome: Outcome) -> tuple[Line, ...]:
    kind = KIND_WORDS.get(part.kind, part.kind) + (f", {part.role}" if part.role else "")
    symbols = [s for s in outcome.circuit.symbols if s.origin == f"part {part.name}"]
    named = [symbol for symbol in symbols if symbol.name != part.name]
    value: list[Text | Maths] = []
    for symbol in symbols:
        words = _value(symbol)
        value += [Text(", ")] if value else []
        value += [Maths(Name(symbol.name)), Text(f" = {words}")] if named else [Text(words)]
    if part.kind in BIASED:
        value = [Text(f"model {part.model}" if part.model else "given on the part")]
    elif not symbols:
        value = [Text("ideal")]
    tolerance = f"±{_percent(part.tolerance)} %" if part.tolerance is not None else ""
    return (
        (Maths(Name(part.name)),),
        (Text(kind),),
        (Text(_wires(part)),),
        tuple(value),
        (Text(tolerance),),
    )


def _value(symbol: Symbol) -> str:
    """Word a value as it was written; a code or bare number as what it was read as, with its unit."""
    if symbol.value is None:
        return "open (?)"
    written = symbol.text.strip()
    if written[-1:].isalpha() and " " in written:
        return written.replace("-", "−")
    return engineering(symbol.value, symbol.dimension, READ_DIGITS)


def _percent(tolerance: Fraction) -> str:
    return f"{float(tolerance * 100):g}"


def _wires(part: Part) -> str:
    words = []
    for key, nodes in part.wires:
        joined = ", ".join(nodes)
        if key == "between":
            words.append(f"{nodes[0]} – {nodes[1]}")
        elif key == "flows":
            words.append(f"flows {nodes[0]} → {nodes[1]}")
        else:
            words.append(f"{key} {joined}")
    if part.senses_part:
        words.append(f"senses the current of {part.senses_part}")
    if part.coils:
        words.append(f"coils {part.coils[0]}, {part.coils[1]}")
    return "; ".join(words)
