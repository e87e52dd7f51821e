"""State what is sought: the find's name stands for the wanted unknown over the input."""

from __future__ import annotations

from derive.eliminate.scribe import Scribe
from derive.expressions.tree import Equation, Name, Quotient

NAME = "state what is sought"


def apply(scribe: Scribe) -> int:
    """Define the find's name."""
    system = scribe.system
    ratio = Quotient(Name(system.wanted), Name(system.input))
    equation = Equation(Name(system.find.name), ratio)
    return scribe.add(NAME, equation, defines=system.find.name, subject=system.wanted)
