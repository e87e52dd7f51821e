"""A DC current or voltage as a response of the DC circuit: its equations, its value and its steps."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, replace
from fractions import Fraction
from typing import Literal

from derive.bias.dc_circuit import DcCircuit
from derive.bias.dc_device import DcDevice
from derive.bias.linear import OpenError, solve
from derive.bias.unit import with_unit_input, without_input
from derive.devices.elements import VoltageDrive
from derive.eliminate.derivation import Derivation
from derive.eliminate.eliminate import eliminate
from derive.eliminate.plan import plan
from derive.errors import InputError, TooLargeError
from derive.nodal.currents import meaning
from derive.nodal.system import NodalEquation, NodalSystem
from derive.nodal.voltages import fresh, tie_nodes
from derive.nodal.write import nodes_of, write_equations
from derive.quantities.words import listed
from derive.topology.topology import GROUND, Find

# A current of more terms than this, numerator and denominator together, is read by nobody.
LONGEST = 300


@dataclass(frozen=True, slots=True)
class Response:
    """One wanted quantity of the DC circuit, under the name that it is shown with."""

    dc: DcCircuit
    device: DcDevice
    system: NodalSystem

    def at(self, values: Mapping[str, Fraction]) -> dict[str, Fraction]:
        """Give every unknown at these values.

        Raises: InputError where the DC circuit has no unique solution, with the nodes named.
        """
        try:
            return solve(self.system, {**self.dc.values, **values})
        except OpenError as error:
            raise _no_solution(self, error) from error

    def value(self, values: Mapping[str, Fraction]) -> Fraction:
        """Give the wanted quantity at these values."""
        return self.at(values)[self.system.wanted]

    def derivation(self) -> Derivation | None:
        """Give the steps to the wanted quantity; None where they would be too long to write down.

        Raises: InputError where the DC circuit has no unique solution for any values.
        """
        system = with_unit_input(self.system)
        try:
            found = eliminate(system, plan(system))
        except TooLargeError:
            return None
        except InputError as error:
            raise _no_solution(self, OpenError(())) from error
        if len(found.numerator) + len(found.denominator) > LONGEST:
            return None
        return without_input(found, shown_names(self.dc, self.system))

    def shown_values(self, values: Mapping[str, Fraction]) -> dict[str, Fraction]:
        """Give the value of every symbol and unknown under the name that steps show it with."""
        found = self.at(values)
        names = shown_names(self.dc, self.system)
        names[self.system.wanted] = self.system.find.name
        shown = {names[name]: value for name, value in found.items()}
        return {**self.dc.values, **values, **shown}


def current_of(dc: DcCircuit, device: DcDevice) -> Response:
    """Give the response that is a device's current: of its collector, or through its junction."""
    element = device.dc.elements[0].name if device.dc.elements else device.dc.drives[0].name
    name = dc.names.indexed(device.part, device.model.CURRENT)
    return _response(dc, device, name, "current", part=element)


def voltage_of(dc: DcCircuit, device: DcDevice, name: str, nodes: tuple[str, str]) -> Response:
    """Give the response that is the voltage between two nodes."""
    return _response(dc, device, name, "voltage", nodes=nodes)


def node_voltages(
    dc: DcCircuit, system: NodalSystem, known: Mapping[str, Fraction]
) -> tuple[tuple[str, Fraction], ...]:
    """Give the voltage of every node that DC reaches, in the order in which nodes are named.

    Given: the value of every unknown of the system and of every drive that is not at zero.
    """
    order = [node for drive in dc.topology.drives for node in drive.nodes]
    order += [node for part in dc.topology.parts for node in part.all_nodes]
    nodes = nodes_of(system.small_signal)
    drives = [d for d in system.small_signal.drives if isinstance(d, VoltageDrive)]
    ties = tie_nodes(nodes, drives)
    # Nodes come before the wanted voltage, which bears the name of its first node.
    voltages = [u for u in system.unknowns if u.quantity == "voltage"]
    of_node = {u.subject: u.name for u in reversed(voltages)}
    found = []
    for node in dict.fromkeys([*order, *nodes]):
        tie = ties.get(node)
        if node == GROUND or tie is None or not (tie.base == GROUND or tie.base in of_node):
            continue
        base = Fraction(0) if tie.base == GROUND else known[of_node[tie.base]]
        own = (sign * known[name] for name, sign in tie.drives if name in dc.active)
        found.append((node, base + sum(own, Fraction(0))))
    return tuple(found)


def shown_names(dc: DcCircuit, system: NodalSystem) -> dict[str, str]:
    """Give the name that each unknown is shown with: V_b for a node, I_B for a base current."""
    taken = {*system.ring.names, system.find.name, *(u.name for u in system.unknowns)}
    owner = {drive.name: found for found in dc.devices for drive in found.dc.drives}
    bases = {found.base_current: found for found in dc.devices}
    names = {}
    for unknown in system.unknowns:
        if unknown.name == system.wanted:
            continue
        wanted = unknown.name[:1].upper() + unknown.name[1:]
        found = owner.get(unknown.subject) or bases.get(unknown.subject)
        if unknown.quantity == "current" and found is not None:
            short = "I_B" if found.dc.elements else found.model.CURRENT
            wanted = dc.names.indexed(found.part, short)
        names[unknown.name] = fresh(taken, wanted)
    return names


def _response(
    dc: DcCircuit,
    device: DcDevice,
    name: str,
    quantity: Literal["voltage", "current"],
    nodes: tuple[str, str] | None = None,
    part: str | None = None,
) -> Response:
    taken = {*(symbol.name for symbol in dc.circuit.symbols), *dc.names.taken}
    per = tuple((drive, Fraction(1)) for drive in dc.active)
    find = Find(fresh(taken, name), device.part.place, quantity, nodes, part, per)
    system = write_equations(dc.circuit, find)
    equations = tuple(_worded(dc, device, equation) for equation in system.equations)
    return Response(dc, device, replace(system, equations=equations))


def _worded(dc: DcCircuit, device: DcDevice, equation: NodalEquation) -> NodalEquation:
    """Say the equation's meaning with the names of devices, not of what stands for them."""
    owner = {drive.name: found.part.name for found in dc.devices for drive in found.dc.drives}
    if equation.nodes:
        through = dict.fromkeys(owner.get(term.part, term.part) for term in equation.terms)
        return replace(equation, meaning=meaning(equation.nodes, tuple(through)))
    for element in device.dc.elements:
        if equation.meaning == f"current through {element.name}":
            words = f"collector current of {device.part.name}: its current gain times its base current"
            return replace(equation, meaning=words)
    for found in dc.devices:
        if found.leader is not None and equation.meaning == f"current of {found.part.name}":
            words = f"base current of {found.part.name}: as {found.leader}'s, at the same V_BE"
            return replace(equation, meaning=words)
    return equation


def _no_solution(response: Response, error: OpenError) -> InputError:
    part = response.device.part
    subjects = {unknown.name: unknown for unknown in response.system.unknowns}
    nodes = [subjects[n].subject for n in error.unknowns if subjects[n].quantity == "voltage"]
    if nodes:
        touching = [d.part for d in response.dc.devices if nodes[0] in d.part.all_nodes]
        part = next(iter(touching), part)
        what = f"nothing settles the voltage of node {listed(nodes)}"
        cure = "give the node a DC path to ground or to a supply that does not lead through a device"
    else:
        what = "sources and devices fix the same voltage or current in two ways"
        cure = (
            "look for device currents that meet where nothing else flows, or for stiff voltages that meet; "
            "put a resistor there"
        )
    return InputError(
        f"part {part.name}: the operating point does not exist: {what}",
        where=str(part.place),
        cure=cure,
    )
