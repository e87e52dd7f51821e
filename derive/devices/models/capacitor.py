"""A capacitor: I = s·C·V."""

from __future__ import annotations

from derive.devices.elements import Capacitor
from derive.devices.model import Model, Names, value_symbol
from derive.quantities.dimension import CAPACITANCE
from derive.topology.topology import Part

KIND = "capacitor"


def linearise(part: Part, names: Names) -> Model:
    """Give the one element that the part is."""
    first, second = part.nodes("between")
    element = Capacitor(part.name, part.name, (first, second), part.name)
    return Model((element,), (value_symbol(part, CAPACITANCE, positive=True),))
