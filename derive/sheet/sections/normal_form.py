"""The normal form: gain and coefficients written out, and the response written with them."""

from __future__ import annotations

from collections.abc import Sequence

from derive.eliminate.derivation import Step
from derive.expressions.tree import Equation, Name
from derive.normalise import normalise
from derive.sheet.definitions import known_definitions, used_in, with_words
from derive.sheet.document import Block, Display, Folded, Line, Paragraph, Section, Text
from derive.sheet.figures import figure
from derive.sheet.final import Named, coefficient_of, final, is_long, reading
from derive.sheet.nested import is_nested, where_written
from derive.sheet.sections.elimination import NORMALISING
from derive.sheet.sections.equations import numbered
from derive.sheet.view import View, coefficient_value, same_poles

ORDER = 60
SCOPE = "result"
EQUAL = (
    "For reading, gain and coefficients stand under Result at a glance{}; both forms are equal for all values. "
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
    long = _long(view)
    blocks += [Paragraph((Text(EQUAL.format(", the long ones here" if long else "")),)), *long]
    blocks.append(Folded((Text("Gain and coefficients written out"),), tuple(written)))
    return (view.section("Normal form", tuple(blocks)),)


def _nested(view: View, steps: Sequence[Step]) -> tuple[Block, ...]:
    """Show the response by its coefficients, and fold away of what each is the ratio."""
    written: list[Display] = [numbered(view, step) for step in steps if step.rule != normalise.NORMAL]
    whole = [numbered(view, step) for step in steps if step.rule == normalise.NORMAL]
    title = (Text("Gain and coefficients, as ratios of what the definitions give"),)
    return (*whole, Paragraph(where_written(view)), Folded(title, tuple(written)))


def _long(view: View) -> list[Block]:
    """Give the coefficients that are too long for a glance, as they are read, and the words in them."""
    earlier = same_poles(view)
    kept = [entry for entry in final(view).named if is_long(view, entry)]
    if earlier is not None:
        told = {entry.value for entry in final(earlier).named}
        kept = [entry for entry in kept if entry.value not in told]
    blocks: list[Block] = []
    for entry in kept:
        value = view.shown(entry.value, entry.step or 0)
        blocks.append(Display(Equation(Name(entry.name), value), _says(view, entry)))
    words = with_words(used_in([entry.value for entry in kept], known_definitions(view)))
    return [*blocks, *([Paragraph(words)] if words else [])]


def _says(view: View, entry: Named) -> Line:
    """Give a coefficient's value, and the step in which it was derived."""
    which, numbers = coefficient_of(view, entry), view.result.solution.numbers
    value = ""
    if which is not None and numbers is not None:
        value = f"{figure(*coefficient_value(numbers, *which))}; "
    return (Text(f"{value}from "), view.wording.reference(entry.step or 0))


def _is_rewritten(view: View) -> bool:
    """Whether the form for reading is another than the one that was derived."""
    form, read = view.result.solution.form, reading(view)
    own = (form.gain, form.numerator, form.denominator)
    return own != (read.gain, read.numerator, read.denominator)
