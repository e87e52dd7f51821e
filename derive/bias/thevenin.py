"""The usual divider at a base: its open-circuit voltage, its resistance, and I_C written with them."""

from __future__ import annotations

from dataclasses import dataclass

from derive.algebra.modular import PRIME, residues
from derive.bias.dc_circuit import DcCircuit
from derive.bias.dc_device import DcDevice
from derive.bias.paths import Join, reached
from derive.bias.steps import RESISTANCE, VOLTAGE, WITH_NAMES, Steps
from derive.devices.elements import Resistor, VoltageDrive
from derive.eliminate.derivation import Derivation
from derive.expressions.polynomials import add, divide, multiply, negate
from derive.expressions.tree import ONE, ZERO, Equation, Expression, Name, Parallel
from derive.expressions.walk import evaluate_modulo, names_of, substitute
from derive.nodal.voltages import fresh
from derive.topology.topology import GROUND


@dataclass(frozen=True, slots=True)
class Divider:
    """Two resistors from a base to two rails, and at most one from the emitter to a rail."""

    voltage: Expression
    resistance: Expression
    emitter_rail: Expression
    emitter_resistor: Expression


def divider_of(dc: DcCircuit, device: DcDevice) -> Divider | None:
    """Give the divider at a transistor's base where the circuit has that shape; None where not."""
    if device.model.KIND != "bipolar" or not (device.dc.elements and device.dc.drives):
        return None
    rails = _rails(dc)
    at_base = _resistors_only(dc, device, device.node("base"))
    if at_base is None or len(at_base) != 2 or not all(far in rails for _, far in at_base):
        return None
    if rails[at_base[0][1]] == ZERO:
        at_base = at_base[::-1]
    (upper, above), (lower, below) = at_base
    first, second = Name(upper.resistance), Name(lower.resistance)
    if rails[above] == rails[below]:
        return None
    total = add([first, second])
    shares = [multiply([rails[above], second]), multiply([rails[below], first])]
    voltage = divide(add(shares), total)
    resistance = Parallel((first, second))
    emitter = device.node("emitter")
    if emitter in rails:
        return Divider(voltage, resistance, rails[emitter], ZERO)
    at_emitter = _resistors_only(dc, device, emitter)
    if at_emitter is None or len(at_emitter) != 1 or at_emitter[0][1] not in rails:
        return None
    return Divider(voltage, resistance, rails[at_emitter[0][1]], Name(at_emitter[0][0].resistance))


def with_divider(dc: DcCircuit, device: DcDevice, derivation: Derivation) -> Derivation | None:
    """Give the derivation with the usual formula at its end; None where it has not that shape.

    The formula is added only if it equals the nodal result for all values of the parts.
    """
    divider = divider_of(dc, device)
    if divider is None:
        return None
    taken = {*derivation.system.ring.names, *dc.names.taken, derivation.system.find.name}
    taken |= {unknown.name for unknown in derivation.system.unknowns}
    v_bb = fresh(taken, dc.names.indexed(device.part, "V_BB"))
    # R_B is what many call their base divider in the file; V_BB's partner is then R_BB.
    wanted = [dc.names.indexed(device.part, name) for name in ("R_B", "R_BB")]
    r_b = fresh(taken, next((name for name in wanted if name not in taken), wanted[-1]))
    v_be, beta = (Name(symbol.name) for symbol in device.dc.symbols[:2])
    across = [Name(v_bb), negate(divider.emitter_rail)]
    if device.sign < 0:
        across = [divider.emitter_rail, negate(Name(v_bb))]
    above = multiply([beta, add([*across, negate(v_be)])])
    below = add([Name(r_b), multiply([add([beta, ONE]), divider.emitter_resistor])])
    formula = divide(above, below)
    last = derivation.steps[-1].equation
    written_out = substitute(formula, {v_bb: divider.voltage, r_b: divider.resistance})
    if not _same(last.right, written_out):
        return None
    steps = Steps()
    number = steps.append(derivation)
    steps.define(VOLTAGE, v_bb, divider.voltage)
    steps.define(RESISTANCE, r_b, divider.resistance)
    steps.follow(WITH_NAMES, Equation(last.left, formula), [(number, ONE)])
    return steps.into(derivation)


def _rails(dc: DcCircuit) -> dict[str, Expression]:
    """Give the voltage of every node that is ground or a supply, shorts included."""
    drives = [d for d in dc.circuit.drives if isinstance(d, VoltageDrive)]
    shorts = [Join(d.name, d.nodes) for d in drives if d.name not in dc.active]
    rails: dict[str, Expression] = dict.fromkeys(reached(GROUND, shorts), ZERO)
    for supply in dc.topology.supplies:
        rails |= dict.fromkeys(reached(supply.node, shorts), Name(supply.name))
    return rails


def _resistors_only(dc: DcCircuit, device: DcDevice, node: str) -> list[tuple[Resistor, str]] | None:
    """Give the resistors at a node with their far ends; None where anything but the device meets it."""
    others = [j for j in dc.joins if node in j.ends and j.item != device.part.name]
    found = [
        (element, element.between[element.between[0] == node])
        for element in dc.circuit.elements
        if isinstance(element, Resistor) and node in element.between
    ]
    own = [j for j in dc.joins if node in j.ends and j.item == device.part.name]
    control = device.node("base") == node
    if len(others) != len(found) or len(own) != (1 if control else 2):
        return None
    return found


def _same(one: Expression, other: Expression) -> bool:
    """Whether two expressions are equal for all values (but for a chance of about 1e-17)."""
    names = sorted({*names_of(one), *names_of(other)})
    values = dict(zip(names, residues(len(names), "divider"), strict=True))
    return evaluate_modulo(one, values, PRIME) == evaluate_modulo(other, values, PRIME)
