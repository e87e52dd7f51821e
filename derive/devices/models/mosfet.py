"""A MOSFET in saturation: I_D = (k/2)·(V_GS - V_t)², so that i_d = g_m·v_gs + g_mb·v_bs.

Sign of currents: in an n-channel device the current into the drain is positive; the small signal's
g_m·v_gs flows from the drain through the device to the source. A p-channel device has the same
small-signal circuit; its DC voltages and currents have the other sign, and its current counts as
positive where it conducts. A bulk that is not written is at ground.

Parameters: `polarity` (n-channel, p-channel). At the operating point: I_D in A, V_ov = V_GS - V_t in V.
For the DC circuit: k = μ·C_ox·W/L in A/V² (k_n or k_p of the textbooks), V_t in V (as a p-channel
device's its size counts, either sign is taken) and lambda in 1/V; V_t does not follow the bulk. Data
sheet: lambda, f_T in Hz. Small signal: g_m and g_mb in S, r_o in Ω, C_gs, C_gd, C_db, C_sb in F.

Source: C.-T. Sah, IEEE Trans. Electron Devices 11 (1964), from memory.
"""

from __future__ import annotations

from collections.abc import Mapping
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
from derive.quantities.units import PER_VOLT, TRANSCONDUCTANCE_FACTOR
from derive.topology.kind import Kind, Parameter
from derive.topology.topology import Part

KIND = "mosfet"
CURRENT = "I_D"
POLARITIES = {"n-channel": 1, "p-channel": -1}

SPEC = Kind(
    KIND,
    (("gate", 1), ("drain", 1), ("source", 1)),
    '{ mosfet = "small_nmos", gate = "g", drain = "d", source = "s1" }',
    written="true or model",
    optional_wires=(("bulk", 1),),
    parameters=(
        Parameter("I_D", AMPERES),
        Parameter("V_ov", VOLTAGE),
        Parameter("k", TRANSCONDUCTANCE_FACTOR),
        Parameter("V_t", VOLTAGE, sign="any"),
        Parameter("lambda", PER_VOLT),
        Parameter("f_T", FREQUENCY, cycles=True),
        Parameter("g_m", CONDUCTANCE),
        Parameter("g_mb", CONDUCTANCE),
        Parameter("r_o", RESISTANCE),
        Parameter("C_gs", CAPACITANCE),
        Parameter("C_gd", CAPACITANCE),
        Parameter("C_db", CAPACITANCE),
        Parameter("C_sb", CAPACITANCE),
    ),
    choices=(("polarity", tuple(POLARITIES)),),
    joins_if=(
        (("r_o", "lambda"), ("drain", "source")),
        (("C_gs", "f_T"), ("gate", "source")),
        (("C_gd",), ("gate", "drain")),
        (("C_db",), ("drain", "bulk")),
        (("C_sb",), ("source", "bulk")),
    ),
    controls=(
        (("drain", "source"), ("gate", "source")),
        (("drain", "source"), ("bulk", "source")),
    ),
    apart=(("drain", "source"),),
)
ROUTES = Routes(
    SPEC,
    (
        Wanted("g_m", NOT_KNOWN, ("gate", "source")),
        Wanted("g_mb", "taken as zero: not given", ("bulk", "source")),
        Wanted("r_o", "taken as infinite: lambda not given"),
        Wanted("C_gs", "taken as zero: f_T not given", ("gate", "source"), parasitic=True),
        Wanted("C_gd", "taken as zero: not given", ("gate", "drain"), parasitic=True),
        Wanted("C_db", "taken as zero: not given", ("drain", "bulk"), parasitic=True),
        Wanted("C_sb", "taken as zero: not given", ("source", "bulk"), parasitic=True),
    ),
    (
        Route("g_m", "2*I_D/V_ov"),
        # With a finite slope the current is more than that of V_ov alone: no contradiction then.
        Route("g_m", "k*V_ov", without=("lambda",)),
        Route("g_m", "sqrt(2*k*I_D)", without=("lambda",)),
        Route("g_m", "k*V_ov", compares=False),
        Route("g_m", "sqrt(2*k*I_D)", compares=False),
        Route("I_D", "g_m*V_ov/2", compares=False),
        Route("I_D", "g_m^2/(2*k)", compares=False),
        Route("r_o", "1/(lambda*I_D)"),
        Route("C_gs", "g_m/(2*pi*f_T) - C_gd"),
        Route("C_gs", "g_m/(2*pi*f_T)", without=("C_gd",)),
    ),
    of_the_point=("I_D", "V_ov"),
)
WITNESS = Witness(
    'R_G = { resistor = "1M", between = ["in", "g"] }\n'
    'R_2 = { resistor = "1M", between = ["g", "gnd"] }\n'
    'R_D = { resistor = "5k", between = ["d", "gnd"] }\n'
    'R_S = { resistor = "1k", between = ["x", "gnd"] }\n'
    'M1 = { mosfet = true, gate = "g", drain = "d", source = "x", I_D = "0.5 mA", V_ov = "0.25 V", '
    'lambda = "0.02 1/V", g_mb = "0.8 mS" }',
    'voltage = "d"\nper = "V_s"',
    "-R_2/(R_G + R_2)*g_m*r_o*R_D/(R_D + R_S + r_o + (g_m + g_mb)*r_o*R_S)",
    "common source with source resistor and body effect: P. R. Gray and R. G. Meyer, Analysis and Design "
    "of Analog Integrated Circuits, chapter 3, from memory",
)


def is_settled(part: Part) -> bool:
    """Whether the file itself gives g_m or what it follows from, so that no DC circuit need be solved."""
    given = dict(part.parameters).keys()
    return "g_m" in given or len({"I_D", "V_ov", "k"} & given) >= 2


def parameters(
    part: Part, point: DevicePoint | None, thermal_voltage: Fraction, names: Names
) -> DeviceParameters:
    """Give the small-signal parameters: as given, or from I_D and V_ov.

    Raises: InputError where the data disagree, or g_m is not known.
    """
    further = point_quantities(CURRENT, point)
    if point and point.voltages and "V_t" in dict(part.parameters):
        v_gs, _ = own_voltages(dict(point.voltages), dc_values(part))
        further["V_ov"] = Known(v_gs - dc_values(part)["V_t"], FROM_POINT, from_point=True)
    found = work_out(part, ROUTES, further, thermal_voltage, names)
    return needs(part, found, "g_m", f"{CURRENT} with V_ov", "k", "V_t")


def linearise(part: Part, names: Names, parameters: DeviceParameters) -> Model:
    """Give g_m, g_mb, r_o and the capacitances between the four terminals."""
    build = Builder(part, parameters)
    gate, drain, source, bulk = (build.node(key) for key in ("gate", "drain", "source", "bulk"))
    build.transconductance("g_m", (drain, source), (gate, source))
    build.transconductance("g_mb", (drain, source), (bulk, source))
    build.resistor("r_o", (drain, source))
    build.capacitor("C_gs", (gate, source))
    build.capacitor("C_gd", (gate, drain))
    build.capacitor("C_db", (drain, bulk))
    build.capacitor("C_sb", (source, bulk))
    return build.model()


def dc_values(part: Part) -> dict[str, Fraction]:
    """Give k and V_t (where given) and lambda (0 where not) as an n-channel device's, and the polarity.

    Raises: InputError for a value that was left open.
    """
    values = own_values(part, ("k", "V_t", "lambda"), {"lambda": Fraction(0)}, POLARITIES)
    if values["polarity"] < 0 and "V_t" in values:
        values["V_t"] = abs(values["V_t"])
    return values


def dc_elements(part: Part, names: Names) -> DcModel:
    """Give the current I_D from drain to source; its value is for the square law to settle.

    Raises: InputError where k or V_t is not given.
    """
    values = dc_values(part)
    build = Builder(part, DeviceParameters(part.name, (), ()))
    symbols = [
        dc_symbol(part, "k", TRANSCONDUCTANCE_FACTOR, values, names),
        dc_symbol(part, "V_t", VOLTAGE, values, names),
    ]
    if values["lambda"]:
        symbols.append(dc_symbol(part, "lambda", PER_VOLT, values, names))
    path = mirrored((build.node("drain"), build.node("source")), values)
    return unknown_current(names.indexed(part, CURRENT), path, symbols)


def current(v_gs: float, v_ds: float, values: Mapping[str, float]) -> float:
    """Give I_D of the square law, in the device's own polarity."""
    k, threshold, slope = (float(values[key]) for key in ("k", "V_t", "lambda"))
    return drain_current(v_gs, v_ds, k, threshold, slope)


def currents(
    voltages: Mapping[str, float], values: Mapping[str, float], thermal_voltage: float
) -> dict[str, float]:
    """Give the current into gate, drain and source."""
    return terminal_currents(voltages, values, current)


def region(voltages: Mapping[str, Fraction], values: Mapping[str, Fraction]) -> Region:
    """Say whether the device is in saturation: V_GS above V_t, and V_DS not below V_GS - V_t."""
    v_gs, v_ds = own_voltages(voltages, values)
    return saturation(
        v_gs, v_ds, values["V_t"], values["polarity"], "V_t" if values["polarity"] > 0 else "|V_t|"
    )
