"""The circuit's equations, in words, as written, and as a matrix."""

from __future__ import annotations

from derive.eliminate.derivation import Step
from derive.eliminate.rules import current_law, wanted, weigh
from derive.expressions.tree import Expression, Name
from derive.sheet.document import Block, Display, Line, Maths, Matrix, Paragraph, Section, Text
from derive.sheet.view import View

ORDER = 40
SCOPE = "result"
# A larger matrix is no help on paper; its rows are the numbered equations anyway.
MATRIX_LIMIT = 5
INTRODUCTORY = frozenset({wanted.NAME, weigh.NAME, current_law.NAME, current_law.LAW})


def compose(view: View) -> tuple[Section, ...]:
    """Give the section: what is sought, the unknowns, and an equation for each."""
    derivation = view.result.solution.derivation
    system = derivation.system
    blocks: list[Block] = [Paragraph(_lead(view))]
    tied = [(node, value) for node, value in system.known if node]
    if tied:
        blocks.append(Paragraph(_tied(tied)))
    own = [step for step in derivation.steps if step.rule in INTRODUCTORY]
    blocks += [numbered(view, step) for step in own]
    form = system.matrix
    if form is not None and 1 < len(system.unknowns) <= MATRIX_LIMIT:
        reason = (Text("The same equations as a matrix, in the order in which they stand above."),)
        blocks.append(Display(Matrix(form.rows, form.unknowns, form.right), reason))
    return (view.section("Equations of the circuit", tuple(blocks)),)


def _lead(view: View) -> Line:
    unknowns = view.result.solution.derivation.system.unknowns
    words = "The unknown is " if len(unknowns) == 1 else "The unknowns are "
    line: list[Text | Maths] = [Text(words)]
    for place, unknown in enumerate(unknowns):
        if place:
            line.append(Text(" and " if place == len(unknowns) - 1 else ", "))
        line.append(Maths(Name(unknown.name)))
    line.append(Text(". Every current is written as leaving its node; at each node their sum is zero."))
    return tuple(line)


def _tied(tied: list[tuple[str, Expression]]) -> Line:
    line: list[Text | Maths] = [Text("Known from the drives: ")]
    for place, (node, value) in enumerate(tied):
        line += [Text("; " if place else ""), Text(f"node {node} is at "), Maths(value)]
    return (*line, Text("."))


def numbered(view: View, step: Step) -> Display:
    """Show a step's equation with its number and its reason."""
    wording = view.wording
    return Display(
        view.shown_equation(step.equation, step.number),
        wording.says(step),
        wording.label(step.number),
        wording.anchor(step.number),
    )
