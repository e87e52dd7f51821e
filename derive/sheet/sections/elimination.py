"""The elimination, step by step, with the reason of each step at its side."""

from __future__ import annotations

from derive.eliminate.derivation import Plan
from derive.expressions.tree import Name
from derive.normalise import normalise
from derive.sheet.document import Block, Column, Inline, Line, Maths, Paragraph, Section, Table, Text
from derive.sheet.nested import is_nested, why_nested
from derive.sheet.sections.equations import INTRODUCTORY, numbered
from derive.sheet.view import View

ORDER = 50
SCOPE = "result"
NOT_ZERO = (
    "A divisor stated not to be zero is no zero expression. Should it vanish at particular values, the "
    "steps cannot be followed at these values, but the checks still hold the result against the circuit."
)
NORMALISING = frozenset({normalise.GAIN, normalise.COEFFICIENT, normalise.NORMAL})


def compose(view: View) -> tuple[Section, ...]:
    """Give the section: the plan, then every step of it."""
    derivation = view.result.solution.derivation
    others = INTRODUCTORY | NORMALISING
    blocks: list[Block] = [Paragraph(line) for line in (why_nested(view),) if line]
    if len(derivation.plan.lines) > 1:
        blocks.append(_plan(view, derivation.plan))
    shown = [step for step in derivation.steps if step.rule not in others]
    blocks += [numbered(view, step) for step in shown]
    if any(step.nonzero is not None for step in shown):
        blocks.append(Paragraph((Text(NOT_ZERO),), "note"))
    if view.result.broken_steps:
        broken = "; ".join(f"({view.wording.label(n)}) {why}" for n, why in view.result.broken_steps)
        blocks.insert(0, Paragraph((Text(f"Steps whose proof failed: {broken}."),), "alarm"))
    return (view.section("Elimination", tuple(blocks), folds=True),)


def _plan(view: View, plan: Plan) -> Table:
    columns = (
        Column((Text("Order"),), True),
        Column((Text("Unknown"),)),
        Column((Text("Solved from"),)),
        Column((Text("Put into"),)),
        # In nested lines nothing grows that an estimate could be made of.
        *(() if is_nested(view) else (Column((Text("Estimated terms"),), True),)),
    )
    numbers = {
        step.row: step.number for step in view.result.solution.derivation.steps if step.row is not None
    }
    rows: list[tuple[Line, ...]] = []
    for place, line in enumerate(plan.lines, 1):
        into: list[Inline] = []
        for row in line.into:
            into += [*([Text(", ")] if into else []), view.wording.reference(numbers[row])]
        rows.append(
            (
                (Text(str(place)),),
                (Maths(Name(line.unknown)),),
                (view.wording.reference(numbers[line.equation]),),
                tuple(into) or (Text("–"),),
                *(() if is_nested(view) else ((Text(f"{line.terms:,}"),),)),
            )
        )
    return Table("Plan: order of elimination, the wanted quantity last", columns, tuple(rows))
