"""Limits: what a quantity becomes as one part goes to zero or to infinity, for a reader's own sense of it."""

from __future__ import annotations

from collections.abc import Sequence

from derive.estimates.estimates import Limit
from derive.expressions.tree import ZERO, Expression, Name
from derive.sheet.definitions import known_definitions, used_in, with_words
from derive.sheet.document import Block, Column, Inline, Line, Maths, Paragraph, Section, Table, Text
from derive.sheet.final import reading
from derive.sheet.view import View, at_zero, views
from derive.sheet.wording import joined

ORDER = 70
SCOPE = "result"
ARROWS = {"0": " → 0", "inf": " → ∞"}


def compose(view: View) -> tuple[Section, ...]:
    """Give the section; nothing where the quantity hangs on no part."""
    estimates = view.result.solution.estimates
    limits = estimates.limits if estimates else ()
    if not limits:
        return ()
    before = _told_before(view, limits)
    if before is not None:
        line = (*at_zero(view), Text(", and so its limits, are as for "), Maths(Name(before.name)))
        where = f" in the {before.band} band." if before.band != view.band else "."
        return (view.section("Limits", (Paragraph((*line, Text(where))),)),)
    blocks: list[Block] = []
    telling = [limit for limit in limits if limit.limit not in (None, ZERO)]
    if telling:
        heading = joined((Text("What becomes of "), *at_zero(view)))
        columns = (Column((Text("As"),)), Column(heading))
        rows = tuple(_row(view, limit, limit.limit) for limit in telling if limit.limit is not None)
        blocks.append(Table("Limits, one part at a time", columns, rows))
    # Without the table over it a sentence has to name what it is about.
    subject: Line = (Text("It"),) if telling else at_zero(view)
    for wanted, words in ((ZERO, " goes to zero"), (None, " grows without limit")):
        some = [limit for limit in limits if limit.limit == wanted]
        if some:
            blocks.append(Paragraph(_all((*subject, Text(words)), some)))
            subject = (Text("It"),)
    shown = [limit.limit for limit in telling if limit.limit is not None]
    defined = with_words(used_in(shown, known_definitions(view)))
    blocks += [Paragraph(defined)] if defined else []
    return (view.section("Limits", tuple(blocks)),)


def _told_before(view: View, limits: tuple[Limit, ...]) -> View | None:
    """Give the earlier result of which the same is said."""
    for earlier in views(view.outcome)[: view.place]:
        estimates = earlier.result.solution.estimates
        if estimates and estimates.limits == limits and reading(earlier).gain == reading(view).gain:
            return earlier
    return None


def _row(view: View, limit: Limit, value: Expression) -> tuple[Line, ...]:
    return (Maths(Name(limit.symbol)), Text(ARROWS[limit.to])), view.printed(value)


def _all(words: Line, limits: Sequence[Limit]) -> Line:
    line: list[Inline] = [*words, Text(" as ")]
    for place, limit in enumerate(limits):
        line.append(Text("" if not place else " or " if place == len(limits) - 1 else ", "))
        line += [Maths(Name(limit.symbol)), Text(ARROWS[limit.to])]
    return joined((*line, Text(".")))
