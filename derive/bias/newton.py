"""The operating point once more, by Newton's method on the devices' own laws.

The laws are exponential for junctions and square for field-effect transistors, as the device models
state them. All node voltages are unknowns; a step that does not bring the currents nearer to balance
is halved. Source: Newton's method with damping is common practice for such circuits.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, replace
from fractions import Fraction

import numpy as np
import numpy.typing as npt

from derive.bias.at_dc import used_names
from derive.bias.dc_circuit import DcCircuit
from derive.bias.dc_device import DcDevice
from derive.bias.linear import number_rows
from derive.bias.response import node_voltages
from derive.devices.elements import CurrentDrive, DriveElement, VoltageDrive
from derive.nodal.system import NodalSystem
from derive.nodal.voltages import tie_nodes
from derive.nodal.write import nodes_of, write_equations
from derive.topology.topology import GROUND, Find

Array = npt.NDArray[np.float64]
# Common practice: a constant V_BE is good for hand work if the currents come out this near.
MOST_STEPS = 200
SMALLEST_FRACTION = 2.0**-30
NEAR_ENOUGH = 1e-9
# A voltage equation's volts weigh like milliamperes in the balance.
VOLTS_TO_AMPERES = 1e-3
NUDGE = 1e-7


@dataclass(frozen=True, slots=True, eq=False)
class Balance:
    """What must vanish: matrix · x + constant + spread · (currents into the terminals).

    `reads` and `offset` give the terminals' voltages from x.
    """

    matrix: Array
    constant: Array
    spread: Array
    reads: Array
    offset: Array
    terminals: tuple[tuple[DcDevice, str], ...]
    thermal_voltage: float

    def currents(self, x: Array) -> Array:
        """Give the current into each terminal; infinite where a law overflows."""
        return self._law(self.reads @ x + self.offset)

    def residual(self, x: Array) -> Array:
        """Give what is out of balance."""
        return self.matrix @ x + self.constant + self.spread @ self.currents(x)

    def slope(self, x: Array) -> Array:
        """Give the Jacobian, the laws' slopes by central differences."""
        voltages = self.reads @ x + self.offset
        slopes = np.zeros((len(voltages), len(voltages)))
        for k in range(len(voltages)):
            nudge = np.zeros(len(voltages))
            nudge[k] = NUDGE
            slopes[:, k] = (self._law(voltages + nudge) - self._law(voltages - nudge)) / (2 * NUDGE)
        return self.matrix + self.spread @ slopes @ self.reads

    def _law(self, voltages: Array) -> Array:
        found: list[float] = []
        place = 0
        while place < len(self.terminals):
            device = self.terminals[place][0]
            keys = [key for other, key in self.terminals if other is device]
            at = {key: float(voltages[place + k]) for k, key in enumerate(keys)}
            values = {key: float(value) for key, value in device.values.items()}
            if device.given is not None:
                first, second = device.main
                amperes = device.sign * float(device.given)
                currents = {first: amperes, second: -amperes}
            else:
                try:
                    currents = device.model.currents(at, values, self.thermal_voltage)
                except OverflowError:
                    currents = dict.fromkeys(keys, float("inf"))
            found += [currents.get(key, 0.0) for key in keys]
            place += len(keys)
        return np.array(found)


@dataclass(frozen=True, slots=True)
class LawPoint:
    """The state that the devices' own laws give: currents by part, voltages by node."""

    currents: dict[str, float]
    nodes: tuple[tuple[str, Fraction], ...]


def by_own_laws(
    dc: DcCircuit, nodes: Mapping[str, Fraction], thermal_voltage: Fraction
) -> LawPoint | None:
    """Give the state by the devices' own laws, sought from these voltages; None where none is found."""
    system, balance, start = _balance(dc, nodes, float(thermal_voltage))
    found = search(balance, start)
    if found is None:
        return None
    at_terminals = balance.currents(found)
    currents = {}
    for place, (device, key) in enumerate(balance.terminals):
        if key == device.main[0]:
            currents[device.part.name] = device.sign * float(at_terminals[place])
    known = {u.name: Fraction(float(x)) for u, x in zip(system.unknowns, found, strict=True)}
    return LawPoint(currents, node_voltages(dc, system, {**dc.values, **known}))


def search(balance: Balance, start: Array) -> Array | None:
    """Give the balanced state; None where it is not found in MOST_STEPS steps."""
    x = start
    with np.errstate(over="ignore", invalid="ignore"):
        size = _size(balance.residual(x))
        for _ in range(MOST_STEPS):
            try:
                step: Array = np.asarray(
                    np.linalg.solve(balance.slope(x), -balance.residual(x)), np.float64
                )
            except np.linalg.LinAlgError:
                return None
            if not np.all(np.isfinite(step)):
                return None
            fraction = 1.0
            while not (after := _size(balance.residual(x + fraction * step))) < size:
                fraction /= 2
                if fraction < SMALLEST_FRACTION:
                    break
            if fraction < SMALLEST_FRACTION:
                return x if _near(balance, x, step, size) else None
            x, size = x + fraction * step, after
            if fraction == 1.0 and _near(balance, x, step, size):
                return x
    return None


def _size(residual: Array) -> float:
    return float(np.sqrt(np.sum(residual**2)))


def _near(balance: Balance, x: Array, step: Array, size: float) -> bool:
    largest = float(np.max(np.abs(balance.currents(x))))
    return size <= NEAR_ENOUGH * largest and float(np.max(np.abs(balance.reads @ step))) < NEAR_ENOUGH


def _balance(
    dc: DcCircuit, nodes: Mapping[str, Fraction], thermal_voltage: float
) -> tuple[NodalSystem, Balance, Array]:
    """Write the circuit without its devices, their currents being drives from terminal to ground."""
    system, terminals, names = _open_system(dc)
    unknowns = [unknown.name for unknown in system.unknowns]
    rows = number_rows(system, dc.values)
    weights = np.array([1.0 if e.nodes else VOLTS_TO_AMPERES for e in system.equations])[:, None]
    matrix = np.array([[float(row.get(name, 0)) for name in unknowns] for row in rows]) * weights
    spread = np.array([[float(row.get(name, 0)) for name in names] for row in rows]) * weights
    others = [name for name in dc.values if name not in names]
    constants = [sum(float(row.get(n, 0) * dc.values[n]) for n in others) for row in rows]
    drives = tuple(d for d in system.small_signal.drives if isinstance(d, VoltageDrive))
    ties = tie_nodes(nodes_of(system.small_signal), drives)
    places = [(u.subject, k) for k, u in enumerate(system.unknowns) if u.quantity == "voltage"]
    # A wanted voltage may stand behind the nodes under the name of its first node.
    of_node = dict(reversed(places))
    reads = np.zeros((len(terminals), len(unknowns)))
    offset = np.zeros(len(terminals))
    for place, (device, key) in enumerate(terminals):
        tie = ties[device.node(key)] if device.node(key) != GROUND else None
        if tie is None:
            continue
        if tie.base != GROUND:
            reads[place, of_node[tie.base]] = 1
        offset[place] = sum(s * float(dc.values[n]) for n, s in tie.drives if n in dc.values)
    start = np.array(
        [float(nodes.get(u.subject, 0)) if u.quantity == "voltage" else 0.0 for u in system.unknowns]
    )
    constant = np.array(constants) * weights[:, 0]
    balance = Balance(matrix, constant, spread, reads, offset, terminals, thermal_voltage)
    return system, balance, start


def _open_system(
    dc: DcCircuit,
) -> tuple[NodalSystem, tuple[tuple[DcDevice, str], ...], list[str]]:
    inside = {drive.name for device in dc.devices for drive in device.dc.drives}
    parts = {device.part.name for device in dc.devices}
    terminals = tuple((device, key) for device in dc.devices for key, _ in device.part.wires)
    names = [f"{device.part.name}.{key}" for device, key in terminals]
    drives: list[DriveElement] = [d for d in dc.circuit.drives if d.name not in inside]
    drives += [
        CurrentDrive(name, (device.node(key), GROUND))
        for name, (device, key) in zip(names, terminals, strict=True)
    ]
    elements = tuple(e for e in dc.circuit.elements if e.part not in parts)
    used = used_names(elements)
    symbols = tuple(symbol for symbol in dc.circuit.symbols if symbol.name in used)
    circuit = replace(dc.circuit, elements=elements, drives=tuple(drives), symbols=symbols)
    active = [name for name in dc.active if name not in inside]
    node = next(device.node(key) for device, key in terminals if device.node(key) != GROUND)
    per = tuple((name, Fraction(1)) for name in (*active, *names))
    find = Find("newton", dc.devices[0].part.place, "voltage", (node, GROUND), None, per)
    return write_equations(circuit, find), terminals, names
