"""A hand derivation as blocks of a sheet: every line as it was written, its verdict in the margin."""

from __future__ import annotations

from collections.abc import Iterator

from derive.expressions.tree import Equation, Name
from derive.handcheck.report import Edit, HandLine, HandReport, LineVerdict, Pricing
from derive.readable.measure import leaves
from derive.sheet.definitions import with_words
from derive.sheet.document import (
    Block,
    Column,
    Display,
    Folded,
    Inline,
    Line,
    Mark,
    Maths,
    Paragraph,
    SourceText,
    Table,
    Text,
)
from derive.sheet.hand.edits import told_edits
from derive.sheet.hand.lay_out import rows_of, tidy
from derive.sheet.hand.price import neglected_words, price_lines
from derive.sheet.hand.within_words import anchor, expressions_of, label, with_maths
from derive.sheet.hand.words import FAULTS, claim, failures, fault, place_of, summary, verdict_word
from derive.sheet.wording import joined

# A line with more names and numbers is shown as it was typed.
MOST_SET = 1200
# Columns of the text of a line that could not be read.
TEXT_ROOM = 84
# Of several cures the likeliest is set; the terminal and the data have more.
MOST_EDITS = 1


def summary_blocks(report: HandReport) -> tuple[Block, ...]:
    """Give the count of the lines, and a sentence for each that does not stand."""
    blocks: list[Block] = [Paragraph((Mark(report.passed, summary(report)), Text(".")))]
    known = {fault(v): expressions_of(v) for v in report.verdicts if v.outcome in FAULTS}
    linked = _linked(report)
    for words in failures(report):
        line = with_maths(f"{_capital(words)}.", known.get(words, ()), linked)
        blocks.append(Paragraph(line, "alarm"))
    return tuple(blocks)


def line_blocks(report: HandReport) -> tuple[Block, ...]:
    """Give ties, definitions and lines in their order, each with what came of it."""
    blocks: list[Block] = []
    linked = _linked(report)
    if report.define:
        blocks += [
            Display(Equation(Name(each.name), each.meaning), (Text("defined"),)) for each in report.define
        ]
    if report.given:
        blocks += [
            Display(Equation(tie.left, tie.right), (Text("given: the lines are to hold under this tie"),))
            for tie in report.given
        ]
    for verdict in report.verdicts:
        blocks += _line(verdict, linked)
    return tuple(blocks)


def proof_block(report: HandReport) -> Folded:
    """Give how the truth of each line was decided."""
    columns = (Column((Text("Line"),), leads=True), Column((Text("Decided by"),)))
    rows = tuple(
        ((Text(str(v.line.number)),), (Text(v.proof or v.why or "–"),))
        for v in report.verdicts
        if v.outcome not in ("unread", "definition")
    )
    return Folded((Text("How each line was decided"),), (Table("Lines by hand", columns, rows),))


def _equation(line: HandLine) -> Equation | None:
    """Give what a line claims as it is to be set; None where that cannot be."""
    equation = claim(line)
    too_long = equation is not None and leaves(equation.left) + leaves(equation.right) > MOST_SET
    return None if too_long else equation


def _linked(report: HandReport) -> frozenset[int]:
    """Give the numbers of the lines that stand as equations, and can be linked to."""
    return frozenset(v.line.number for v in report.verdicts if _equation(v.line) is not None)


def _line(verdict: LineVerdict, linked: frozenset[int]) -> Iterator[Block]:
    line = verdict.line
    equation = _equation(line)
    if equation is None:
        lead = Text(f"({label(line.number)}) ")
        yield Paragraph((lead, *_verdict(verdict, linked)), "plain" if verdict.passed else "alarm")
        yield SourceText(_typed(verdict))
        return
    yield Display(equation, _verdict(verdict, linked), label(line.number), anchor(line.number))
    for place, edit in enumerate(told_edits(verdict, MOST_EDITS)):
        yield Display(edit.line, _cure(verdict, edit, first=place == 0))
    yield from (Paragraph(with_maths(f"Units: {r.says}."), "note") for r in verdict.dimensions)
    if verdict.outcome == "mistake" and verdict.definitions:
        yield Paragraph(with_words(verdict.definitions), "note")
    if verdict.pricing is not None:
        yield from _price(verdict.pricing)


def _verdict(verdict: LineVerdict, linked: frozenset[int]) -> Line:
    """Give the verdict, why, what to do where no change is known, and the writer's own remark."""
    words: list[Inline] = [Mark(verdict.passed, verdict_word(verdict)), Text(": ")]
    words += [*with_maths(verdict.why, expressions_of(verdict), linked), Text(".")]
    if verdict.cure and not verdict.edits:
        words += [Text(" "), *with_maths(f"{_capital(verdict.cure)}.", (), linked)]
    if verdict.line.remark:
        words.append(Text(f" Remark: {tidy(verdict.line.remark)}."))
    return joined(tuple(words))


def _cure(verdict: LineVerdict, edit: Edit, *, first: bool) -> Line:
    says = with_maths(edit.says, expressions_of(verdict))
    end = (
        " With it the line follows from those above, wrong as they are." if edit.makes == "follow" else ""
    )
    return joined((Text("Cure: " if first else "Or: "), *says, Text(f".{end}")))


def _typed(verdict: LineVerdict) -> str:
    rows = rows_of(verdict.line.text, TEXT_ROOM, place_of(verdict))
    return "\n".join(text.rstrip() for row in rows for text in (row.text, row.marks) if text.strip())


def _price(pricing: Pricing) -> Iterator[Block]:
    for words in price_lines(pricing):
        yield Paragraph((Text(f"{_capital(words)}."),), "note")
    for item in pricing.neglected:
        before, between = neglected_words(item)
        line = (Text(_capital(before)), Maths(item.term), Text(between), Maths(item.against), Text("."))
        yield Paragraph(line, "note")
    if pricing.neglected and pricing.definitions:
        yield Paragraph(with_words(pricing.definitions), "note")
    if pricing.corners and pricing.worst is not None:
        yield Paragraph(with_maths(f"Corners: {pricing.corners}."), "note")


def _capital(words: str) -> str:
    return words[:1].upper() + words[1:]
