"""A bipolar transistor, hybrid-π: I_C = I_S·exp(V_BE/V_T), so that i_c = g_m·v_be with g_m = I_C/V_T.

Sign of currents: in an npn transistor the currents into collector and base are positive; the small
signal's g_m·v_be flows from the collector through the transistor to the emitter. A pnp transistor has
the same small-signal circuit; its DC voltages and currents have the other sign, and its current
counts as positive where it conducts.

Parameters: `polarity` (npn, pnp). At the operating point: I_C in A; V_BE in V (0.65 V where not
given) and beta for the DC circuit; I_S in A (else so that I_C is 1 mA at V_BE), V_CE_sat in V (0.2 V
where not given). Data sheet: beta, V_A in V (Early), f_T in Hz. Small signal: g_m in S; r_pi, r_o and r_b
in Ω; C_pi, C_mu and C_cs (collector to ground) in F.

Source: J. J. Ebers and J. L. Moll, Proc. IRE 42 (1954), and L. J. Giacoletto, RCA Review 15 (1954),
from memory; the defaults of V_BE and V_CE_sat are common practice.
"""

from __future__ import annotations

from collections.abc import Mapping
from fractions import Fraction
from math import exp

from derive.devices.build import Builder
from derive.devices.dc import dc_symbol, mirrored, own_values
from derive.devices.elements import CurrentGain, VoltageDrive
from derive.devices.model import DcModel, Model, Names, Region, Witness
from derive.devices.parameters import DeviceParameters, DevicePoint
from derive.devices.point import NOT_KNOWN, needs, point_quantities
from derive.devices.routes import Route, Routes, Wanted, work_out
from derive.quantities.dimension import (
    CAPACITANCE,
    CONDUCTANCE,
    FREQUENCY,
    RATIO,
    RESISTANCE,
    VOLTAGE,
)
from derive.quantities.dimension import (
    CURRENT as AMPERES,
)
from derive.quantities.format import engineering
from derive.topology.kind import Kind, Parameter
from derive.topology.topology import Part

KIND = "bipolar"
CURRENT = "I_C"
POLARITIES = {"npn": 1, "pnp": -1}
DEFAULTS = {"V_BE": Fraction("0.65"), "V_CE_sat": Fraction("0.2")}
# The current at which V_BE is taken where I_S is not given: that of a small signal stage.
I_REFERENCE = Fraction("1e-3")

SPEC = Kind(
    KIND,
    (("base", 1), ("collector", 1), ("emitter", 1)),
    '{ bipolar = "small_npn", base = "b", collector = "c", emitter = "e" }',
    written="true or model",
    parameters=(
        Parameter("I_C", AMPERES),
        Parameter("beta", RATIO),
        Parameter("V_A", VOLTAGE),
        Parameter("f_T", FREQUENCY, cycles=True),
        Parameter("V_BE", VOLTAGE),
        Parameter("I_S", AMPERES),
        Parameter("V_CE_sat", VOLTAGE),
        Parameter("g_m", CONDUCTANCE),
        Parameter("r_pi", RESISTANCE),
        Parameter("r_o", RESISTANCE),
        Parameter("r_b", RESISTANCE),
        Parameter("C_pi", CAPACITANCE),
        Parameter("C_mu", CAPACITANCE),
        Parameter("C_cs", CAPACITANCE),
    ),
    choices=(("polarity", tuple(POLARITIES)),),
    joins_if=(
        (("r_pi", "beta", "C_pi", "f_T"), ("base", "emitter")),
        (("r_o", "V_A"), ("collector", "emitter")),
        (("C_mu",), ("base", "collector")),
        (("C_cs",), ("collector", "gnd")),
    ),
    controls=((("collector", "emitter"), ("base", "emitter")),),
    apart=(("base", "emitter"), ("collector", "emitter")),
)
ROUTES = Routes(
    SPEC,
    (
        Wanted("g_m", NOT_KNOWN),
        Wanted("r_pi", "taken as infinite: beta not given"),
        Wanted("r_o", "taken as infinite: V_A not given"),
        Wanted("r_b", "taken as zero: not given"),
        Wanted("C_pi", "taken as zero: f_T not given", parasitic=True),
        Wanted("C_mu", "taken as zero: not given", parasitic=True),
        Wanted("C_cs", "taken as zero: not given", ("collector", "gnd"), parasitic=True),
    ),
    (
        Route("g_m", "I_C/V_T"),
        Route("g_m", "beta/r_pi"),
        Route("r_pi", "beta/g_m"),
        Route("I_C", "g_m*V_T"),
        Route("r_o", "V_A/I_C"),
        Route("C_pi", "g_m/(2*pi*f_T) - C_mu"),
        Route("C_pi", "g_m/(2*pi*f_T)", without=("C_mu",)),
    ),
    of_the_point=("I_C",),
)
WITNESS = Witness(
    'R_B = { resistor = "50k", between = ["in", "b"] }\n'
    'R_C = { resistor = "4k7", between = ["c", "gnd"] }\n'
    'R_E = { resistor = "470R", between = ["e", "gnd"] }\n'
    'Q1 = { bipolar = true, base = "b", collector = "c", emitter = "e", I_C = "1 mA", beta = 200 }',
    'voltage = "c"\nper = "V_s"',
    "-g_m*r_pi*R_C/(R_B + r_pi + (g_m*r_pi + 1)*R_E)",
    "common emitter with emitter resistor, r_o infinite: P. R. Gray and R. G. Meyer, Analysis and Design "
    "of Analog Integrated Circuits, chapter 3, from memory",
)


def is_settled(part: Part) -> bool:
    """Whether the file itself gives the current or g_m, so that no DC circuit need be solved."""
    given = dict(part.parameters)
    return "I_C" in given or "g_m" in given or {"beta", "r_pi"} <= given.keys()


def parameters(
    part: Part, point: DevicePoint | None, thermal_voltage: Fraction, names: Names
) -> DeviceParameters:
    """Give the small-signal parameters: as given, or from I_C.

    Raises: InputError where the data disagree, or neither g_m nor I_C is known.
    """
    found = work_out(part, ROUTES, point_quantities(CURRENT, point), thermal_voltage, names)
    return needs(part, found, "g_m", CURRENT, "beta")


def linearise(part: Part, names: Names, parameters: DeviceParameters) -> Model:
    """Give the hybrid-π circuit; r_b stands between the base and an inner node."""
    build = Builder(part, parameters)
    base, collector, emitter = (build.node(key) for key in ("base", "collector", "emitter"))
    inner = names.inner_node(part, "base") if build.has("r_b") else base
    build.resistor("r_b", (base, inner))
    build.resistor("r_pi", (inner, emitter))
    build.transconductance("g_m", (collector, emitter), (inner, emitter))
    build.resistor("r_o", (collector, emitter))
    build.capacitor("C_pi", (inner, emitter))
    build.capacitor("C_mu", (inner, collector))
    build.capacitor("C_cs", (collector, "gnd"))
    return build.model()


def dc_values(part: Part) -> dict[str, Fraction]:
    """Give beta (where given), V_BE, V_CE_sat and I_S (where given) as an npn's, and the polarity.

    Raises: InputError for a value that was left open.
    """
    return own_values(part, ("beta", "V_BE", "V_CE_sat", "I_S", "V_A"), DEFAULTS, POLARITIES)


def dc_elements(part: Part, names: Names) -> DcModel:
    """Give a constant V_BE, whose current is the base's, and beta times that from collector to emitter.

    An npn's drive is from base to emitter, a pnp's from emitter to base.
    """
    values = dc_values(part)
    build = Builder(part, DeviceParameters(part.name, (), ()))
    base, collector, emitter = (build.node(key) for key in ("base", "collector", "emitter"))
    v_be = dc_symbol(part, "V_BE", VOLTAGE, values, names)
    beta = dc_symbol(part, "beta", RATIO, values, names)
    junction = mirrored((base, emitter), values)
    gain = CurrentGain(
        f"{part.name}.beta", part.name, mirrored((collector, emitter), values), v_be.name, beta.name
    )
    return DcModel((gain,), (VoltageDrive(v_be.name, junction),), (v_be, beta))


def current(v_be: float, values: Mapping[str, float], thermal_voltage: float) -> float:
    """Give I_C of the forward-active law, in the transistor's own polarity."""
    saturation = values.get("I_S")
    if saturation is None:
        return float(I_REFERENCE) * exp((v_be - float(values["V_BE"])) / thermal_voltage)
    return float(saturation) * (exp(v_be / thermal_voltage) - 1)


def currents(
    voltages: Mapping[str, float], values: Mapping[str, float], thermal_voltage: float
) -> dict[str, float]:
    """Give the current into base, collector and emitter; beta and the law of I_C give them."""
    sign = float(values["polarity"])
    v_be = sign * (voltages["base"] - voltages["emitter"])
    collector = sign * current(v_be, values, thermal_voltage)
    base = collector / float(values["beta"])
    return {"base": base, "collector": collector, "emitter": -(base + collector)}


def region(voltages: Mapping[str, Fraction], values: Mapping[str, Fraction]) -> Region:
    """Say whether the transistor is forward-active: V_CE above V_CE_sat (V_EC for a pnp)."""
    sign = values["polarity"]
    v_ce = sign * (voltages["collector"] - voltages["emitter"])
    name = "V_CE" if sign > 0 else "V_EC"
    return Region(
        v_ce >= values["V_CE_sat"],
        f"{name} = {engineering(v_ce, VOLTAGE)}",
        f"forward active: {name} ≥ {engineering(values['V_CE_sat'], VOLTAGE)}",
    )
