"""The closed form of one square law, as steps that can be replayed."""

from __future__ import annotations

from dataclasses import replace
from fractions import Fraction

from derive.algebra.ratio import coefficients, lowest_terms
from derive.algebra.ring import Polynomial
from derive.bias.dc_circuit import DcCircuit
from derive.bias.dc_device import DcDevice
from derive.bias.steps import (
    CURRENT,
    FACTOR,
    OPEN,
    OVERDRIVE,
    QUADRATIC,
    RESISTANCE,
    ROOT,
    SQUARE_LAW,
    VOLTAGE,
    WITH_NAMES,
    Steps,
)
from derive.eliminate.derivation import Derivation
from derive.eliminate.scribe import writer_for
from derive.expressions.polynomials import add, divide, multiply, negate
from derive.expressions.tree import (
    ONE,
    ZERO,
    Equation,
    Expression,
    Name,
    Negative,
    Number,
    Power,
    Root,
)
from derive.nodal.voltages import fresh

TWO = Number(Fraction(2))


def closed_form(dc: DcCircuit, device: DcDevice, derivation: Derivation) -> Derivation:
    """Give the derivation that goes from a control voltage in the circuit to the device's current.

    V_ov = V_GS - threshold; I_D = (k/2)·V_ov²; V_GS = V_GG - R·I_D. The sum gives
    (k/2)·R·V_ov² + V_ov = V_GG - threshold, and so V_ov = (√(1 + 2k·R·(V_GG - threshold)) - 1)/(k·R).
    """
    current, gain, threshold = device.dc.symbols[:3]
    system = derivation.system
    control = system.find.name
    taken = {*system.ring.names, *dc.names.taken, control, gain.name, threshold.name}
    taken |= {unknown.name for unknown in system.unknowns}
    overdrive = fresh(taken, dc.names.indexed(device.part, "V_ov"))
    v_ov, i_d = Name(overdrive), Name(current.name)
    start: Expression = Name(threshold.name)
    steps = Steps()
    k: Expression = Name(gain.name)
    if "k" not in device.values:
        value = divide(multiply([TWO, Name(gain.name)]), Power(start, 2))
        name = fresh(taken, dc.names.indexed(device.part, "k"))
        steps.define(FACTOR, name, value)
        start, k = Negative(start), Name(name)
    half_k = divide(k, TWO)
    split = steps.define(OVERDRIVE, control, add([start, v_ov]))
    law = steps.define(SQUARE_LAW, current.name, multiply([half_k, Power(v_ov, 2)]))
    found = steps.append(derivation)
    open_voltage, drop = _affine(derivation, current.name)
    open_voltage = _named(steps, VOLTAGE, "V_GG", open_voltage, dc, device, taken)
    drop = _named(steps, RESISTANCE, "R_th", drop, dc, device, taken)
    line = Equation(Name(control), add([open_voltage, negate(multiply([drop, i_d]))]))
    if steps.steps[found - 1].equation != line:
        found = steps.follow(WITH_NAMES, line, [(found, ONE)])
    beyond = add([open_voltage, negate(start)])
    square = multiply([half_k, drop, Power(v_ov, 2)])
    minus_one = Negative(ONE)
    uses: list[tuple[int, Expression]]
    if drop == ZERO:
        root: Expression = beyond
        uses = [(found, ONE), (split, minus_one)]
        solved = steps.follow(OPEN, Equation(v_ov, root), uses, subject=overdrive)
    else:
        uses = [(found, ONE), (split, minus_one), (law, negate(drop))]
        quadratic = steps.follow(QUADRATIC, Equation(add([square, v_ov]), beyond), uses)
        k_r = multiply([k, drop])
        radical = Root(add([ONE, multiply([TWO, k_r, beyond])]))
        root = divide(add([radical, minus_one]), k_r)
        divisor = multiply([k_r, add([multiply([k_r, v_ov]), ONE, radical])])
        uses = [(quadratic, multiply([TWO, k_r]))]
        solved = steps.follow(ROOT, Equation(v_ov, root), uses, divisor, overdrive)
    final = Equation(i_d, multiply([half_k, Power(root, 2)]))
    steps.follow(CURRENT, final, [(law, ONE), (solved, multiply([half_k, add([v_ov, root])]))])
    symbols = tuple(dict.fromkeys([*system.small_signal.symbols, *device.dc.symbols]))
    whole = replace(system, small_signal=replace(system.small_signal, symbols=symbols))
    return steps.into(replace(derivation, system=whole))


def overdrive_name(derivation: Derivation) -> str:
    """Give the name that a closed form uses for the overdrive voltage."""
    return next(step.subject or "" for step in derivation.steps if step.rule in (OPEN, ROOT))


def _affine(derivation: Derivation, current: str) -> tuple[Expression, Expression]:
    """Split the control voltage into what it is without the current, and the resistance."""
    ring = derivation.system.ring
    parts = coefficients(ring.plain(), derivation.numerator, current)
    writer = writer_for(derivation.system)

    def ratio(numerator: Polynomial) -> Expression:
        top, bottom = lowest_terms(ring.plain(), numerator, derivation.denominator)
        return writer.ratio(top, bottom)

    return ratio(parts.get(0, ring.zero)), negate(ratio(parts.get(1, ring.zero)))


def _named(
    steps: Steps,
    rule: str,
    name: str,
    value: Expression,
    dc: DcCircuit,
    device: DcDevice,
    taken: set[str],
) -> Expression:
    """Define a name for an expression that is more than a name or nothing."""
    bare = value.operand if isinstance(value, Negative) else value
    if isinstance(bare, Name) or value == ZERO:
        return value
    chosen = fresh(taken, dc.names.indexed(device.part, name))
    steps.define(rule, chosen, value)
    return Name(chosen)
