"""A resistor: I = V/R (Ohm)."""

from __future__ import annotations

from derive.devices.elements import Resistor
from derive.devices.model import Model, Names, value_symbol
from derive.quantities.dimension import RESISTANCE
from derive.topology.kind import Kind
from derive.topology.topology import Part

KIND = "resistor"
SPEC = Kind(
    KIND,
    (("between", 2),),
    '{ resistor = "4k7", between = ["a", "b"] }',
    dimension=RESISTANCE,
    two_node_key="between",
    joins=(("between", "between"),),
)


def linearise(part: Part, names: Names) -> Model:
    """Give the one element that the part is."""
    first, second = part.nodes("between")
    element = Resistor(part.name, part.name, (first, second), part.name)
    return Model((element,), (value_symbol(part, RESISTANCE, positive=True),))
