"""A voltage controlled by a current: V = r·I."""

from __future__ import annotations

from derive.devices.elements import Transresistance
from derive.devices.model import Model, Names, value_symbol
from derive.quantities.dimension import RESISTANCE
from derive.topology.topology import Part

KIND = "transresistance"


def linearise(part: Part, names: Names) -> Model:
    """Give the one element that the part is."""
    first, second = part.nodes("output")
    element = Transresistance(part.name, part.name, (first, second), part.senses_part or "", part.name)
    return Model((element,), (value_symbol(part, RESISTANCE, positive=False),))
