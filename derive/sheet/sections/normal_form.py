"""The normal form: gain and coefficients, and the response written with them."""

from __future__ import annotations

from derive.sheet.document import Block, Paragraph, Section, Text
from derive.sheet.sections.elimination import NORMALISING
from derive.sheet.sections.equations import numbered
from derive.sheet.view import View

ORDER = 60
SCOPE = "result"


def compose(view: View) -> tuple[Section, ...]:
    """Give the section; an identically zero response has no normal form to show."""
    solution = view.result.solution
    if solution.form.is_zero:
        words = "The response is identically zero; there is no gain to factor out."
        return (view.section("Normal form", (Paragraph((Text(words),)),)),)
    steps = solution.derivation.steps
    blocks: list[Block] = [numbered(view, step) for step in steps if step.rule in NORMALISING]
    return (view.section("Normal form", tuple(blocks)),)
