"""Name the multiple of one equation that takes an unknown out of another."""

from __future__ import annotations

from derive.eliminate.scribe import Scribe
from derive.expressions.tree import Equation, Expression, Name

NAME = "name a ratio"


def apply(scribe: Scribe, name: Name, meaning: Expression, divisor: Expression) -> int:
    """Define the ratio of two entries; the divisor is stated not to be zero."""
    equation = Equation(name, meaning)
    return scribe.add(NAME, equation, defines=name.text, subject=name.text, nonzero=divisor)
