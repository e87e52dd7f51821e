"""The circuit as a netlist of plain numbers for the second engine.

Nodes and elements are counted, never named by the user's words. What the engine has no element for
is built of those that it has. Its current sources, the voltage-controlled one included, have the
other sign from ours.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from fractions import Fraction
from typing import Any

from derive.check.excitation import Excitation
from derive.check.stamp import terminals
from derive.devices.elements import (
    Capacitor,
    Coupling,
    CurrentGain,
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
from derive.topology.topology import GROUND


@dataclass(slots=True)
class Netlist:
    """The lines, and the node whose voltage is the response."""

    lines: list[str] = field(default_factory=list)
    response: str = "0"
    _nodes: dict[str, str] = field(default_factory=lambda: {GROUND: "0"})
    _fresh: int = 0
    _serial: int = 0
    _first: dict[str, str] = field(default_factory=dict)
    _meters: dict[str, str] = field(default_factory=dict)
    _coils: dict[str, str] = field(default_factory=dict)

    def node(self, name: str) -> str:
        """Give the number of a node."""
        return self._nodes.setdefault(name, str(len(self._nodes) + self._fresh))

    def fresh(self) -> str:
        """Give the number of a node that the circuit does not have."""
        self._fresh += 1
        return str(len(self._nodes) + self._fresh - 1)

    def put(self, letter: str, *words: str) -> str:
        """Write a line and give the element's name."""
        self._serial += 1
        name = f"{letter}{self._serial}"
        self.lines.append(" ".join((name, *words)))
        return name


def write_netlist(
    circuit: SmallSignal, excitation: Excitation, values: Mapping[str, Fraction]
) -> Netlist:
    """Write the circuit with these values, driven by an input of 1.

    Raises: KeyError for an element that cannot be written.
    """
    netlist = Netlist()
    for item in (*circuit.elements, *circuit.drives):
        for node in terminals(item) or ():
            netlist.node(node)
    sensed = [e.senses for e in circuit.elements if isinstance(e, CurrentGain | Transresistance)]
    if excitation.nodes is None:
        sensed.append(excitation.branch_of_part(circuit))
    _place_meters(netlist, circuit, list(dict.fromkeys(sensed)))
    for drive in circuit.drives:
        first, second = netlist._first[drive.name], netlist.node(drive.nodes[1])
        level = _braced(excitation.level(drive.name))
        if isinstance(drive, VoltageDrive):
            netlist.put("V", first, second, "s", level)
        else:
            netlist.put("I", second, first, "s", level)
    if excitation.test_nodes is not None:
        first, second = (netlist.node(node) for node in excitation.test_nodes)
        netlist.put("I", second, first, "s", "{1}")
    for element in circuit.elements:
        _put_element(netlist, element, values)
    for element in circuit.elements:
        if isinstance(element, Coupling):
            coils = (netlist._coils[coil] for coil in element.coils)
            netlist.put("K", *coils, _braced(values[element.coefficient]))
    _put_response(netlist, circuit, excitation)
    return netlist


def _braced(value: Fraction) -> str:
    return f"{{{value.numerator}/{value.denominator}}}"


def _place_meters(netlist: Netlist, circuit: SmallSignal, sensed: list[str]) -> None:
    """Put a source of no voltage in series with every element whose current is sensed."""
    for item in (*circuit.elements, *circuit.drives):
        pair = terminals(item)
        if pair is None:
            continue
        first = netlist.node(pair[0])
        if item.name in sensed:
            inner = netlist.fresh()
            netlist._meters[item.name] = netlist.put("V", first, inner, "s", "{0}")
            first = inner
        netlist._first[item.name] = first


def _put_element(netlist: Netlist, element: Any, values: Mapping[str, Fraction]) -> None:
    pair = terminals(element)
    if pair is None:
        return
    first, second = netlist._first[element.name], netlist.node(pair[1])
    if isinstance(element, Resistor):
        netlist.put("R", first, second, _braced(values[element.resistance]))
    elif isinstance(element, Capacitor):
        netlist.put("C", first, second, _braced(values[element.capacitance]))
    elif isinstance(element, Inductor):
        inductance = _braced(values[element.inductance])
        netlist._coils[element.name] = netlist.put("L", first, second, inductance)
    elif isinstance(element, CurrentGain):
        meter = netlist._meters[element.senses]
        netlist.put("F", first, second, meter, _braced(values[element.gain]))
    elif isinstance(element, Transresistance):
        meter = netlist._meters[element.senses]
        netlist.put("H", first, second, meter, _braced(values[element.transresistance]))
    else:
        _put_sensing(netlist, element, first, second, values)


def _put_sensing(
    netlist: Netlist, element: Any, first: str, second: str, values: Mapping[str, Fraction]
) -> None:
    if isinstance(element, VoltageGain):
        senses = [netlist.node(node) for node in element.senses]
        netlist.put("E", first, second, *senses, _braced(values[element.gain]))
    elif isinstance(element, Transconductance):
        senses = [netlist.node(node) for node in element.senses]
        netlist.put("G", second, first, *senses, _braced(values[element.transconductance]))
    elif isinstance(element, VirtualShort):
        # A two-port whose chain matrix is zero holds its input at no voltage and no current; the
        # engine ties the lower ends of a two-port together, hence the copy of the difference.
        inputs, copy = [netlist.node(node) for node in element.inputs], netlist.fresh()
        netlist.put("E", copy, "0", *inputs, "{1}")
        netlist.put("TP", first, second, copy, "0", "A", "0", "0", "0", "0")
    elif isinstance(element, OnePoleGain):
        _put_one_pole(netlist, element, first, second, values)
    else:
        raise KeyError(f"the engine has no {type(element).__name__}")


def _put_one_pole(
    netlist: Netlist, element: OnePoleGain, first: str, second: str, values: Mapping[str, Fraction]
) -> None:
    inputs = [netlist.node(node) for node in element.inputs]
    dc_gain = Fraction(1) if element.dc_gain is None else values[element.dc_gain]
    if element.unity is None:
        netlist.put("E", first, second, *inputs, _braced(dc_gain))
        return
    inner = netlist.fresh()
    if element.dc_gain is None:
        netlist.put("G", inner, "0", *inputs, _braced(values[element.unity]))
        netlist.put("C", inner, "0", "{1}")
    else:
        netlist.put("G", inner, "0", *inputs, _braced(dc_gain))
        netlist.put("R", inner, "0", "{1}")
        netlist.put("C", inner, "0", _braced(dc_gain / values[element.unity]))
    netlist.put("E", first, second, inner, "0", "{1}")


def _put_response(netlist: Netlist, circuit: SmallSignal, excitation: Excitation) -> None:
    netlist.response = netlist.fresh()
    if excitation.nodes is None:
        meter = netlist._meters[excitation.branch_of_part(circuit)]
        netlist.put("H", netlist.response, "0", meter, "{1}")
    else:
        plus, minus = (netlist.node(node) for node in excitation.nodes)
        netlist.put("E", netlist.response, "0", plus, minus, "{1}")
