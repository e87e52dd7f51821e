"""The diode: its slope at the operating point, and its law."""

from fractions import Fraction

from one_device import elements_of, line_of, near, parameters_of, topology_with

from derive.devices.elements import Capacitor, Resistor, VoltageDrive
from derive.devices.models import diode
from derive.devices.parameters import DevicePoint
from derive.devices.registry import names_for


def test_the_slope_is_the_thermal_voltage_over_the_current():
    found = parameters_of("diode", 'I_D = "1 mA"')
    # kT/q at 300.15 K from memory: 25.865 mV.
    assert near(found.value("r_d"), 25.865, 1e-5)
    assert line_of(found, "r_d").origin == "operating point"
    assert "n = 1 common practice" in line_of(found, "r_d").says
    assert near(parameters_of("diode", 'I_D = "1 mA", n = 2').value("r_d"), 51.73, 1e-5)
    point = {"D1": DevicePoint("D1", Fraction(1, 100))}
    assert near(parameters_of("diode", "n = 1", point).value("r_d"), 2.5865, 1e-5)


def test_its_elements_are_a_resistance_and_a_capacitance():
    assert elements_of("diode", 'r_d = "10R", C_d = "4 pF"') == (
        Resistor("D1.r_d", "D1", ("b", "x"), "r_d"),
        Capacitor("D1.C_d", "D1", ("b", "x"), "C_d"),
    )


def test_at_dc_it_is_a_constant_voltage_and_its_law_meets_it_at_one_milliampere():
    topology = topology_with("diode", "n = 2")
    part = topology.parts[-1]
    assert diode.dc_elements(part, names_for(topology)).drives == (VoltageDrive("V_F", ("b", "x")),)
    values = diode.dc_values(part)
    assert near(diode.current(0.65, values, 0.025), 1e-3)
    # n·V_T·ln(10) = 115 mV a decade.
    assert near(diode.current(0.65 + 0.115129, values, 0.025), 1e-2, 1e-4)
    assert diode.current(0.0, values | {"I_S": 1e-9}, 0.025) == 0
    on = {"anode": Fraction(1), "cathode": Fraction(0)}
    assert diode.region(on, values).passed
    assert not diode.region({"anode": Fraction(0), "cathode": Fraction(1)}, values).passed
