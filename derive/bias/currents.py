"""The currents of all devices and the node voltages, by the laws of hand work or the devices' own."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, replace
from fractions import Fraction

from derive.bias.dc_circuit import DcCircuit
from derive.bias.dc_device import DcDevice
from derive.bias.newton import by_own_laws
from derive.bias.operating_point import CurrentDerivation, Method
from derive.bias.replay import broken_steps
from derive.bias.response import Response, current_of, node_voltages, voltage_of
from derive.bias.square_law import square_currents
from derive.bias.square_numeric import rounded
from derive.bias.thevenin import with_divider
from derive.bias.unit import needed
from derive.errors import InputError
from derive.quantities.dimension import CURRENT
from derive.quantities.format import engineering

# A device that carries less than this share of the largest current, or less than this, is off.
OFF_SHARE, OFF_CURRENT = 1e-4, 1e-9
FLOAT_DIGITS = 15


@dataclass(frozen=True, slots=True)
class Solved:
    """Currents by part, voltages by node, and how they were found.

    `not_conducting` lists the devices whose current came out zero or backwards.
    """

    method: Method
    currents: dict[str, Fraction]
    nodes: tuple[tuple[str, Fraction], ...]
    derivations: tuple[CurrentDerivation, ...]
    not_conducting: tuple[DcDevice, ...] = ()


def by_constant_voltages(dc: DcCircuit) -> Solved:
    """Solve the DC circuit with constant junction voltages, and square laws where there are any.

    Raises: InputError where the circuit has no unique solution, or no square law can hold.
    """
    square = square_currents(dc)
    method: Method = "linear"
    if square.values:
        method = "square law, closed form" if square.is_closed else "square law, numeric"
    currents: dict[str, Fraction] = {}
    derivations: dict[str, CurrentDerivation] = {d.part: d for d in square.derivations}
    off: list[DcDevice] = []
    for device in dc.devices:
        name = device.part.name
        if device.given is not None:
            currents[name] = device.given
        elif device.is_square:
            currents[name] = square.values[device.dc.drives[0].name]
        else:
            response = current_of(dc, device)
            currents[name] = response.value(square.values)
            derivations[name] = _derivation(response, square.values)
            if currents[name] <= 0:
                off.append(device)
    first = dc.devices[0]
    across = (first.node(first.main[0]), first.node(first.main[1]))
    response = voltage_of(dc, first, "V", across)
    known = {**dc.values, **square.values, **response.at(square.values)}
    nodes = node_voltages(dc, response.system, known)
    names = [device.part.name for device in dc.devices]
    shown = tuple(derivations[name] for name in names if name in derivations)
    return Solved(method, currents, nodes, shown, tuple(off))


def by_exponential_laws(
    dc: DcCircuit, solved: Solved, off: tuple[DcDevice, ...], thermal_voltage: Fraction
) -> Solved:
    """Solve by the devices' own laws, where constant voltages leave a device without current.

    A pair with unlike base resistors is such a circuit: constant voltages give one side everything.
    Raises: InputError where the device is off by its own law too.
    """
    found = by_own_laws(dc, dict(solved.nodes), thermal_voltage)
    if found is None:
        raise does_not_conduct(off[0], solved.currents[off[0].part.name])
    least = max(OFF_SHARE * max(found.currents.values()), OFF_CURRENT)
    for device in off:
        if found.currents[device.part.name] <= least:
            raise does_not_conduct(device, solved.currents[device.part.name])
    says = (
        "constant junction voltages do not settle how the current divides: solved by Newton's method "
        "on the exponential laws at the nominal values, to 15 significant digits"
    )
    digits = FLOAT_DIGITS
    currents = {name: rounded(Fraction(value), digits) for name, value in found.currents.items()}
    derivations = tuple(
        CurrentDerivation(
            device.part.name, dc.names.indexed(device.part, device.model.CURRENT), (), None, says
        )
        for device in dc.devices
        if device.given is None
    )
    nodes = tuple((node, rounded(volts, digits)) for node, volts in found.nodes)
    return Solved("exponential law, numeric", currents, nodes, derivations)


def _derivation(response: Response, currents: Mapping[str, Fraction]) -> CurrentDerivation:
    """Derive one current in steps; for the usual divider with its usual formula at the end."""
    part, symbol = response.device.part.name, response.system.find.name
    found = response.derivation()
    if found is None:
        says = "the terms are too many to write down: solved exactly at the nominal values"
        return CurrentDerivation(part, symbol, (), None, says)
    says = "constant voltage at every conducting junction, so that the DC circuit is linear"
    divided = with_divider(response.dc, response.device, found)
    found = replace(found, steps=needed(found.steps))
    if divided is not None:
        found = divided
        says += "; V_BB and R_B by Thévenin, equal to the nodal result for all values"
    shown = CurrentDerivation(part, symbol, found.steps, found.steps[-1].equation, says, found)
    return replace(shown, broken=broken_steps(shown, response.shown_values(currents)))


def does_not_conduct(device: DcDevice, current: Fraction) -> InputError:
    """Give the error for a device whose current is zero or backwards."""
    part = device.part
    choices = dict(device.model.SPEC.choices).get("polarity", ())
    if device.control is None:
        what, cure = "it would have to conduct backwards", "turn it round, or take it out"
    elif choices:
        polarity = dict(part.words).get("polarity", choices[0])
        other = next(choice for choice in choices if choice != polarity)
        article = "an" if other[:1] in "aeiun" else "a"
        what = f"with this bias the {polarity} transistor does not conduct"
        cure = f"look at its polarity (the bias may be that of {article} {other}) and at its {device.control}'s bias"
    else:
        what, cure = "it does not conduct", "look at its bias"
    size = f"{device.model.CURRENT} would be {engineering(current, CURRENT)}"
    return InputError(
        f"part {part.name}: the operating point does not exist: {what} ({size})",
        where=str(part.place),
        cure=cure,
    )
