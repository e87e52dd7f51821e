"""A diode: I_D = I_S·(exp(V_D/(n·V_T)) - 1), so that v_d = r_d·i_d with r_d = n·V_T/I_D.

Sign of currents: the current from the anode through the diode to the cathode is positive.

Parameters: at the operating point I_D in A; V_F in V (0.65 V where not given) for the DC circuit; I_S
in A (else so that I_D is 1 mA at V_F); n, the ideality factor (1 where not given). Small signal: r_d
in Ω, C_d in F.

Source: W. Shockley, Bell System Technical Journal 28 (1949), from memory; the default of V_F is common
practice.
"""

from __future__ import annotations

from collections.abc import Mapping
from fractions import Fraction
from math import exp

from derive.devices.build import Builder
from derive.devices.dc import COMMON_PRACTICE, dc_symbol, own_values
from derive.devices.elements import VoltageDrive
from derive.devices.model import DcModel, Model, Names, Region, Witness
from derive.devices.parameters import DeviceParameters, DevicePoint
from derive.devices.point import NOT_KNOWN, needs, point_quantities
from derive.devices.routes import Known, Route, Routes, Wanted, work_out
from derive.quantities.dimension import CAPACITANCE, RATIO, RESISTANCE, VOLTAGE
from derive.quantities.dimension import CURRENT as AMPERES
from derive.quantities.format import engineering
from derive.topology.kind import Kind, Parameter
from derive.topology.topology import Part

KIND = "diode"
CURRENT = "I_D"
DEFAULTS = {"V_F": Fraction("0.65"), "n": Fraction(1)}
# The current at which V_F is taken where I_S is not given: that of a small signal stage.
I_REFERENCE = Fraction("1e-3")

SPEC = Kind(
    KIND,
    (("anode", 1), ("cathode", 1)),
    '{ diode = "small_diode", anode = "a", cathode = "k" }',
    written="true or model",
    parameters=(
        Parameter("I_D", AMPERES),
        Parameter("V_F", VOLTAGE),
        Parameter("n", RATIO),
        Parameter("I_S", AMPERES),
        Parameter("r_d", RESISTANCE),
        Parameter("C_d", CAPACITANCE),
    ),
    joins=(("anode", "cathode"),),
    apart=(("anode", "cathode"),),
)
ROUTES = Routes(
    SPEC,
    (
        Wanted("r_d", NOT_KNOWN),
        Wanted("C_d", "taken as zero: not given", parasitic=True),
    ),
    (Route("r_d", "n*V_T/I_D"),),
    of_the_point=("I_D",),
)
WITNESS = Witness(
    'R_1 = { resistor = "1k", between = ["in", "k"] }\n'
    'D1 = { diode = true, anode = "k", cathode = "gnd", I_D = "1 mA", C_d = "4 pF" }',
    'voltage = "k"\nper = "V_s"',
    "r_d/(R_1 + r_d + s*C_d*R_1*r_d)",
    "a divider with r_d for one resistor and C_d beside it: common practice",
)


def is_settled(part: Part) -> bool:
    """Whether the file itself gives the current or r_d, so that no DC circuit need be solved."""
    return bool({"I_D", "r_d"} & dict(part.parameters).keys())


def parameters(
    part: Part, point: DevicePoint | None, thermal_voltage: Fraction, names: Names
) -> DeviceParameters:
    """Give r_d, as given or from I_D, and C_d.

    Raises: InputError where the data disagree, or neither r_d nor I_D is known.
    """
    further = point_quantities(CURRENT, point)
    further["n"] = Known(DEFAULTS["n"], COMMON_PRACTICE)
    found = work_out(part, ROUTES, further, thermal_voltage, names)
    return needs(part, found, "r_d", CURRENT, "V_F")


def linearise(part: Part, names: Names, parameters: DeviceParameters) -> Model:
    """Give the resistance and the capacitance of the junction."""
    build = Builder(part, parameters)
    junction = (build.node("anode"), build.node("cathode"))
    build.resistor("r_d", junction)
    build.capacitor("C_d", junction)
    return build.model()


def dc_values(part: Part) -> dict[str, Fraction]:
    """Give V_F, n and I_S (where given); the polarity is 1.

    Raises: InputError for a value that was left open.
    """
    return own_values(part, ("V_F", "n", "I_S"), DEFAULTS, {"": 1})


def dc_elements(part: Part, names: Names) -> DcModel:
    """Give a constant V_F from anode to cathode, whose current is the diode's."""
    build = Builder(part, DeviceParameters(part.name, (), ()))
    v_f = dc_symbol(part, "V_F", VOLTAGE, dc_values(part), names)
    junction = (build.node("anode"), build.node("cathode"))
    return DcModel((), (VoltageDrive(v_f.name, junction),), (v_f,))


def current(v_d: float, values: Mapping[str, float], thermal_voltage: float) -> float:
    """Give I_D at the voltage from anode to cathode."""
    slope = float(values["n"]) * thermal_voltage
    saturation = values.get("I_S")
    if saturation is None:
        return float(I_REFERENCE) * exp((v_d - float(values["V_F"])) / slope)
    return float(saturation) * (exp(v_d / slope) - 1)


def currents(
    voltages: Mapping[str, float], values: Mapping[str, float], thermal_voltage: float
) -> dict[str, float]:
    """Give the current into anode and cathode."""
    anode = current(voltages["anode"] - voltages["cathode"], values, thermal_voltage)
    return {"anode": anode, "cathode": -anode}


def region(voltages: Mapping[str, Fraction], values: Mapping[str, Fraction]) -> Region:
    """Say whether the diode conducts: its voltage is above zero."""
    v_d = voltages["anode"] - voltages["cathode"]
    return Region(v_d > 0, f"V_D = {engineering(v_d, VOLTAGE)}", "forward: V_D above 0 V")
