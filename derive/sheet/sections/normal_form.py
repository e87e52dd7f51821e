"""The normal form: gain and coefficients written out, and the response written with them."""

from __future__ import annotations

from collections.abc import Sequence

from derive.eliminate.derivation import Step
from derive.normalise import normalise
from derive.sheet.document import Block, Display, Folded, Paragraph, Section, Text
from derive.sheet.final import reading
from derive.sheet.nested import is_nested, where_written
from derive.sheet.sections.elimination import NORMALISING
from derive.sheet.sections.equations import numbered
from derive.sheet.view import View

ORDER = 60
SCOPE = "result"
EQUAL = (
    "For reading, gain and coefficients stand under Result at a glance; both forms are equal for all values. "
    "The names of the coefficients are those of this form."
)


def compose(view: View) -> tuple[Section, ...]:
    """Give the section; an identically zero response has no normal form to show."""
    solution = view.result.solution
    if solution.form.is_zero:
        words = "The response is identically zero; there is no gain to factor out."
        return (view.section("Normal form", (Paragraph((Text(words),)),)),)
    steps = [step for step in solution.derivation.steps if step.rule in NORMALISING]
    if is_nested(view):
        return (view.section("Normal form", _nested(view, steps)),)
    if not _is_rewritten(view):
        return (view.section("Normal form", tuple(numbered(view, step) for step in steps)),)
    written: list[Display] = [numbered(view, step) for step in steps if step.rule != normalise.NORMAL]
    blocks: list[Block] = [numbered(view, step) for step in steps if step.rule == normalise.NORMAL]
    blocks.append(Paragraph((Text(EQUAL),)))
    blocks.append(Folded((Text("Gain and coefficients written out"),), tuple(written)))
    return (view.section("Normal form", tuple(blocks)),)


def _nested(view: View, steps: Sequence[Step]) -> tuple[Block, ...]:
    """Show the response by its coefficients, and fold away of what each is the ratio."""
    written: list[Display] = [numbered(view, step) for step in steps if step.rule != normalise.NORMAL]
    whole = [numbered(view, step) for step in steps if step.rule == normalise.NORMAL]
    title = (Text("Gain and coefficients, as ratios of what the definitions give"),)
    return (*whole, Paragraph(where_written(view)), Folded(title, tuple(written)))


def _is_rewritten(view: View) -> bool:
    """Whether the form for reading is another than the one that was derived."""
    form, read = view.result.solution.form, reading(view)
    own = (form.gain, form.numerator, form.denominator)
    return own != (read.gain, read.numerator, read.denominator)
