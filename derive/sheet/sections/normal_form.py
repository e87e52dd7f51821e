"""The normal form: gain and coefficients written out, and the response written with them."""

from __future__ import annotations

from derive.normalise import normalise
from derive.sheet.document import Block, Display, Folded, Paragraph, Section, Text
from derive.sheet.final import reading
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
    if not _is_rewritten(view):
        return (view.section("Normal form", tuple(numbered(view, step) for step in steps)),)
    written: list[Display] = [numbered(view, step) for step in steps if step.rule != normalise.NORMAL]
    blocks: list[Block] = [numbered(view, step) for step in steps if step.rule == normalise.NORMAL]
    blocks.append(Paragraph((Text(EQUAL),)))
    blocks.append(Folded((Text("Gain and coefficients written out"),), tuple(written)))
    return (view.section("Normal form", tuple(blocks)),)


def _is_rewritten(view: View) -> bool:
    """Whether the form for reading is another than the one that was derived."""
    form, read = view.result.solution.form, reading(view)
    own = (form.gain, form.numerator, form.denominator)
    return own != (read.gain, read.numerator, read.denominator)
