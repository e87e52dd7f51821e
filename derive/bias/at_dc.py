"""What ideal elements are at DC, and which nodes they join there."""

from __future__ import annotations

from collections.abc import Iterable, Iterator

from derive.bias.paths import Join
from derive.devices.elements import (
    Capacitor,
    Coupling,
    CurrentGain,
    Element,
    Inductor,
    OnePoleGain,
    Resistor,
    Transconductance,
    Transresistance,
    VirtualShort,
    VoltageGain,
)
from derive.topology.topology import GROUND


def at_dc(elements: Iterable[Element]) -> Iterator[Element]:
    """Give the elements at zero frequency: no capacitors or coils, and op amps with their DC gain.

    An integrator's gain at DC is infinite: its inputs are then at equal voltage.
    """
    for element in elements:
        if isinstance(element, OnePoleGain):
            name, part, output = element.name, element.part, element.output
            if element.dc_gain is None:
                yield VirtualShort(name, part, output, element.inputs)
            else:
                yield VoltageGain(name, part, (output, GROUND), element.inputs, element.dc_gain)
        elif not isinstance(element, Capacitor | Inductor | Coupling):
            yield element


def ends_of(element: Element) -> tuple[str, str] | None:
    """Give the nodes between which an element lets a current through at DC."""
    if isinstance(element, Resistor):
        return element.between
    if isinstance(element, CurrentGain | Transconductance):
        return element.flows
    if isinstance(element, VoltageGain | Transresistance):
        return element.output
    if isinstance(element, VirtualShort):
        return element.output, GROUND
    return None


def sensed_nodes(element: Element) -> tuple[str, ...]:
    """Give the nodes whose voltage an element answers to without drawing a current."""
    if isinstance(element, VoltageGain | Transconductance):
        return element.senses
    return element.inputs if isinstance(element, VirtualShort) else ()


def joins_of(elements: Iterable[Element]) -> tuple[Join, ...]:
    """Give the joins that elements make at DC, under the names of their parts."""
    found = ((element.part, ends_of(element)) for element in elements)
    return tuple(Join(part, ends) for part, ends in found if ends is not None)


def used_names(elements: Iterable[Element]) -> frozenset[str]:
    """Give the symbols that elements are written with."""
    keys = ("resistance", "gain", "transconductance", "transresistance")
    return frozenset(
        getattr(element, key) for element in elements for key in keys if hasattr(element, key)
    )
