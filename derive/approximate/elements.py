"""What a limit of a symbol does to the circuit, in words of the trade."""

from __future__ import annotations

from derive.bands.band_circuit import BandCircuit
from derive.bands.wiring import ends_of, symbols_of
from derive.devices.elements import (
    Capacitor,
    CurrentGain,
    Element,
    Inductor,
    Resistor,
    Transconductance,
    Transresistance,
    VoltageGain,
)
from derive.topology.topology import GROUND


def said_of(band: BandCircuit, symbol: str, *, upward: bool) -> str:
    """Say what a symbol's limit does: "R_B removed", "C_1 shorted: node b becomes node x"."""
    element = element_of(band, symbol)
    if element is None:
        return f"{symbol} taken as {'infinite' if upward else 'zero'}"
    if removed(element, upward=upward):
        return f"{symbol} removed"
    if shorted(element, upward=upward):
        first, second = ends_of(element)
        if GROUND in (first, second):
            other = second if first == GROUND else first
            return f"{symbol} shorted: node {other} becomes signal ground"
        return f"{symbol} shorted: nodes {first} and {second} become one"
    return f"{symbol} taken as {'infinite' if upward else 'zero'}"


def element_of(band: BandCircuit, symbol: str) -> Element | None:
    """Give the element whose value a symbol is, merged parts included."""
    for element in (*band.circuit.elements, *band.unmerged.elements):
        if symbol in symbols_of(element):
            return element
    return None


def removed(element: Element, *, upward: bool) -> bool:
    """Whether the limit of its value leaves the element out."""
    if upward:
        return isinstance(element, Resistor | Inductor)
    return isinstance(element, Capacitor | Transconductance | CurrentGain)


def shorted(element: Element, *, upward: bool) -> bool:
    """Whether the limit of its value makes the element's nodes one."""
    if upward:
        return isinstance(element, Capacitor)
    return isinstance(element, Resistor | Inductor | VoltageGain | Transresistance)
