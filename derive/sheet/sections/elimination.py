"""The elimination, step by step, with the reason of each step at its side."""

from __future__ import annotations

from derive.eliminate.derivation import Plan
from derive.expressions.tree import Name
from derive.normalise import normalise
from derive.sheet.document import Block, Column, Line, Maths, Paragraph, Section, Table, Text
from derive.sheet.sections.equations import INTRODUCTORY, numbered
from derive.sheet.view import View

ORDER = 50
SCOPE = "result"
NORMALISING = frozenset({normalise.GAIN, normalise.COEFFICIENT, normalise.NORMAL})


def compose(view: View) -> tuple[Section, ...]:
    """Give the section: the plan, then every step of it."""
    derivation = view.result.solution.derivation
    others = INTRODUCTORY | NORMALISING
    blocks: list[Block] = []
    if len(derivation.plan.lines) > 1:
        blocks.append(_plan(view, derivation.plan))
    blocks += [numbered(view, step) for step in derivation.steps if step.rule not in others]
    if view.result.broken_steps:
        broken = "; ".join(f"({view.wording.label(n)}) {why}" for n, why in view.result.broken_steps)
        blocks.insert(0, Paragraph((Text(f"Steps whose proof failed: {broken}."),), "alarm"))
    return (view.section("Elimination", tuple(blocks)),)


def _plan(view: View, plan: Plan) -> Table:
    columns = (
        Column((Text("Order"),), True),
        Column((Text("Unknown"),)),
        Column((Text("Solved from"),)),
        Column((Text("Put into"),)),
        Column((Text("Estimated terms"),), True),
    )
    numbers = {
        step.row: step.number for step in view.result.solution.derivation.steps if step.row is not None
    }
    rows: list[tuple[Line, ...]] = []
    for place, line in enumerate(plan.lines, 1):
        into = ", ".join(f"({view.wording.label(numbers[row])})" for row in line.into)
        rows.append(
            (
                (Text(str(place)),),
                (Maths(Name(line.unknown)),),
                (view.wording.reference(numbers[line.equation]),),
                (Text(into or "–"),),
                (Text(f"{line.terms:,}"),),
            )
        )
    return Table("Plan: order of elimination, the wanted quantity last", columns, tuple(rows))
