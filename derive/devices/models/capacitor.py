"""A capacitor: I = s·C·V."""

from __future__ import annotations

from derive.devices.elements import Capacitor
from derive.devices.model import Model, Names, value_symbol
from derive.quantities.dimension import CAPACITANCE
from derive.topology.kind import Kind
from derive.topology.topology import Part

KIND = "capacitor"
SPEC = Kind(
    KIND,
    (("between", 2),),
    '{ capacitor = "100n", between = ["a", "b"] }',
    dimension=CAPACITANCE,
    may_have_role=True,
    two_node_key="between",
    joins=(("between", "between"),),
)


def linearise(part: Part, names: Names) -> Model:
    """Give the one element that the part is."""
    first, second = part.nodes("between")
    element = Capacitor(part.name, part.name, (first, second), part.name)
    return Model((element,), (value_symbol(part, CAPACITANCE, positive=True),))
