"""Drawings of circuits as blocks of the sheet."""

from __future__ import annotations

from derive.drawing.drawing import Drawing, NotDrawn
from derive.drawing.words import words_of
from derive.sheet.document import Circuit, Paragraph, Text


def circuit_block(drawn: Drawing | NotDrawn, caption: str) -> Circuit | Paragraph:
    """Give the figure of a drawing with its words; a sentence where the circuit is not drawn."""
    if isinstance(drawn, NotDrawn):
        return Paragraph((Text(f"{drawn.why} The table of parts shows how it is connected."),), "note")
    return Circuit(caption, drawn, words_of(drawn))
