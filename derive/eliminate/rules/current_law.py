"""Write an equation of the circuit as it stands: a current law, or the law of an element."""

from __future__ import annotations

from derive.eliminate.scribe import Scribe

NAME = "write a current law"
LAW = "write an element's law"


def apply(scribe: Scribe, index: int) -> int:
    """Write the system's equation of this index; its truth is judged against the circuit itself."""
    equation = scribe.system.equations[index]
    rule = NAME if equation.nodes else LAW
    return scribe.add(rule, equation.equation, row=index)
