"""Scope and cautions: what the sheet says nothing about."""

from __future__ import annotations

from derive.check.verdict import Outcome
from derive.sheet.document import Paragraph, Section, Text

ORDER = 90
SCOPE = "sheet"
CAUTIONS = (
    "The equations hold for small signals about one operating point. They say nothing of clipping, "
    "slewing, overload or start-up.",
    "Transconductance and current gain follow the junction temperature. Parasitics of the layout, series "
    "resistance of capacitors and ageing are not in the result unless they are drawn.",
    "That the algebra agrees does not make the circuit right: the checks compare the result with the "
    "topology above, not with the board.",
    "The sheet makes no statement on insulation, creepage, stored charge, fault energy or fusing. "
    "Equipment that is connected to mains, high voltage or patients, that guards life, or that works in "
    "explosive atmospheres needs the standards that govern it, the local codes, and review by licensed "
    "practitioners.",
    "Void if the schematic or a value differs from the source whose digest stands in the title block.",
)


def compose(outcome: Outcome) -> tuple[Section, ...]:
    """Give the section."""
    return (Section("Scope and cautions", tuple(Paragraph((Text(words),)) for words in CAUTIONS)),)
