"""A current controlled by a current: I = k·I."""

from __future__ import annotations

from derive.devices.elements import CurrentGain
from derive.devices.model import Model, Names, value_symbol
from derive.quantities.dimension import RATIO
from derive.topology.kind import Kind
from derive.topology.topology import Part

KIND = "current_gain"
SPEC = Kind(
    KIND,
    (("flows", 2),),
    '{ current_gain = "100", flows = ["c", "e"], senses = "R_1" }',
    dimension=RATIO,
    sign="not zero",
    senses_part=True,
    two_node_key="flows",
)


def linearise(part: Part, names: Names) -> Model:
    """Give the one element that the part is."""
    first, second = part.nodes("flows")
    element = CurrentGain(part.name, part.name, (first, second), part.senses_part or "", part.name)
    return Model((element,), (value_symbol(part, RATIO, positive=False),))
