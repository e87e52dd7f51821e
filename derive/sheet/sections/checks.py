"""The checks: by which road, what was measured, within which limit, and the verdict."""

from __future__ import annotations

from derive.check.verdict import Outcome, Verdict
from derive.sheet.document import Block, Column, Line, Mark, Paragraph, Section, Table, Text
from derive.sheet.tally import kind_of
from derive.sheet.view import View, views

ORDER = 80
SCOPE = "sheet"


def compose(outcome: Outcome) -> tuple[Section, ...]:
    """Give the section: the roads, once for all results, and one table a result."""
    lead = (
        "Every check reaches the result by a road that the derivation did not take. A check marked open "
        "was not finished, one marked n/a has nothing to judge here; neither is a pass or a failure."
    )
    found = views(outcome)
    blocks: list[Block] = [Paragraph((Text(lead),))]
    roads = {verdict.name: verdict.method for view in found for verdict in view.result.verdicts}
    told = len(found) > 1
    if told:
        rows = tuple(((Text(name),), (Text(method),)) for name, method in roads.items())
        blocks.append(Table("Roads of checking", _columns("Check", "Road"), rows))
    blocks += [_table(view, told=told) for view in found]
    return (Section("Checks", tuple(blocks)),)


def _columns(*headings: str) -> tuple[Column, ...]:
    return tuple(Column((Text(heading),)) for heading in headings)


def _table(view: View, *, told: bool) -> Table:
    """Give the verdicts on one result, with their roads where these were not told before."""
    rows = tuple(_row(verdict, told=told) for verdict in view.result.verdicts)
    caption = "Checks" if view.alone else f"Checks on {view.title}"
    road = () if told else ("Road",)
    return Table(caption, _columns("Check", *road, "Measured", "Limit", "Verdict"), rows)


def _row(verdict: Verdict, *, told: bool) -> tuple[Line, ...]:
    words = (verdict.name, *(() if told else (verdict.method,)), verdict.measured, verdict.limit)
    return (*((Text(word),) for word in words), (Mark(verdict.passed, kind_of(verdict)),))
