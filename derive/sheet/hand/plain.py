"""The check of a hand derivation on a terminal: line by line, with a caret where it goes wrong."""

from __future__ import annotations

import textwrap
from collections.abc import Iterator
from itertools import pairwise

from derive.expressions.text import to_text
from derive.handcheck.report import HandReport, LineVerdict
from derive.sheet.hand.edits import told_edits
from derive.sheet.hand.lay_out import Row, rows_of, tidy
from derive.sheet.hand.price import neglected_words, price_lines
from derive.sheet.hand.words import VERDICTS, failures, place_of, summary, verdict_word

NARROWEST = 40
MOST_EDITS = 2
LONGEST_CURE = 400
# Rows of a line's text; of a longer one those about the place are shown.
MOST_ROWS, ROWS_ABOUT = 6, 2
_COLOURS = {True: "32", False: "31", None: "33"}


def plain_report(report: HandReport, width: int = 120, *, colour: bool = False) -> str:
    """Give every line with its verdict, why, cure and place, and what all come to.

    Given: the width in signs, and whether signs that colour a terminal may be in it.
    """
    lines = [*_head(report)]
    for verdict in report.verdicts:
        lines += _entry(verdict, report, width, colour=colour)
    lines += ["", *_foot(report, width)]
    return "\n".join(line.rstrip() for line in lines) + "\n"


def _head(report: HandReport) -> Iterator[str]:
    title = f"{report.find}, {report.band} band, by hand: {report.file} on {report.topology}"
    yield tidy(report.title) or title
    if report.title:
        yield title
    for each in report.define:
        yield f"  where {each.name} = {to_text(each.meaning)}"
    for tie in report.given:
        yield f"  given {to_text(tie.left)} = {to_text(tie.right)}"
    yield ""


def _foot(report: HandReport, width: int) -> Iterator[str]:
    yield summary(report)
    for words in failures(report):
        yield from textwrap.wrap(tidy(words), max(width, NARROWEST), subsequent_indent="  ")


def _entry(verdict: LineVerdict, report: HandReport, width: int, *, colour: bool) -> Iterator[str]:
    """Give one line: number, verdict and text; below it the caret, why, and the cure."""
    numbers = len(str(report.verdicts[-1].line.number))
    words = max(len(VERDICTS[each.outcome]) for each in report.verdicts)
    lead = f"{verdict.line.number:>{numbers + 1}}  {verdict_word(verdict):<{words}}  "
    margin = " " * len(lead)
    room = max(width - len(lead), NARROWEST)
    shade = _COLOURS[verdict.passed] if colour else ""
    head = _coloured(lead, shade)
    for row in _shown(rows_of(verdict.line.text, room, place_of(verdict)), verdict):
        yield (head or margin) + row.text
        head = ""
        if row.marks:
            yield margin + _coloured(row.marks, shade)
    for words_below in _below(verdict):
        yield from _wrapped(tidy(words_below), margin, room)


def _wrapped(words: str, margin: str, room: int) -> list[str]:
    return textwrap.wrap(
        words,
        room + len(margin),
        initial_indent=margin,
        subsequent_indent=f"{margin}  ",
        break_long_words=False,
        break_on_hyphens=False,
    )


def _shown(rows: list[Row], verdict: LineVerdict) -> list[Row]:
    """Leave out rows of a very long line, but not those about its place."""
    if len(rows) <= MOST_ROWS:
        return rows
    marked = [place for place, row in enumerate(rows) if row.marks]
    kept = {0, len(rows) - 1}
    for place in marked[:MOST_ROWS] or [1]:
        kept |= set(range(place - ROWS_ABOUT, place + ROWS_ABOUT + 1))
    places = sorted(kept & set(range(len(rows))))
    found = [rows[places[0]]]
    for before, place in pairwise(places):
        if place > before + 1:
            found.append(Row("…", ""))
        found.append(rows[place])
    return found


def _below(verdict: LineVerdict) -> Iterator[str]:
    yield verdict.why
    yield from (f"units: {remark.says}" for remark in verdict.dimensions)
    if verdict.definitions and verdict.outcome == "mistake":
        yield "here " + ", ".join(f"{name} = {to_text(value)}" for name, value in verdict.definitions)
    if verdict.cure:
        yield f"cure: {verdict.cure}"
    for place, edit in enumerate(told_edits(verdict, MOST_EDITS)):
        if place:
            yield f"or: {edit.says}"
        mended = to_text(edit.line)
        # Of a line that fills rows and rows the change itself says more.
        if len(mended) <= LONGEST_CURE:
            yield f"  {mended}"
        if edit.makes == "follow":
            yield "  with this it follows from the lines above, wrong as they are"
    pricing = verdict.pricing
    if pricing is not None:
        yield from price_lines(pricing)
        for item in pricing.neglected:
            before, between = neglected_words(item)
            yield f"{before}{to_text(item.term)}{between}{to_text(item.against)}"


def _coloured(words: str, shade: str) -> str:
    return f"\x1b[{shade}m{words}\x1b[0m" if shade else words
