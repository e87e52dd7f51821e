"""Limits: what the gain becomes as one part goes to zero or to infinity, for a reader's own sense of it."""

from __future__ import annotations

from collections.abc import Sequence

from derive.estimates.estimates import Limit
from derive.expressions.tree import ZERO, Expression, Name
from derive.normalise import normalise
from derive.sheet.definitions import known_definitions, used_in, with_words
from derive.sheet.document import Block, Column, Line, Maths, Paragraph, Section, Table, Text
from derive.sheet.final import reading
from derive.sheet.view import View, views
from derive.sheet.wording import joined

ORDER = 70
SCOPE = "result"
ARROWS = {"0": " → 0", "inf": " → ∞"}


def compose(view: View) -> tuple[Section, ...]:
    """Give the section; nothing where the gain hangs on no part."""
    estimates = view.result.solution.estimates
    limits = estimates.limits if estimates else ()
    if not limits:
        return ()
    before = _told_before(view, limits)
    if before is not None:
        line = (Text("The gain, and so its limits, are as for "), Maths(Name(before.name)))
        where = f" in the {before.band} band." if before.band != view.band else "."
        return (view.section("Limits", (Paragraph((*line, Text(where))),)),)
    blocks: list[Block] = []
    telling = [limit for limit in limits if limit.limit not in (None, ZERO)]
    if telling:
        name = _name(view)
        what = "What becomes of " if name == view.name else "What becomes of the gain "
        columns = (Column((Text("As"),)), Column((Text(what), Maths(Name(name)))))
        rows = tuple(_row(view, limit, limit.limit) for limit in telling if limit.limit is not None)
        blocks.append(Table("Limits of the gain, one part at a time", columns, rows))
    for wanted, words in ((ZERO, "It goes to zero"), (None, "It grows without limit")):
        some = [limit for limit in limits if limit.limit == wanted]
        if some:
            blocks.append(Paragraph(_all(words, some)))
    shown = [limit.limit for limit in telling if limit.limit is not None]
    defined = with_words(used_in(shown, known_definitions(view)))
    blocks += [Paragraph(defined)] if defined else []
    return (view.section("Limits", tuple(blocks)),)


def _told_before(view: View, limits: tuple[Limit, ...]) -> View | None:
    """Give the earlier result whose gain and limits are the same."""
    for earlier in views(view.outcome)[: view.place]:
        estimates = earlier.result.solution.estimates
        if estimates and estimates.limits == limits and reading(earlier).gain == reading(view).gain:
            return earlier
    return None


def _name(view: View) -> str:
    """Give the name of the gain: the quantity's own where it is all there is."""
    form = view.result.solution.form
    if len(form.numerator) == len(form.denominator) == 1 and not form.power_of_s:
        return view.name
    step = view.step(normalise.GAIN)
    return (step.subject if step else None) or "K"


def _row(view: View, limit: Limit, value: Expression) -> tuple[Line, ...]:
    return (Maths(Name(limit.symbol)), Text(ARROWS[limit.to])), view.printed(value)


def _all(words: str, limits: Sequence[Limit]) -> Line:
    line: list[Text | Maths] = [Text(f"{words} as ")]
    for place, limit in enumerate(limits):
        line.append(Text("" if not place else " or " if place == len(limits) - 1 else ", "))
        line += [Maths(Name(limit.symbol)), Text(ARROWS[limit.to])]
    return joined((*line, Text(".")))
