"""The current through every element: as a formula where its law gives one, else as an unknown."""

from __future__ import annotations

from dataclasses import dataclass

from derive.algebra.ring import Ring
from derive.devices.elements import (
    Capacitor,
    Coupling,
    CurrentGain,
    Element,
    Inductor,
    OnePoleGain,
    Resistor,
    SmallSignal,
    Transconductance,
    Transresistance,
    VirtualShort,
    VoltageDrive,
    VoltageGain,
)
from derive.expressions.tree import Name
from derive.nodal.linear_form import LinearForm
from derive.nodal.voltages import Voltages, fresh
from derive.topology.topology import GROUND, Find

TYING = (VoltageGain, Transresistance, VirtualShort, OnePoleGain, VoltageDrive)


@dataclass(frozen=True, slots=True, eq=False)
class Branches:
    """The elements of one circuit with the unknown currents that some of them need."""

    ring: Ring
    voltages: Voltages
    elements: dict[str, Element | VoltageDrive]
    unknown: dict[str, str]

    @staticmethod
    def of(circuit: SmallSignal, find: Find, voltages: Voltages, taken: set[str]) -> Branches:
        """Give the branches; inductors, and tying or circularly sensed elements, get an unknown."""
        elements: dict[str, Element | VoltageDrive] = {e.name: e for e in circuit.elements}
        elements |= {d.name: d for d in circuit.drives if isinstance(d, VoltageDrive)}
        sensed = {
            element.senses
            for element in circuit.elements
            if isinstance(element, CurrentGain | Transresistance)
        }
        wanted = find.part if find.quantity == "current" else None
        unknown = {
            name: fresh(taken, f"i_{name}")
            for name, element in elements.items()
            if isinstance(element, Inductor)
            or (isinstance(element, TYING) and (name in sensed or name == wanted))
            or (isinstance(element, CurrentGain) and name in sensed)
        }
        return Branches(voltages.ring, voltages, elements, unknown)

    def through(self, name: str) -> LinearForm:
        """Give the current through an element, from its first node to its second."""
        if name in self.unknown:
            unknown = self.unknown[name]
            return LinearForm(Name(unknown), ((unknown, self.ring.one),))
        element = self.elements[name]
        if isinstance(element, CurrentGain | Transconductance):
            return self.controlled(element)
        if isinstance(element, Resistor | Capacitor):
            return self.admitted(element, *element.between)
        raise ValueError(f"{name} has no current of its own")

    def admitted(self, element: Resistor | Capacitor, plus: str, minus: str) -> LinearForm:
        """Give the current through a passive element from one of its nodes to the other."""
        voltage = self.voltages.between(plus, minus)
        if isinstance(element, Resistor):
            generator = self.ring.generator(element.resistance)
            return voltage.over(element.resistance, generator)
        entry = self.ring.generator("s") * self.ring.generator(element.capacitance)
        return voltage.times((Name("s"), Name(element.capacitance)), entry)

    def controlled(self, element: CurrentGain | Transconductance) -> LinearForm:
        """Give the current that a controlled source's law states."""
        if isinstance(element, Transconductance):
            sensed, symbol = self.voltages.between(*element.senses), element.transconductance
        else:
            sensed, symbol = self.through(element.senses), element.gain
        return sensed.times((Name(symbol),), self.ring.generator(symbol))

    def tied_pairs(self) -> list[tuple[str, str]]:
        """Give the node pairs whose joining current is not written: they share a current law."""
        return [
            _ends(element)
            for name, element in self.elements.items()
            if isinstance(element, TYING) and name not in self.unknown
        ]

    def ends(self, name: str) -> tuple[str, str] | None:
        """Give the nodes between which an element's written current flows; None where none is."""
        element = self.elements[name]
        if isinstance(element, TYING):
            return _ends(element) if name in self.unknown else None
        if isinstance(element, Coupling):
            return None
        if isinstance(element, Transconductance | CurrentGain):
            return element.flows
        return element.between


def _ends(element: Element | VoltageDrive) -> tuple[str, str]:
    if isinstance(element, VoltageDrive):
        return element.nodes
    if isinstance(element, VirtualShort | OnePoleGain):
        return element.output, GROUND
    if isinstance(element, VoltageGain | Transresistance):
        return element.output
    raise ValueError(f"{element.name} ties no nodes")
