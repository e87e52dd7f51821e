"""Short forms found by the tool, one for each question, with what was assumed and what it costs."""

from __future__ import annotations

from collections.abc import Sequence

from derive.approximate.questions import CORNER_LIMIT, Simplified
from derive.expressions.tree import Equation, Name
from derive.quantities.dimension import RATIO, TIME
from derive.readable.form import Definition
from derive.readable.measure import leaves
from derive.sheet.definitions import with_words
from derive.sheet.document import (
    Block,
    Column,
    Display,
    Folded,
    Inline,
    Line,
    Maths,
    Paragraph,
    Section,
    Table,
    Text,
)
from derive.sheet.figures import figure
from derive.sheet.sections.assumptions import limits
from derive.sheet.simplified import MOST_LISTED, price_words, title_of
from derive.sheet.view import MOST_LEAVES, View, gain_dimension

ORDER = 72
SCOPE = "result"


def compose(view: View) -> tuple[Section, ...]:
    """Give the section; nothing where no short forms were asked for."""
    found = view.result.solution.simplified
    if not found:
        return ()
    budget = view.outcome.circuit.topology.budget
    corner = f"{100 * CORNER_LIMIT} %"
    words = (
        "For each question by itself the least harmful elements were taken out or shorted, matched parts tied and "
        f"small terms dropped, within {limits(budget)}, and {corner} of a pole or of the unity-gain frequency. "
        "Errors are counted against the whole circuit, signed: (short − whole)/whole."
    )
    blocks: list[Block] = [Paragraph((Text(words),))]
    shown: set[Definition] = set()
    for answer in found:
        blocks += _answer(view, answer, shown)
    return (view.section("Short forms", tuple(blocks)),)


def _answer(view: View, found: Simplified, shown: set[Definition]) -> list[Block]:
    title = title_of(found.question)
    title = title[:1].upper() + title[1:]
    if found.form is None:
        blocks: list[Block] = [Paragraph((Text(f"{title}: no short form; {found.reason}."),))]
    else:
        blocks = [
            Paragraph((Text(f"{title}{': nothing may be dropped' if found.status == 'exact' else ''}:"),))
        ]
        blocks += _form(view, found, "", shown)
    if found.beyond is not None:
        blocks.append(
            Paragraph((Text("One line that goes beyond the budget, for orientation only:"),), "note")
        )
        blocks += _form(view, found.beyond, "beyond the budget: ", shown)
    return blocks


def _form(view: View, found: Simplified, mark: str, shown: set[Definition]) -> list[Block]:
    if found.form is None or found.price is None:
        return []
    price = f"{mark}{price_words(found.price)}"
    reason: list[Inline] = []
    if found.value is not None:
        dimension = gain_dimension(view) if found.left == "K" else RATIO / TIME
        reason.append(
            Text(f": {figure(found.value, dimension, 4)} for {figure(found.original, dimension, 4)}")
        )
    blocks: list[Block] = []
    if leaves(found.form) <= 2 * MOST_LEAVES:
        blocks.append(
            Display(
                Equation(Name(found.left), found.form, "=" if found.status == "exact" else "~"),
                (Text(price), *reason),
            )
        )
        blocks += _lines(found, shown)
    else:
        words_of_size = f" is too long to print: {leaves(found.form):,} names and numbers"
        blocks.append(
            Paragraph((Maths(Name(found.left)), Text(f", {price}"), *reason, Text(words_of_size)))
        )
    if found.sampling:
        blocks.append(Paragraph((Text(f"Counted at {found.sampling}."),), "note"))
    if found.assumptions:
        blocks.append(_assumptions(found))
    return blocks


def _lines(found: Simplified, shown: set[Definition]) -> list[Block]:
    """Give the lines that the form needs, each with what it is, and what β and its like stand for.

    Given: what was shown with another answer of the sheet, and is only named again.
    """
    says = dict(found.says)
    lines = [entry for entry in found.definitions if entry[0] in says]
    blocks: list[Block] = [
        Display(Equation(Name(name), value), (Text(says[name]),) if says[name] else ())
        for name, value in lines
        if (name, value) not in shown
    ]
    again = [Name(name) for name, value in lines if (name, value) in shown]
    if again:
        blocks.append(Paragraph((*_listed(again), Text(" as above."))))
    shown.update(lines)
    words = with_words([entry for entry in found.definitions if entry not in lines])
    if words and not (again and len(again) == len(lines)):
        blocks.append(Paragraph(words))
    return blocks


def _listed(names: Sequence[Name]) -> Line:
    """Write names in a row: R_I, R_II and R_III."""
    line: list[Inline] = []
    for place, name in enumerate(names):
        line += [Text("" if not place else " and " if place == len(names) - 1 else ", "), Maths(name)]
    return tuple(line)


def _assumptions(found: Simplified) -> Folded:
    rows: list[tuple[Line, ...]] = [
        (
            (Text(str(place)),),
            (Text(made.assumption.that),),
            (Text(made.assumption.because),),
            (Text("" if made.used is None else f"{100 * made.used:.2g} %"),),
        )
        for place, made in enumerate(found.assumptions[:MOST_LISTED], 1)
    ]
    columns = tuple(
        Column((Text(heading),), place in (0, 3))
        for place, heading in enumerate(("No.", "Assumed", "Why", "Budget used so far"))
    )
    further = max(0, len(found.assumptions) - MOST_LISTED) + found.unlisted
    blocks: list[Paragraph | Display | Table] = [Table("Assumptions by the tool", columns, tuple(rows))]
    if further:
        blocks.append(Paragraph((Text(f"And {further:,} more of the kind."),)))
    if found.idle:
        words = (
            f"With these made, the answer no longer depends on {', '.join(dict.fromkeys(found.idle))}."
        )
        blocks.append(Paragraph((Text(words),)))
    count = len(found.assumptions) + found.unlisted
    return Folded(
        (Text(f"{count:,} assumption{'' if count == 1 else 's'} made for it, in order"),), tuple(blocks)
    )
