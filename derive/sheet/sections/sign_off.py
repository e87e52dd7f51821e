"""Revisions and sign-off: what changed, who signed, and what was looked at; blank where nobody signed."""

from __future__ import annotations

from derive.check.verdict import Outcome
from derive.sheet.document import Block, Column, Line, Mark, Paragraph, Section, Table, Text
from derive.topology.sign_off import Reviewed
from derive.topology.topology import Topology

ORDER = 92
SCOPE = "sheet"
LEAD = (
    "Prepared is not checked. Whoever checks says of each item by name whether it is accepted; a condition stands "
    "in its remark. What is blank has not been looked at. The program's own checks compare the algebra with the "
    "topology; they sign nothing."
)
VERDICTS = {"accepted": True, "conditional": None, "rejected": False}


def compose(outcome: Outcome) -> tuple[Section, ...]:
    """Give the section: revisions where there are any, signatures, and the items of review."""
    topology = outcome.circuit.topology
    blocks: list[Block] = []
    if topology.revisions:
        blocks.append(_revisions(topology))
    blocks += [_signatures(topology), Paragraph((Text(LEAD),)), _items(outcome)]
    return (Section("Revisions and sign-off" if topology.revisions else "Sign-off", tuple(blocks)),)


def newest_mark(topology: Topology) -> str:
    """Give the mark of the newest revision, "" where there is none."""
    return topology.revisions[-1].mark if topology.revisions else ""


def _columns(*headings: str) -> tuple[Column, ...]:
    return tuple(Column((Text(heading),), leads=not place) for place, heading in enumerate(headings))


def _row(*cells: str) -> tuple[Line, ...]:
    return tuple((Text(cell),) for cell in cells)


def _revisions(topology: Topology) -> Table:
    rows = tuple(_row(r.mark, r.what, r.date, r.by) for r in topology.revisions)
    return Table("Revisions, the newest last", _columns("Revision", "What changed", "Date", "By"), rows)


def _signatures(topology: Topology) -> Table:
    block = topology.title_block
    rows = (
        _row("Prepared", block.prepared, block.date if block.prepared else "", ""),
        _row("Checked", block.checked, "", ""),
        _row("Approved", block.approved, "", ""),
    )
    return Table("Signatures", _columns("Role", "Name", "Date", "Signature"), rows, by_hand=True)


def _items(outcome: Outcome) -> Table:
    """Give what is to be looked at, what was, and further items that somebody looked at."""
    reviews = outcome.circuit.topology.reviews
    given = {review.item.casefold(): review for review in reviews}
    expected = _expected(outcome)
    names = [
        *expected,
        *(r.item for r in reviews if r.item.casefold() not in map(str.casefold, expected)),
    ]
    rows = tuple(_item(name, given.get(name.casefold())) for name in dict.fromkeys(names))
    columns = _columns("Item", "By", "Verdict", "Remark", "Date")
    return Table("What was checked, and by whom", columns, rows, by_hand=True)


def _item(name: str, review: Reviewed | None) -> tuple[Line, ...]:
    if review is None:
        return _row(name, "", "", "", "")
    verdict: Line = (Mark(VERDICTS[review.verdict], review.verdict),)
    return (Text(name),), (Text(review.by),), verdict, (Text(review.remark),), (Text(review.date),)


def _expected(outcome: Outcome) -> list[str]:
    """Name what a checker of this sheet has to look at."""
    topology = outcome.circuit.topology
    items = ["Topology against the schematic", "Values and tolerances of the parts"]
    if outcome.point is not None:
        items.append("Operating point")
    if outcome.circuit.devices:
        items.append("Small-signal parameters and what was left out")
    if outcome.bands is not None and outcome.circuit.roles:
        items.append("Roles of the capacitors, and the bands")
    if topology.assumptions:
        items.append("Assumptions and their price")
    items += ["Results, against the specification", "Limits of validity and cautions"]
    return items
