"""The cures of a line that are worth telling: those that differ in more than how they are written."""

from __future__ import annotations

from derive.expressions.text import to_text
from derive.expressions.tree import Equation, Expression, Product, Sum
from derive.expressions.walk import children_of
from derive.handcheck.report import Edit, LineVerdict


def told_edits(verdict: LineVerdict, most: int) -> tuple[Edit, ...]:
    """Give the likeliest cures, each another one when brackets and order are left out of account."""
    found: dict[str, Edit] = {}
    for edit in verdict.edits:
        found.setdefault(_alike(edit.line), edit)
    return tuple(found.values())[:most]


def _alike(content: Equation | Expression) -> str:
    """Give a text that is the same for expressions that differ in order and in brackets of one kind only."""
    if isinstance(content, Equation):
        return f"{_alike(content.left)} = {_alike(content.right)}"
    if isinstance(content, Sum | Product):
        return f"{type(content).__name__}({', '.join(sorted(_flat(content, type(content))))})"
    children = children_of(content)
    if not children:
        return to_text(content)
    inner = ", ".join(_alike(child) for child in children)
    return f"{type(content).__name__}{getattr(content, 'exponent', '')}({inner})"


def _flat(content: Expression, kind: type) -> list[str]:
    if not isinstance(content, kind):
        return [_alike(content)]
    return [text for child in children_of(content) for text in _flat(child, kind)]
