"""Builds the elements of a device from its parameters: what is left out has no element."""

from __future__ import annotations

from dataclasses import dataclass, field

from derive.devices.elements import Capacitor, Element, Resistor, Transconductance
from derive.devices.model import Model
from derive.devices.parameters import DeviceParameters, ParameterLine
from derive.quantities.format import engineering
from derive.quantities.symbol import Symbol
from derive.topology.topology import GROUND, Part

Pair = tuple[str, str]


@dataclass
class Builder:
    """Gathers the elements of one part; an element between a node and itself is none."""

    part: Part
    parameters: DeviceParameters
    elements: list[Element] = field(default_factory=list)
    used: list[str] = field(default_factory=list)

    def node(self, key: str) -> str:
        """Give the node of a terminal; ground for one that is not written."""
        return dict(self.part.wires).get(key, (GROUND,))[0]

    def has(self, key: str) -> bool:
        """Whether the parameter is not left out."""
        return self.parameters.symbol(key) is not None

    def resistor(self, key: str, between: Pair) -> None:
        """Add a resistor of this parameter."""
        if symbol := self._symbol(key, between):
            name = f"{self.part.name}.{key}"
            self.elements.append(Resistor(name, self.part.name, between, symbol))

    def capacitor(self, key: str, between: Pair) -> None:
        """Add a capacitor of this parameter."""
        if symbol := self._symbol(key, between):
            name = f"{self.part.name}.{key}"
            self.elements.append(Capacitor(name, self.part.name, between, symbol))

    def transconductance(self, key: str, flows: Pair, senses: Pair) -> None:
        """Add a transconductance of this parameter; none where it senses nothing."""
        if senses[0] != senses[1] and (symbol := self._symbol(key, flows)):
            name = f"{self.part.name}.{key}"
            self.elements.append(Transconductance(name, self.part.name, flows, senses, symbol))

    def model(self) -> Model:
        """Give what was gathered, with the symbols that it uses."""
        lines = [line for line in self.parameters.lines if line.key in self.used]
        return Model(tuple(self.elements), tuple(line_symbol(self.part, line) for line in lines))

    def _symbol(self, key: str, nodes: Pair) -> str | None:
        symbol = self.parameters.symbol(key)
        if symbol is not None and nodes[0] != nodes[1]:
            self.used.append(key)
            return symbol
        return None


def line_symbol(part: Part, line: ParameterLine) -> Symbol:
    """Give the symbol of one parameter of a device."""
    text = line.text or ("?" if line.value is None else engineering(line.value, line.dimension))
    return Symbol(line.symbol, line.dimension, line.value, f"part {part.name}", text)
