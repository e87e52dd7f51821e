"""The equations that elements bring besides the current laws."""

from __future__ import annotations

from derive.devices.elements import (
    Coupling,
    CurrentGain,
    Element,
    Inductor,
    OnePoleGain,
    Transresistance,
    VirtualShort,
    VoltageDrive,
    VoltageGain,
)
from derive.expressions.polynomials import add, divide, multiply
from derive.expressions.tree import ONE, Equation, Name, Sum
from derive.nodal.branches import Branches
from derive.nodal.linear_form import LinearForm, combine
from derive.nodal.system import NodalEquation
from derive.topology.topology import GROUND


def law_of(element: Element | VoltageDrive, branches: Branches) -> NodalEquation | None:
    """Write the element's own equation; None where the current laws already hold all of it."""
    if isinstance(element, Inductor):
        return _inductor(element, branches)
    if isinstance(element, VoltageGain):
        sensed = branches.voltages.between(*element.senses)
        return _controlled_voltage(element, element.gain, sensed, branches)
    if isinstance(element, Transresistance):
        sensed = branches.through(element.senses)
        return _controlled_voltage(element, element.transresistance, sensed, branches)
    if isinstance(element, VirtualShort):
        plus, minus = (branches.voltages.at(node) for node in element.inputs)
        return _equal(f"op amp {element.part}: its inputs are at equal voltage", plus, minus)
    if isinstance(element, OnePoleGain):
        return _one_pole(element, branches)
    if isinstance(element, CurrentGain) and element.name in branches.unknown:
        law = branches.controlled(element)
        return _equal(f"current of {element.part}", branches.through(element.name), law)
    return None


def _equal(meaning: str, left: LinearForm, right: LinearForm) -> NodalEquation:
    row = combine([left.row, right.negated().row])
    return NodalEquation(meaning, (), (), Equation(left.shown, right.shown), row)


def _controlled_voltage(
    element: VoltageGain | Transresistance, symbol: str, sensed: LinearForm, branches: Branches
) -> NodalEquation:
    output = branches.voltages.between(*element.output)
    law = sensed.times((Name(symbol),), branches.ring.generator(symbol))
    what = "voltage" if isinstance(element, VoltageGain) else f"current of {element.senses}"
    return _equal(f"output of {element.part}: {element.part} times the {what} it senses", output, law)


def _inductor(element: Inductor, branches: Branches) -> NodalEquation:
    ring = branches.ring
    s = ring.generator("s")
    total = branches.through(element.name).times(
        (Name("s"), Name(element.inductance)), s * ring.generator(element.inductance)
    )
    shown, rows = [total.shown], [total.row]
    for other in branches.elements.values():
        if isinstance(other, Coupling) and element.name in other.coils:
            partner = other.coils[other.coils[0] == element.name]
            term = branches.through(partner).times(
                (Name("s"), Name(other.mutual)), s * ring.generator(other.mutual)
            )
            shown.append(term.shown)
            rows.append(term.row)
    right = LinearForm(add(shown), combine(rows))
    left = branches.voltages.between(*element.between)
    coupled = " and the coils coupled to it" if len(shown) > 1 else ""
    return _equal(f"voltage across {element.part}{coupled}", left, right)


def _one_pole(element: OnePoleGain, branches: Branches) -> NodalEquation:
    """Write A(s) = A_0/(1 + s·A_0/w_u), A_0 or w_u/s with the denominator on the output's side."""
    ring = branches.ring
    s = ring.generator("s")
    output = branches.voltages.between(element.output, GROUND)
    sensed = branches.voltages.between(*element.inputs)
    if element.dc_gain is None and element.unity is not None:
        left = output.times((divide(Name("s"), Name(element.unity)),), s * ring.generator(element.unity))
        meaning = f"output of op amp {element.part}: an integrator with a gain of one at {element.unity}"
        return _equal(meaning, left, sensed)
    if element.dc_gain is None:
        raise ValueError(f"op amp {element.part} has no gain")
    gain = ring.generator(element.dc_gain)
    right = sensed.times((Name(element.dc_gain),), gain)
    if element.unity is None:
        return _equal(f"output of op amp {element.part}: its gain is {element.dc_gain}", output, right)
    lag = divide(multiply([Name("s"), Name(element.dc_gain)]), Name(element.unity))
    entry = ring.one + s * gain * ring.generator(element.unity)
    left = output.times((Sum((ONE, lag)),), entry)
    pole = f"{element.dc_gain} at low frequency, one pole, a gain of one about {element.unity}"
    return _equal(f"output of op amp {element.part}: {pole}", left, right)
