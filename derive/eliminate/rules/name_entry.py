"""Give an entry of the equations a short name, so that later lines stay short."""

from __future__ import annotations

from derive.eliminate.scribe import Scribe
from derive.expressions.tree import Equation, Expression, Name

NAME = "name an entry"


def apply(scribe: Scribe, name: Name, meaning: Expression) -> int:
    """Define a name by the circuit's values and by names defined before."""
    return scribe.add(NAME, Equation(name, meaning), defines=name.text, subject=name.text)
