"""A voltage controlled by a current: V = r·I."""

from __future__ import annotations

from derive.devices.elements import Transresistance
from derive.devices.model import Model, Names, value_symbol
from derive.quantities.dimension import RESISTANCE
from derive.topology.kind import Kind
from derive.topology.topology import Part

KIND = "transresistance"
SPEC = Kind(
    KIND,
    (("output", 2),),
    '{ transresistance = "1 kΩ", output = ["out", "gnd"], senses = "R_1" }',
    dimension=RESISTANCE,
    sign="not zero",
    senses_part=True,
    two_node_key="output",
)


def linearise(part: Part, names: Names) -> Model:
    """Give the one element that the part is."""
    first, second = part.nodes("output")
    element = Transresistance(part.name, part.name, (first, second), part.senses_part or "", part.name)
    return Model((element,), (value_symbol(part, RESISTANCE, positive=False),))
