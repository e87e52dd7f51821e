"""An inductor: V = s·L·I."""

from __future__ import annotations

from derive.devices.elements import Inductor
from derive.devices.model import Model, Names, value_symbol
from derive.quantities.dimension import INDUCTANCE
from derive.topology.kind import Kind
from derive.topology.topology import Part

KIND = "inductor"
SPEC = Kind(
    KIND,
    (("between", 2),),
    '{ inductor = "10 uH", between = ["a", "b"] }',
    dimension=INDUCTANCE,
    may_have_role=True,
    two_node_key="between",
    joins=(("between", "between"),),
)


def linearise(part: Part, names: Names) -> Model:
    """Give the one element that the part is."""
    first, second = part.nodes("between")
    element = Inductor(part.name, part.name, (first, second), part.name)
    return Model((element,), (value_symbol(part, INDUCTANCE, positive=True),))
