"""Composes the sheet of a redline: both revisions, then the changes under their headings, each marked."""

from __future__ import annotations

from derive.expressions.tree import Expression, Name
from derive.review.redline.ledger import NAME, ledger_text
from derive.review.redline.nouns import Change, Redline, Side
from derive.review.redline.plain import SAME, SIGNS, count_words
from derive.sheet.document import (
    Block,
    Column,
    Field,
    Inline,
    Line,
    Maths,
    Paragraph,
    Revised,
    Section,
    Sheet,
    Source,
    Table,
    Text,
)

COLUMNS = ("Change", "Of", "Before", "After")
READING = (
    "Both revisions were derived anew from their topologies, with all checks but the other engine. A change is "
    "marked by its sign and its word: + added, − removed, ~ changed. Coefficients are compared in their expanded "
    "form, term by term; where a part that came in or went out multiplies every term of a ratio, above and below "
    "its bar, it is taken as multiplied in first, and the table says so. Roots and edges of bands count as "
    "changed from one part in a thousand million on."
)


def compose_redline(found: Redline) -> Sheet:
    """Give the sheet as data, with the redline's own ledger and both topologies."""
    block = found.new.topology.title_block
    return Sheet(
        title=f"Redline of {block.title}",
        fields=_fields(found),
        passed=found.old.outcome.passed and found.new.outcome.passed,
        failures=tuple(
            f"checks of the {which} revision failed"
            for which, side in (("old", found.old), ("new", found.new))
            if not side.outcome.passed
        ),
        sections=_sections(found),
        topology_name="",
        topology_text="",
        ledger_name=f"{NAME}.json",
        ledger_text=ledger_text(found),
        sources=(_source("old", found.old), _source("new", found.new)),
    )


def _source(which: str, side: Side) -> Source:
    return Source(which, side.topology.file, side.topology.text)


def _fields(found: Redline) -> tuple[Field, ...]:
    block = found.new.topology.title_block
    entries = (
        ("Number", block.number),
        ("Old revision", _revision(found.old)),
        ("New revision", _revision(found.new)),
        ("Changes", count_words(found) or "none"),
    )
    return tuple(Field(label, text) for label, text in entries if text)


def _revision(side: Side) -> str:
    return side.topology.title_block.revision or side.topology.file


def _sections(found: Redline) -> tuple[Section, ...]:
    sections = [Section(group, (_table(group, changes),)) for group, changes in found.groups]
    if not sections:
        sections = [Section("No change", (Paragraph((Text(f"{SAME.capitalize()}."),)),))]
    remarks: tuple[Block, ...] = tuple(
        Paragraph((Text(f"{words[0].upper()}{words[1:]}."),), "note") for words in found.remarks
    )
    how = Section("How this was compared", (*remarks, Paragraph((Text(READING),))))
    return (*sections, how)


def _table(group: str, changes: tuple[Change, ...]) -> Table:
    columns = tuple(Column((Text(heading),)) for heading in COLUMNS)
    return Table(f"Changes: {group}", columns, tuple(map(_row, changes)))


def _row(change: Change) -> tuple[Line, ...]:
    mark: Line = (Revised(change.sign, f"{SIGNS[change.sign]} {change.sign}"),)
    return mark, _subject(change), _marked(change.before, change), _marked(change.after, change)


def _subject(change: Change) -> Line:
    if not change.subject:
        return (Text(change.aspect),)
    known = _is_name(change.subject)
    subject: Inline = Maths(_name(change.subject)) if known else Text(change.subject)
    return (subject, Text(f" {change.aspect}" if change.aspect else ""))


def _is_name(text: str) -> bool:
    return text.replace("_", "").isalnum() and ("_" in text or len(text) <= 3)


def _name(text: str) -> Expression:
    return Name(text)


def _marked(line: Line, change: Change) -> Line:
    """Mark the words of a side that stands alone; an expression keeps its ink, the first column marks it."""
    if change.sign == "changed" or not line:
        return line or (Text("–"),)
    return tuple(Revised(change.sign, item.text) if isinstance(item, Text) else item for item in line)
