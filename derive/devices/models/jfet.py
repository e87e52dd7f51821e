"""A JFET in saturation: I_D = I_DSS·(1 - V_GS/V_P)², so that i_d = g_m·v_gs.

Sign of currents: in an n-channel device the current into the drain is positive; the small signal's
g_m·v_gs flows from the drain through the device to the source. A p-channel device has the same
small-signal circuit; its DC voltages and currents have the other sign, and its current counts as
positive where it conducts. No current flows into the gate.

Parameters: `polarity` (n-channel, p-channel). At the operating point: I_D in A, V_ov in V, how far V_GS
is above pinch-off. For the DC circuit: I_DSS in A and V_P in V (its size counts, either sign is
taken), lambda in 1/V. Data sheet: I_DSS, V_P, lambda, f_T in Hz. Small signal: g_m in S, r_o in Ω, C_gs
and C_gd in F. In the formulas V_P stands for its size.

Source: W. Shockley, Proc. IRE 40 (1952), and the square law in place of his exact one, both from memory.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import replace
from fractions import Fraction

from derive.devices.build import Builder
from derive.devices.dc import dc_symbol, mirrored, own_values
from derive.devices.model import DcModel, Model, Names, Region, Witness
from derive.devices.parameters import DeviceParameters, DevicePoint
from derive.devices.point import FROM_POINT, NOT_KNOWN, needs, point_quantities
from derive.devices.routes import Known, Route, Routes, Wanted, work_out
from derive.devices.square_law import (
    drain_current,
    own_voltages,
    saturation,
    terminal_currents,
    unknown_current,
)
from derive.quantities.dimension import (
    CAPACITANCE,
    CONDUCTANCE,
    FREQUENCY,
    RESISTANCE,
    VOLTAGE,
)
from derive.quantities.dimension import CURRENT as AMPERES
from derive.quantities.units import PER_VOLT
from derive.topology.kind import Kind, Parameter
from derive.topology.topology import Part

KIND = "jfet"
CURRENT = "I_D"
POLARITIES = {"n-channel": 1, "p-channel": -1}

SPEC = Kind(
    KIND,
    (("gate", 1), ("drain", 1), ("source", 1)),
    '{ jfet = "small_jfet", gate = "g", drain = "d", source = "s1" }',
    written="true or model",
    parameters=(
        Parameter("I_D", AMPERES),
        Parameter("V_ov", VOLTAGE),
        Parameter("I_DSS", AMPERES),
        Parameter("V_P", VOLTAGE, sign="not zero"),
        Parameter("lambda", PER_VOLT),
        Parameter("f_T", FREQUENCY, cycles=True),
        Parameter("g_m", CONDUCTANCE),
        Parameter("r_o", RESISTANCE),
        Parameter("C_gs", CAPACITANCE),
        Parameter("C_gd", CAPACITANCE),
    ),
    choices=(("polarity", tuple(POLARITIES)),),
    joins_if=(
        (("r_o", "lambda"), ("drain", "source")),
        (("C_gs", "f_T"), ("gate", "source")),
        (("C_gd",), ("gate", "drain")),
    ),
    controls=((("drain", "source"), ("gate", "source")),),
    apart=(("drain", "source"),),
)
ROUTES = Routes(
    SPEC,
    (
        Wanted("g_m", NOT_KNOWN, ("gate", "source")),
        Wanted("r_o", "taken as infinite: lambda not given"),
        Wanted("C_gs", "taken as zero: f_T not given", ("gate", "source"), parasitic=True),
        Wanted("C_gd", "taken as zero: not given", ("gate", "drain"), parasitic=True),
    ),
    (
        Route("g_m", "2*I_D/V_ov"),
        # With a finite slope the current is more than that of V_ov alone: no contradiction then.
        Route("g_m", "2*sqrt(I_D*I_DSS)/V_P", without=("lambda",)),
        Route("g_m", "2*I_DSS*V_ov/V_P^2", without=("lambda",)),
        Route("g_m", "2*sqrt(I_D*I_DSS)/V_P", compares=False),
        Route("g_m", "2*I_DSS*V_ov/V_P^2", compares=False),
        Route("I_D", "g_m*V_ov/2", compares=False),
        Route("I_D", "(g_m*V_P)^2/(4*I_DSS)", compares=False),
        Route("r_o", "1/(lambda*I_D)"),
        Route("C_gs", "g_m/(2*pi*f_T) - C_gd"),
        Route("C_gs", "g_m/(2*pi*f_T)", without=("C_gd",)),
    ),
    of_the_point=("I_D", "V_ov"),
)
WITNESS = Witness(
    'R_1 = { resistor = "100k", between = ["in", "g"] }\n'
    'R_G = { resistor = "1M", between = ["g", "gnd"] }\n'
    'R_D = { resistor = "2k2", between = ["d", "gnd"] }\n'
    'R_S = { resistor = "330R", between = ["x", "gnd"] }\n'
    'J1 = { jfet = true, gate = "g", drain = "d", source = "x", I_D = "2 mA", I_DSS = "8 mA", '
    'V_P = "-4 V", lambda = "0.01 1/V" }',
    'voltage = "d"\nper = "V_s"',
    "-R_G/(R_1 + R_G)*g_m*r_o*R_D/(R_D + r_o + (1 + g_m*r_o)*R_S)",
    "common source with source resistor: A. S. Sedra and K. C. Smith, Microelectronic "
    "Circuits, from memory",
)


def is_settled(part: Part) -> bool:
    """Whether the file itself gives g_m or what it follows from, so that no DC circuit need be solved."""
    given = dict(part.parameters).keys()
    by_law = {"I_DSS", "V_P"} <= given and bool({"I_D", "V_ov"} & given)
    return "g_m" in given or {"I_D", "V_ov"} <= given or by_law


def parameters(
    part: Part, point: DevicePoint | None, thermal_voltage: Fraction, names: Names
) -> DeviceParameters:
    """Give the small-signal parameters: as given, or from I_D with V_ov, or with I_DSS and V_P.

    Raises: InputError where the data disagree, or g_m is not known.
    """
    further = point_quantities(CURRENT, point)
    given = dict(part.parameters)
    pinch_off = given["V_P"].exact if "V_P" in given else None
    if pinch_off is not None:
        # The formulas take the size; given stands, so the part's own value gives way here.
        kept = tuple(item for item in part.parameters if item[0] != "V_P")
        part = replace(part, parameters=kept)
        further["V_P"] = Known(abs(pinch_off))
        if point and point.voltages:
            v_gs, _ = own_voltages(dict(point.voltages), polarity_of(part))
            further["V_ov"] = Known(v_gs + abs(pinch_off), FROM_POINT, from_point=True)
    found = work_out(part, ROUTES, further, thermal_voltage, names)
    return needs(part, found, "g_m", f"{CURRENT} with V_ov", "I_DSS", "V_P")


def linearise(part: Part, names: Names, parameters: DeviceParameters) -> Model:
    """Give g_m, r_o and the two capacitances of the gate."""
    build = Builder(part, parameters)
    gate, drain, source = (build.node(key) for key in ("gate", "drain", "source"))
    build.transconductance("g_m", (drain, source), (gate, source))
    build.resistor("r_o", (drain, source))
    build.capacitor("C_gs", (gate, source))
    build.capacitor("C_gd", (gate, drain))
    return build.model()


def polarity_of(part: Part) -> dict[str, Fraction]:
    """Give the polarity alone, as `dc_values` does."""
    return own_values(part, (), {}, POLARITIES)


def dc_values(part: Part) -> dict[str, Fraction]:
    """Give I_DSS and the size of V_P (where given), lambda (0 where not), and the polarity.

    Raises: InputError for a value that was left open.
    """
    values = own_values(part, ("I_DSS", "V_P", "lambda"), {"lambda": Fraction(0)}, POLARITIES)
    if "V_P" in values:
        values["V_P"] = abs(values["V_P"])
    return values


def dc_elements(part: Part, names: Names) -> DcModel:
    """Give the current I_D from drain to source; its value is for the square law to settle.

    Raises: InputError where I_DSS or V_P is not given.
    """
    values = dc_values(part)
    build = Builder(part, DeviceParameters(part.name, (), ()))
    symbols = [
        dc_symbol(part, "I_DSS", AMPERES, values, names),
        dc_symbol(part, "V_P", VOLTAGE, values, names),
    ]
    if values["lambda"]:
        symbols.append(dc_symbol(part, "lambda", PER_VOLT, values, names))
    path = mirrored((build.node("drain"), build.node("source")), values)
    return unknown_current(names.indexed(part, CURRENT), path, symbols)


def current(v_gs: float, v_ds: float, values: Mapping[str, float]) -> float:
    """Give I_D of the square law, in the device's own polarity."""
    pinch_off = float(values["V_P"])
    factor = 2 * float(values["I_DSS"]) / pinch_off**2
    return drain_current(v_gs, v_ds, factor, -pinch_off, float(values["lambda"]))


def currents(
    voltages: Mapping[str, float], values: Mapping[str, float], thermal_voltage: float
) -> dict[str, float]:
    """Give the current into gate, drain and source."""
    return terminal_currents(voltages, values, current)


def region(voltages: Mapping[str, Fraction], values: Mapping[str, Fraction]) -> Region:
    """Say whether the device is in saturation: V_GS above pinch-off, V_DS not below their difference."""
    v_gs, v_ds = own_voltages(voltages, values)
    return saturation(v_gs, v_ds, -values["V_P"], values["polarity"], "V_P")
