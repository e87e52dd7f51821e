"""Parts of an expression that bear a name already, replaced by it for print."""

from __future__ import annotations

from collections.abc import Mapping

from derive.expressions.tree import Expression
from derive.expressions.walk import children_of, with_children


def replaced(expression: Expression, names: Mapping[Expression, Expression]) -> Expression:
    """Put a name in the place of every part of an expression that is written just like what it names."""
    known = names.get(expression)
    if known is not None:
        return known
    return with_children(expression, tuple(replaced(part, names) for part in children_of(expression)))
