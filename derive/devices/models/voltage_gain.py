"""A voltage controlled by a voltage: V = A·V."""

from __future__ import annotations

from derive.devices.elements import VoltageGain
from derive.devices.model import Model, Names, value_symbol
from derive.quantities.dimension import RATIO
from derive.topology.kind import Kind
from derive.topology.topology import Part

KIND = "voltage_gain"
SPEC = Kind(
    KIND,
    (("output", 2), ("senses", 2)),
    '{ voltage_gain = "10", output = ["out", "gnd"], senses = ["in", "gnd"] }',
    dimension=RATIO,
    sign="not zero",
    two_node_key="output",
)


def linearise(part: Part, names: Names) -> Model:
    """Give the one element that the part is."""
    first, second = part.nodes("output")
    plus, minus = part.nodes("senses")
    element = VoltageGain(part.name, part.name, (first, second), (plus, minus), part.name)
    return Model((element,), (value_symbol(part, RATIO, positive=False),))
