"""How good the separation into bands is: the product of the bands' responses against the full circuit."""

from __future__ import annotations

from derive.check.verdict import Outcome
from derive.expressions.tree import Name
from derive.normalise.separation import Separation, SeparationAt
from derive.quantities.dimension import FREQUENCY
from derive.quantities.format import engineering
from derive.sheet.document import Block, Column, Line, Maths, Paragraph, Section, Table, Text

ORDER = 75
SCOPE = "sheet"


def compose(outcome: Outcome) -> tuple[Section, ...]:
    """Give the section; nothing where the circuit was not separated into bands."""
    report = outcome.bands
    if report is None or not report.separations:
        return ()
    blocks: list[Block] = [
        Paragraph(
            (
                Text(
                    "Low-band response times high-band response over mid-band response, against the full "
                    "circuit with every part kept. The errors are those of the separation, not of the bands."
                ),
            )
        )
    ]
    if report.edges.overlap:
        words = (
            "A low-frequency corner lies above a high-frequency one: there is no mid-band to speak of."
        )
        blocks.append(Paragraph((Text(words),), "alarm"))
    headings = (
        "Quantity",
        "Range",
        "Worst, dB",
        "Worst, degrees",
        "At the low corner",
        "At the high corner",
    )
    columns = tuple(Column((Text(heading),)) for heading in headings)
    rows = tuple(_row(name, found) for name, found in report.separations)
    blocks.append(Table("Error of the separation", columns, rows))
    return (Section("How good the separation into bands is", tuple(blocks)),)


def _row(name: str, found: Separation) -> tuple[Line, ...]:
    low, high = (_hertz(value) for value in found.range_hz)
    cells = (
        f"{low} to {high}, {found.points} points",
        f"{_decibels(found.worst_decibels)} at {_hertz(found.worst_decibels.hertz)}",
        f"{_degrees(found.worst_degrees)} at {_hertz(found.worst_degrees.hertz)}",
        _corner(found.at_low_corner),
        _corner(found.at_high_corner),
    )
    return ((Maths(Name(name)),), *((Text(cell),) for cell in cells))


def _corner(at: SeparationAt | None) -> str:
    return "–" if at is None else f"{_decibels(at)}, {_degrees(at)} at {_hertz(at.hertz)}"


def _hertz(value: float) -> str:
    return engineering(value, FREQUENCY, 3, unit="Hz")


def _decibels(at: SeparationAt) -> str:
    return _signed(f"{round(at.decibels, 3) + 0.0:+.3f} dB")


def _degrees(at: SeparationAt) -> str:
    return _signed(f"{round(at.degrees, 2) + 0.0:+.2f}°")


def _signed(text: str) -> str:
    return text.replace("-", "−")
