"""Currents of field-effect transistors: square law and linear circuit together.

The linear circuit gives each control voltage as V_GG - R·I_D; with the square law that is a quadratic
equation for the overdrive voltage. Devices that can be solved one after the other are, in closed
form; those that hang on each other are solved together by Newton's method, then refined exactly.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from fractions import Fraction

from derive.algebra.ring import used_names
from derive.bias.dc_circuit import DcCircuit
from derive.bias.dc_device import DcDevice
from derive.bias.operating_point import CurrentDerivation
from derive.bias.replay import broken_steps
from derive.bias.response import Response, voltage_of
from derive.bias.square_numeric import NoPointError, solve_together
from derive.bias.square_steps import closed_form, overdrive_name
from derive.eliminate.derivation import Derivation
from derive.errors import InputError
from derive.quantities.rounding import square_root


@dataclass(frozen=True, slots=True)
class SquareCurrents:
    """The currents by their symbols, how each was derived, and whether all are in closed form."""

    values: dict[str, Fraction]
    derivations: tuple[CurrentDerivation, ...]
    is_closed: bool


@dataclass(frozen=True, slots=True)
class Loop:
    """A device's control voltage in the linear circuit: `voltage` less `drops` times the currents.

    `drops` holds (current's symbol, resistance) for the currents that occur.
    """

    response: Response
    derivation: Derivation | None
    voltage: Fraction
    drops: tuple[tuple[str, Fraction], ...]

    @property
    def device(self) -> DcDevice:
        """The device."""
        return self.response.device

    @property
    def symbol(self) -> str:
        """The symbol of the device's own current."""
        return self.device.dc.drives[0].name

    def drop(self, symbol: str) -> Fraction:
        """Give the resistance through which a current lowers the control voltage."""
        return dict(self.drops).get(symbol, Fraction(0))


def square_currents(dc: DcCircuit) -> SquareCurrents:
    """Give the drain currents of all devices that the square law settles.

    Raises: InputError where there is no operating point in saturation.
    """
    loops = [_loop(dc, device) for device in dc.devices if device.is_square]
    found: dict[str, Fraction] = {}
    derivations: dict[str, CurrentDerivation] = {}
    left = list(loops)
    while ready := next((x for x in left if {s for s, _ in x.drops} <= {x.symbol, *found}), None):
        left.remove(ready)
        found[ready.symbol] = _alone(ready, found)
        derivations[ready.symbol] = _closed_derivation(dc, ready, found)
    if left:
        found |= _together(left, found)
        derivations |= {x.symbol: _numeric_derivation(x, left) for x in left}
    ordered = tuple(derivations[loop.symbol] for loop in loops)
    return SquareCurrents(found, ordered, not left)


def law_factor(device: DcDevice) -> Fraction:
    """Give k/2, the factor of the square law; that of a JFET is I_DSS/V_P²."""
    values = device.values
    return values["k"] / 2 if "k" in values else values["I_DSS"] / values["V_P"] ** 2


def threshold(device: DcDevice) -> Fraction:
    """Give the control voltage at which the device begins to conduct, in its own polarity."""
    return device.values["V_t"] if "V_t" in device.values else -device.values["V_P"]


def _loop(dc: DcCircuit, device: DcDevice) -> Loop:
    gate, source = device.node("gate"), device.node("source")
    name = dc.names.indexed(device.part, "V_GS" if device.sign > 0 else "V_SG")
    nodes = (gate, source) if device.sign > 0 else (source, gate)
    response = voltage_of(dc, device, name, nodes)
    nothing = dict.fromkeys(dc.sought, Fraction(0))
    voltage = response.value(nothing)
    drops = {s: voltage - response.value({**nothing, s: Fraction(1)}) for s in dc.sought}
    derivation = response.derivation()
    occurring = _occurring(dc, derivation, drops)
    return Loop(response, derivation, voltage, tuple((s, drops[s]) for s in occurring))


def _occurring(
    dc: DcCircuit, derivation: Derivation | None, drops: dict[str, Fraction]
) -> tuple[str, ...]:
    if derivation is None:
        return tuple(symbol for symbol, drop in drops.items() if drop)
    ring = derivation.system.ring
    return tuple(s for s in dc.sought if s in used_names(ring, [derivation.numerator]))


def _alone(loop: Loop, found: dict[str, Fraction]) -> Fraction:
    """Solve V_ov + (k/2)·R·V_ov² = V_GG - threshold for the root in saturation; give the current."""
    others = sum((r * found[s] for s, r in loop.drops if s != loop.symbol), Fraction(0))
    beyond = loop.voltage - others - threshold(loop.device)
    factor, drop = law_factor(loop.device), loop.drop(loop.symbol)
    if drop >= 0 and beyond <= 0:
        raise no_point(loop, "its control voltage does not reach its threshold, so that it is off")
    if drop == 0:
        overdrive = beyond
    else:
        under_root = 1 + 4 * factor * drop * beyond
        if under_root < 0:
            raise no_point(loop, "the square law and the circuit have no voltage in common")
        overdrive = (square_root(under_root) - 1) / (2 * factor * drop)
    if overdrive <= 0:
        raise no_point(loop, "its control voltage does not reach its threshold, so that it is off")
    return factor * overdrive**2


def _together(left: list[Loop], found: dict[str, Fraction]) -> dict[str, Fraction]:
    symbols = [loop.symbol for loop in left]
    beyond = []
    for loop in left:
        others = sum((r * found[s] for s, r in loop.drops if s in found), Fraction(0))
        beyond.append(loop.voltage - others - threshold(loop.device))
    drops = [[loop.drop(symbol) for symbol in symbols] for loop in left]
    factors = [law_factor(loop.device) for loop in left]
    try:
        overdrives = solve_together(beyond, drops, factors)
    except NoPointError as error:
        raise no_point(left[0], str(error)) from error
    return {
        symbol: factor * overdrive**2
        for symbol, factor, overdrive in zip(symbols, factors, overdrives, strict=True)
    }


def _closed_derivation(dc: DcCircuit, loop: Loop, found: dict[str, Fraction]) -> CurrentDerivation:
    part = loop.device.part.name
    if loop.derivation is None:
        says = "the terms are too many to write down: solved at the nominal values, in closed form"
        return CurrentDerivation(part, loop.symbol, (), None, says)
    derivation = closed_form(dc, loop.device, loop.derivation)
    last = derivation.steps[-1].equation
    says = "square law in closed form; of two roots the one at which the device conducts"
    shown = CurrentDerivation(part, loop.symbol, derivation.steps, last, says, derivation)
    values = loop.response.shown_values({**dict.fromkeys(dc.sought, Fraction(0)), **found})
    values |= {s.name: s.value for s in loop.device.dc.symbols if s.value is not None}
    overdrive = loop.response.value({**dict.fromkeys(dc.sought, Fraction(0)), **found})
    values[overdrive_name(derivation)] = overdrive - threshold(loop.device)
    return replace(shown, broken=broken_steps(shown, values))


def _numeric_derivation(loop: Loop, left: list[Loop]) -> CurrentDerivation:
    names = ", ".join(other.device.part.name for other in left)
    says = (
        f"the square laws of {names} hang on each other: solved together by Newton's method at the "
        "nominal values, to 40 significant digits"
    )
    return CurrentDerivation(loop.device.part.name, loop.symbol, (), None, says)


def no_point(loop: Loop, why: str) -> InputError:
    """Give the error for a device that has no operating point in saturation."""
    part = loop.device.part
    return InputError(
        f"part {part.name}: the operating point does not exist: {why}",
        where=str(part.place),
        cure="look at its polarity, its threshold and the voltage of its gate",
    )
