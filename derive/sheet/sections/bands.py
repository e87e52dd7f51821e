"""The circuit of each band: changes with their reasons, merged parts, shorts and opens as numbers."""

from __future__ import annotations

from collections.abc import Sequence

from derive.bands.band_circuit import Change
from derive.check.verdict import Outcome
from derive.drawing.draw import draw_band
from derive.expressions.tree import Equation, Name
from derive.normalise.band_report import BandReport
from derive.normalise.capacitor_table import CapacitorRow
from derive.quantities.dimension import FREQUENCY, RESISTANCE
from derive.quantities.format import engineering
from derive.sheet.circuits import circuit_block
from derive.sheet.document import Block, Column, Display, Line, Maths, Paragraph, Section, Table, Text
from derive.sheet.figures import times
from derive.sheet.wording import marked

ORDER = 30
SCOPE = "sheet"
BAND_WORDS = {
    "low": "Parasitic capacitances are open; coupling and bypass capacitors are kept.",
    "mid": "Coupling and bypass capacitors are short, parasitic capacitances open.",
    "high": "Coupling and bypass capacitors are short; parasitic capacitances are kept.",
    "full": "Every part is kept.",
}


def compose(outcome: Outcome) -> tuple[Section, ...]:
    """Give a section a band; nothing for a circuit whose one band changes nothing."""
    report = outcome.bands
    if report is None:
        return ()
    told = [band for band in report.bands if band.circuit.changes or band.circuit.definitions]
    if not told and len(report.bands) < 2:
        return ()
    return tuple(_band(band) for band in report.bands)


def _band(report: BandReport) -> Section:
    band = report.circuit
    blocks: list[Block] = [Paragraph((Text(BAND_WORDS[band.band]),))]
    if band.changes:
        rows = tuple((marked(c.subject), (Text(c.kind),), marked(_reason(c))) for c in band.changes)
        columns = tuple(Column((Text(heading),)) for heading in ("Part or supply", "Change", "Why"))
        blocks.append(Table("What was changed for this band", columns, rows))
    for merged in band.definitions:
        equation = Equation(Name(merged.name), merged.definition)
        blocks.append(Display(equation, marked(f"Merged: {', '.join(merged.parts)}.")))
    renamed = [f"{node} is {name}" for node, name in band.nodes if node != name]
    if renamed:
        words = f"Nodes that became one: {', '.join(renamed)}."
        blocks.append(Paragraph((Text(words),), "note"))
    drawn = circuit_block(draw_band(band), f"Small-signal circuit of the {band.band} band")
    blocks.append(drawn)
    if report.capacitors:
        blocks.append(_capacitors(report.capacitors))
    return Section(f"Circuit of the {band.band} band", tuple(blocks))


def _reason(change: Change) -> str:
    """Give the reason without the kind of change in front, which stands in a column of its own."""
    return change.says.removeprefix(f"{change.kind}: ").removeprefix("merged: ")


def _capacitors(rows: tuple[CapacitorRow, ...]) -> Table:
    """Show what each part sees, and its reactance over that at the band's edges and centre."""
    points = list(dict.fromkeys((at.where, at.hertz) for row in rows for at in row.at))
    headings = ["Part", "State", "Resistance seen"]
    headings += [f"{where}, {engineering(hertz, FREQUENCY, 3, unit='Hz')}" for where, hertz in points]
    columns = tuple(Column((Text(heading),), place > 1) for place, heading in enumerate(headings))
    caption = "Shorts and opens as numbers: reactance over the resistance seen"
    return Table(caption, columns, tuple(_row(row, points) for row in rows))


def _row(row: CapacitorRow, points: Sequence[tuple[str, float]]) -> tuple[Line, ...]:
    seen = marked(row.says)
    if row.resistance is not None:
        seen = (Text(engineering(row.resistance, RESISTANCE, 4)),)
    role = f", {row.role}" if row.role else ""
    ratios: dict[tuple[str, float], float | None] = {(at.where, at.hertz): at.ratio for at in row.at}
    cells = [ratios.get(point) for point in points]
    shown = ((Text("–" if ratio is None else times(ratio)),) for ratio in cells)
    return (Maths(Name(row.symbol)),), (Text(row.state + role),), seen, *shown
