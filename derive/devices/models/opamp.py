"""An op amp with one pole: A(s) = A_0/(1 + s·A_0/w_u), with input and output resistance.

What is not given is left out: without A_0 an integrator w_u/s, without w_u a gain A_0 at every
frequency, without both an ideal op amp; without R_in no input current, without R_out a stiff output.

Source: the one-pole model is common practice; w_u = 2π·f_unity is the angular frequency at which the
integrator's gain is one.
"""

from __future__ import annotations

from fractions import Fraction

from derive.devices.elements import Element, OnePoleGain, Resistor, VirtualShort
from derive.devices.model import Model, Names, parameter_symbol
from derive.quantities.dimension import FREQUENCY, RATIO, RESISTANCE
from derive.quantities.symbol import Symbol, Value
from derive.topology.topology import Part

KIND = "opamp"

# 2π to 40 digits (OEIS A019692): rounding it is the one thing between f_unity and an exact w_u.
TWO_PI = Fraction("6.283185307179586476925286766559005768394")


def linearise(part: Part, names: Names) -> Model:
    """Give the gain stage, and the resistors at its input and output where they are given."""
    given = dict(part.parameters)
    plus, minus = part.nodes("inputs")
    (output,) = part.nodes("output")
    symbols: list[Symbol] = []
    elements: list[Element] = []

    def symbol(key: str, value: Value | None) -> str | None:
        if value is None:
            return None
        name = names.indexed(part, key)
        dimension = {"A_0": RATIO, "w_u": FREQUENCY}.get(key, RESISTANCE)
        symbols.append(parameter_symbol(part, name, value, dimension))
        return name

    dc_gain = symbol("A_0", given.get("A_0"))
    unity = symbol("w_u", _unity(given))
    r_in = symbol("R_in", given.get("R_in"))
    r_out = symbol("R_out", given.get("R_out"))
    # The output as it is without a load: what stands before R_out.
    inner = output if r_out is None else names.inner_node(part, "open")
    if dc_gain is None and unity is None:
        elements.append(VirtualShort(part.name, part.name, inner, (plus, minus)))
    else:
        elements.append(OnePoleGain(part.name, part.name, inner, (plus, minus), dc_gain, unity))
    if r_in is not None:
        elements.append(Resistor(f"{part.name}.R_in", part.name, (plus, minus), r_in))
    if r_out is not None:
        elements.append(Resistor(f"{part.name}.R_out", part.name, (inner, output), r_out))
    return Model(tuple(elements), tuple(symbols))


def _unity(given: dict[str, Value]) -> Value | None:
    if "w_unity" in given:
        return given["w_unity"]
    if "f_unity" not in given:
        return None
    value = given["f_unity"]
    exact = None if value.exact is None else value.exact * TWO_PI
    return Value(exact, f"2π · {value.text}")
