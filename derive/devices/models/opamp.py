"""An op amp with one pole: A(s) = A_0/(1 + s·A_0/w_u), with input and output resistance.

Sign: V_output = A(s)·(V_plus - V_minus), against ground. What is not given is left out: without A_0 an
integrator w_u/s, without w_u a gain A_0 at every frequency, without both an ideal op amp (its inputs at
equal voltage); without R_in no input current, without R_out a stiff output.

Parameters: A_0; f_unity in Hz or w_unity in rad/s; R_in and R_out in Ω.

Source: the one-pole model is common practice; w_u = 2π·f_unity is the angular frequency at which the
integrator's gain is one.
"""

from __future__ import annotations

from fractions import Fraction

from derive.devices.build import line_symbol
from derive.devices.elements import Element, OnePoleGain, Resistor, VirtualShort
from derive.devices.model import Model, Names, Witness
from derive.devices.parameters import DeviceParameters, DevicePoint, LeftOut, ParameterLine
from derive.expressions.parse import parse_expression
from derive.expressions.tree import Equation, Name
from derive.expressions.walk import substitute
from derive.quantities.dimension import FREQUENCY, RATIO, RESISTANCE
from derive.quantities.rounding import TWO_PI
from derive.quantities.symbol import Value
from derive.topology.kind import Kind, Parameter
from derive.topology.topology import Part

KIND = "opamp"
SPEC = Kind(
    KIND,
    (("output", 1), ("inputs", 2)),
    '{ opamp = true, output = "out", inputs = ["plus", "minus"], f_unity = "10 MHz" }',
    written="true or model",
    parameters=(
        Parameter("A_0", RATIO),
        Parameter("f_unity", FREQUENCY, cycles=True),
        Parameter("w_unity", FREQUENCY, cycles=False),
        Parameter("R_in", RESISTANCE),
        Parameter("R_out", RESISTANCE),
    ),
    alternatives=(("f_unity", "w_unity"),),
    joins_if=((("R_in",), ("inputs", "inputs")),),
)
_LEFT_OUT = {
    "A_0": "taken as infinite: not given",
    "w_u": "taken as infinite: neither f_unity nor w_unity is given",
    "R_in": "taken as infinite: not given",
    "R_out": "taken as zero: not given",
}
WITNESS = Witness(
    'R_1 = { resistor = "1k", between = ["in", "n"] }\n'
    'R_2 = { resistor = "10k", between = ["n", "out"] }\n'
    'U1 = { opamp = true, output = "out", inputs = ["gnd", "n"], A_0 = "1e5", f_unity = "1 MHz" }',
    'voltage = "out"\nper = "V_s"',
    "-R_2/R_1/(1 + (1 + R_2/R_1)*(1/A_0 + s/w_u))",
    "inverting amplifier with one pole: common practice",
)


def parameters(
    part: Part, point: DevicePoint | None, thermal_voltage: Fraction, names: Names
) -> DeviceParameters:
    """Give what is given of A_0, w_u, R_in and R_out; w_u may follow from f_unity."""
    given = dict(part.parameters)
    lines, left_out = [], []
    for key, why in _LEFT_OUT.items():
        symbol = names.indexed(part, key)
        if key == "w_u" and "f_unity" in given:
            lines.append(_unity(part, symbol, given["f_unity"], names))
            continue
        value = given.get("w_unity" if key == "w_u" else key)
        if value is None:
            left_out.append(LeftOut(symbol, why))
            continue
        dimension = {"A_0": RATIO, "w_u": FREQUENCY}.get(key, RESISTANCE)
        line = ParameterLine(
            key,
            symbol,
            dimension,
            value.exact,
            "given",
            "left open" if value.exact is None else "given",
            text=value.text,
        )
        lines.append(line)
    return DeviceParameters(part.name, tuple(lines), tuple(left_out))


def linearise(part: Part, names: Names, parameters: DeviceParameters) -> Model:
    """Give the gain stage, and the resistors at its input and output where they are given."""
    plus, minus = part.nodes("inputs")
    (output,) = part.nodes("output")
    dc_gain, unity, r_in, r_out = map(parameters.symbol, _LEFT_OUT)
    # The output as it is without a load: what stands before R_out.
    inner = output if r_out is None else names.inner_node(part, "open")
    elements: list[Element] = []
    if dc_gain is None and unity is None:
        elements.append(VirtualShort(part.name, part.name, inner, (plus, minus)))
    else:
        elements.append(OnePoleGain(part.name, part.name, inner, (plus, minus), dc_gain, unity))
    if r_in is not None:
        elements.append(Resistor(f"{part.name}.R_in", part.name, (plus, minus), r_in))
    if r_out is not None:
        elements.append(Resistor(f"{part.name}.R_out", part.name, (inner, output), r_out))
    return Model(tuple(elements), tuple(line_symbol(part, line) for line in parameters.lines))


def _unity(part: Part, symbol: str, value: Value, names: Names) -> ParameterLine:
    exact = None if value.exact is None else value.exact * TWO_PI
    f_unity = Name(names.indexed(part, "f_unity"))
    equation = Equation(Name(symbol), substitute(parse_expression("2*pi*f_unity"), {"f_unity": f_unity}))
    words = f"from f_unity = {value.text}"
    return ParameterLine(
        "w_u", symbol, FREQUENCY, exact, "data sheet", words, equation, "", f"2π · {value.text}"
    )
