"""The response of linear elements at complex frequencies, stamped and solved here alone, with numpy.

Modified nodal analysis from memory: every element's law is written in a row of one matrix. Nothing of the
package's own stamping, elimination or assuming is used; only the list of elements is read.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence

import numpy as np

from derive.devices.elements import (
    Capacitor,
    Coupling,
    CurrentDrive,
    CurrentGain,
    Inductor,
    OnePoleGain,
    Resistor,
    Transconductance,
    Transresistance,
    VirtualShort,
    VoltageDrive,
    VoltageGain,
)

GROUND = "gnd"
# Elements in whose law the current is an unknown of its own.
BRANCHES = (Inductor, VoltageGain, CurrentGain, Transresistance, VirtualShort, OnePoleGain, VoltageDrive)


def response(circuit, find, values: Mapping[str, float], hertz: Sequence[float], gone=None):
    """Give the response that is sought at frequencies; `gone` says "open" or "short" of elements."""
    gone = gone or {}
    omega = 2j * np.pi * np.asarray(hertz, dtype=float)
    return np.array([_Matrix(circuit, find, values, s, gone).response() for s in omega])


class _Matrix:
    def __init__(self, circuit, find, values, s, gone) -> None:
        self.values, self.s = values, s
        self.elements = [e for e in (*circuit.elements, *circuit.drives) if gone.get(e.name) != "open"]
        self.shorted = {name for name, how in gone.items() if how == "short"}
        self.own = {e.name for e in self.elements if isinstance(e, BRANCHES)} | self.shorted
        self.own |= {e.senses for e in self.elements if isinstance(e, CurrentGain | Transresistance)}
        if find.quantity == "current":
            self.own |= {e.name for e in self.elements if e.name == find.part}
        nodes = sorted({node for e in self.elements for node in _nodes(e)} | set(find.nodes or ()))
        keys = [node for node in nodes if node != GROUND] + sorted(f"i {name}" for name in self.own)
        self.place = {key: index for index, key in enumerate(keys)}
        self.matrix = np.zeros((len(keys), len(keys)), dtype=complex)
        self.right = np.zeros(len(keys), dtype=complex)
        self.find = find
        self.weights = dict(find.per) if find.per else {}
        for element in self.elements:
            self.stamp_passive(element)
            self.stamp_source(element)
        if find.quantity == "impedance":
            for node, sign in zip(find.nodes, (1, -1), strict=True):
                if node != GROUND:
                    self.right[self.place[node]] += sign

    def response(self):
        solution = np.linalg.solve(self.matrix, self.right)
        if self.find.quantity == "current":
            return solution[self.place[f"i {self.find.part}"]]
        plus, minus = (0 if n == GROUND else solution[self.place[n]] for n in self.find.nodes)
        return plus - minus

    def add(self, row: str, column: str, value) -> None:
        if GROUND not in (row, column):
            self.matrix[self.place[row], self.place[column]] += value

    def voltage(self, row: str, pair, value=1) -> None:
        self.add(row, pair[0], value)
        self.add(row, pair[1], -value)

    def branch(self, name: str, pair) -> str:
        """Let an unknown current leave the pair's first node and enter the second; give its row."""
        key = f"i {name}"
        self.add(pair[0], key, 1)
        self.add(pair[1], key, -1)
        return key

    def admittance(self, element, pair, value) -> None:
        if element.name in self.own:
            row = self.branch(element.name, pair)
            if element.name in self.shorted:
                self.voltage(row, pair)
            else:
                self.voltage(row, pair, value)
                self.add(row, row, -1)
            return
        self.voltage(pair[0], pair, value)
        self.voltage(pair[1], pair, -value)

    def stamp_passive(self, element) -> None:
        value, s = self.values, self.s
        match element:
            case Resistor():
                self.admittance(element, element.between, 1 / value[element.resistance])
            case Capacitor():
                self.admittance(element, element.between, s * value[element.capacitance])
            case Inductor():
                row = self.branch(element.name, element.between)
                self.voltage(row, element.between)
                if element.name not in self.shorted:
                    self.add(row, row, -s * value[element.inductance])
            case Coupling():
                coils = [e for e in self.elements if e.name in element.coils]
                mutual = value[element.coefficient] * np.sqrt(
                    np.prod([value[c.inductance] for c in coils])
                )
                one, other = (f"i {name}" for name in element.coils)
                self.add(one, other, -s * mutual)
                self.add(other, one, -s * mutual)

    def stamp_source(self, element) -> None:
        value, s = self.values, self.s
        match element:
            case Transconductance(flows=(out, into), senses=senses):
                self.voltage(out, senses, value[element.transconductance])
                self.voltage(into, senses, -value[element.transconductance])
            case VoltageGain():
                row = self.branch(element.name, element.output)
                self.voltage(row, element.output)
                self.voltage(row, element.senses, -value[element.gain])
            case CurrentGain():
                row = self.branch(element.name, element.flows)
                self.add(row, row, 1)
                self.add(row, f"i {element.senses}", -value[element.gain])
            case Transresistance():
                row = self.branch(element.name, element.output)
                self.voltage(row, element.output)
                self.add(row, f"i {element.senses}", -value[element.transresistance])
            case VirtualShort():
                row = self.branch(element.name, (element.output, GROUND))
                self.voltage(row, element.inputs)
            case OnePoleGain():
                row = self.branch(element.name, (element.output, GROUND))
                slope = 0 if element.unity is None else s / value[element.unity]
                constant = 0 if element.dc_gain is None else 1 / value[element.dc_gain]
                self.add(row, element.output, constant + slope)
                self.voltage(row, element.inputs, -1)
            case VoltageDrive():
                row = self.branch(element.name, element.nodes)
                self.voltage(row, element.nodes)
                self.right[self.place[row]] += float(self.weights.get(element.name, 0))
            case CurrentDrive():
                self.current_drive(element)

    def current_drive(self, element) -> None:
        weight = float(self.weights.get(element.name, 0))
        for node, sign in zip(element.nodes, (-1, 1), strict=True):
            if node != GROUND:
                self.right[self.place[node]] += sign * weight


def _nodes(element):
    match element:
        case Resistor() | Capacitor() | Inductor():
            return element.between
        case Transconductance():
            return (*element.flows, *element.senses)
        case VoltageGain():
            return (*element.output, *element.senses)
        case CurrentGain():
            return element.flows
        case Transresistance():
            return element.output
        case VirtualShort() | OnePoleGain():
            return (element.output, *element.inputs)
        case Coupling():
            return ()
    return element.nodes
