"""A current controlled by a voltage: I = g·V."""

from __future__ import annotations

from derive.devices.elements import Transconductance
from derive.devices.model import Model, Names, value_symbol
from derive.quantities.dimension import CONDUCTANCE
from derive.topology.kind import Kind
from derive.topology.topology import Part

KIND = "transconductance"
SPEC = Kind(
    KIND,
    (("flows", 2), ("senses", 2)),
    '{ transconductance = "40 mS", flows = ["c", "e"], senses = ["b", "e"] }',
    dimension=CONDUCTANCE,
    sign="not zero",
    two_node_key="flows",
)


def linearise(part: Part, names: Names) -> Model:
    """Give the one element that the part is."""
    first, second = part.nodes("flows")
    plus, minus = part.nodes("senses")
    element = Transconductance(part.name, part.name, (first, second), (plus, minus), part.name)
    return Model((element,), (value_symbol(part, CONDUCTANCE, positive=False),))
