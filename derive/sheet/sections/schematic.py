"""The schematic: the circuit as it is built, drawn from the topology."""

from __future__ import annotations

from derive.check.verdict import Outcome
from derive.drawing.draw import draw_schematic
from derive.sheet.circuits import circuit_block
from derive.sheet.document import Section

ORDER = 11
SCOPE = "sheet"


def compose(outcome: Outcome) -> tuple[Section, ...]:
    """Give the section: the drawing, or why there is none."""
    drawn = draw_schematic(outcome.circuit.topology)
    return (Section("Schematic", (circuit_block(drawn, "Schematic, drawn from the topology file"),)),)
