"""The checks: by which road, what was measured, within which limit, and the verdict."""

from __future__ import annotations

from derive.check.verdict import Outcome
from derive.sheet.document import Block, Column, Line, Mark, Paragraph, Section, Table, Text
from derive.sheet.tally import kind_of
from derive.sheet.view import View, views

ORDER = 80
SCOPE = "sheet"


def compose(outcome: Outcome) -> tuple[Section, ...]:
    """Give the section, one table a result."""
    lead = (
        "Every check reaches the result by a road that the derivation did not take. A check marked open "
        "was not finished, one marked n/a has nothing to judge here; neither is a pass or a failure."
    )
    blocks: list[Block] = [Paragraph((Text(lead),))]
    blocks += [_table(view) for view in views(outcome)]
    return (Section("Checks", tuple(blocks)),)


def _table(view: View) -> Table:
    headings = ("Check", "Road", "Measured", "Limit", "Verdict")
    columns = tuple(Column((Text(heading),)) for heading in headings)
    rows: list[tuple[Line, ...]] = [
        (
            (Text(verdict.name),),
            (Text(verdict.method),),
            (Text(verdict.measured),),
            (Text(verdict.limit),),
            (Mark(verdict.passed, kind_of(verdict)),),
        )
        for verdict in view.result.verdicts
    ]
    caption = "Checks" if view.alone else f"Checks on {view.title}"
    return Table(caption, columns, tuple(rows))
