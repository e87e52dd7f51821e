"""Composes the sheet of a hand derivation by itself, to go beside the one that the machine derived."""

from __future__ import annotations

from derive.handcheck.report import HandFile, HandReport
from derive.sheet.document import (
    Block,
    Column,
    Field,
    Mark,
    Paragraph,
    Section,
    Sheet,
    Source,
    Table,
    Text,
)
from derive.sheet.hand.blocks import line_blocks, proof_block, summary_blocks
from derive.sheet.hand.ledger import hand_ledger_text
from derive.sheet.hand.names import stems
from derive.sheet.hand.words import FURTHER, MEANINGS, VERDICTS, short_failures, summary
from derive.sheet.sections.cautions import CAUTIONS
from derive.topology.topology import Topology

WARNING = "Not every line of this derivation stands: its result is not to be relied on."
LEAD = (
    "Every line is judged against the circuit itself: node voltages are replaced by the circuit's own solution, "
    "and both sides are then compared for all values of the parts, exactly and without a tolerance. A cure is given "
    "only where it was proved in the same way."
)


def compose_hand(report: HandReport, hand: HandFile, topology: Topology, name: str) -> Sheet:
    """Give the sheet as data; `name` is that of its files, without ending."""
    block = topology.title_block
    fields = (
        Field("Number", block.number),
        Field("Circuit", block.title),
        Field("Revision", block.revision),
        Field("Quantity", report.find),
        Field("Band", report.band),
        Field("Project", block.project),
        Field("Prepared", block.prepared),
    )
    return Sheet(
        title=report.title or f"{report.find} of {block.title}, by hand",
        fields=tuple(field for field in fields if field.text),
        passed=report.passed,
        failures=short_failures(report),
        sections=_sections(report),
        topology_name="",
        topology_text="",
        ledger_name=f"{name}.json",
        ledger_text=hand_ledger_text(report, hand, topology),
        sources=_sources(hand, topology),
        status=summary(report),
        warning=WARNING,
    )


def _sections(report: HandReport) -> tuple[Section, ...]:
    return (
        Section("Summary", (*summary_blocks(report), Paragraph((Text(LEAD),), "note"))),
        Section("Line by line", line_blocks(report)),
        Section("What the verdicts mean", (_meanings(report), proof_block(report))),
        Section("Scope and cautions", tuple(Paragraph((Text(words),)) for words in CAUTIONS)),
    )


def _meanings(report: HandReport) -> Block:
    """Explain the verdicts that there are."""
    passed = {verdict.outcome: verdict.passed for verdict in report.verdicts}
    rows = tuple(
        ((Mark(passed[outcome], VERDICTS[outcome] + FURTHER.get(outcome, "")),), (Text(words),))
        for outcome, words in MEANINGS.items()
        if outcome in passed
    )
    return Table("Verdicts", (Column((Text("Verdict"),)), Column((Text("Meaning"),))), rows)


def _sources(hand: HandFile, topology: Topology) -> tuple[Source, ...]:
    """Carry both files; each under its own name where they are called alike."""
    first, second = stems(hand.file, topology.file)
    return (Source(first, hand.file, hand.text), Source(second, topology.file, topology.text))
