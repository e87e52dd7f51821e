"""The derivation by hand that the topology names, every line with its verdict, beside the machine's own."""

from __future__ import annotations

from derive.check.verdict import Outcome
from derive.expressions.tree import Name
from derive.handcheck.report import HandReport
from derive.sheet.document import Maths, Section
from derive.sheet.hand.blocks import line_blocks, proof_block, summary_blocks

ORDER = 78
SCOPE = "sheet"


def compose(outcome: Outcome) -> tuple[Section, ...]:
    """Give the section; nothing where no hand derivation is attached."""
    report = outcome.hand
    if not isinstance(report, HandReport):
        return ()
    blocks = (*summary_blocks(report), *line_blocks(report), proof_block(report))
    band = "" if report.band == "full" else f"{report.band.capitalize()} band: "
    title = f"{band}derivation by hand of" if band else "Derivation by hand of"
    return (Section(title, blocks, about=Maths(Name(report.find))),)
