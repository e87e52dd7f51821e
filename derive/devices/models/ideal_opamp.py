"""An ideal op amp: inputs at equal voltage, no input current, whatever output current that takes."""

from __future__ import annotations

from derive.devices.elements import VirtualShort
from derive.devices.model import Model, Names
from derive.topology.kind import Kind
from derive.topology.topology import Part

KIND = "ideal_opamp"
SPEC = Kind(
    KIND,
    (("output", 1), ("inputs", 2)),
    '{ ideal_opamp = true, output = "out", inputs = ["plus", "minus"] }',
    written="true",
)


def linearise(part: Part, names: Names) -> Model:
    """Give the virtual short; an ideal op amp has no symbols."""
    plus, minus = part.nodes("inputs")
    (output,) = part.nodes("output")
    return Model((VirtualShort(part.name, part.name, output, (plus, minus)),), ())
