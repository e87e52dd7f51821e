"""Composes the sheet of a comparison: the table, the plot, what each figure is, and the expressions."""

from __future__ import annotations

from derive.compare.comparison import Comparison
from derive.compare.expressions import expressions
from derive.compare.ledger import LEDGER_NAME, ledger_text
from derive.compare.notes import DEFINITIONS, failures, notes
from derive.compare.plot import plot_of
from derive.compare.table import tables
from derive.quantities.words import listed
from derive.sheet.document import Block, Field, Paragraph, Section, Sheet, Source, Text
from derive.sheet.sections.cautions import CAUTIONS

LONGEST_TITLE = 70
CURVES = (
    "Each curve is the response of the whole circuit at the nominal values, every capacitor and inductor in "
    "place, evaluated from its exact polynomials. Where bands do not separate well it therefore departs from "
    "the −3 dB frequencies of the bands."
)
CHECKED = (
    "Every quantity here was derived anew from its topology and checked as on a stage's own sheet, the other "
    "engine apart; the steps of the derivation stand on that sheet."
)


def compose_comparison(comparison: Comparison) -> Sheet:
    """Give the sheet as data, with the comparison's own ledger and all its topologies."""
    names = listed(stage.name for stage in comparison.stages)
    title = f"Comparison of {names}"
    if len(title) > LONGEST_TITLE:
        title = f"Comparison of {len(comparison.stages)} stages"
    quantities = dict.fromkeys(stage.find.name for stage in comparison.stages)
    return Sheet(
        title=title,
        fields=(
            Field("Quantity", ", ".join(quantities)),
            Field("Stages", str(len(comparison.stages))),
        ),
        passed=comparison.passed,
        failures=failures(comparison),
        sections=_sections(comparison),
        topology_name="",
        topology_text="",
        ledger_name=LEDGER_NAME,
        ledger_text=ledger_text(comparison),
        sources=tuple(
            Source(stage.name, stage.topology.file, stage.topology.text) for stage in comparison.stages
        ),
    )


def _sections(comparison: Comparison) -> tuple[Section, ...]:
    particular: tuple[Block, ...] = tuple(
        Paragraph((Text(f"{name}: {words}."),), "note") for name, words in notes(comparison)
    )
    plot = plot_of(comparison)
    response: tuple[Section, ...] = ()
    if plot is not None:
        response = (Section("Response against frequency", (plot, Paragraph((Text(CURVES),), "note"))),)
    return (
        Section("Side by side", (*tables(comparison), *particular)),
        *response,
        Section("What the figures are", tuple(_paragraphs((*DEFINITIONS, CHECKED)))),
        *expressions(comparison),
        Section("Scope and cautions", tuple(_paragraphs(CAUTIONS))),
    )


def _paragraphs(texts: tuple[str, ...]) -> list[Block]:
    return [Paragraph((Text(text),)) for text in texts]
