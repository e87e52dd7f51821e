"""The bipolar transistor: hybrid-π from I_C and data sheet, and its law at DC."""

from fractions import Fraction
from math import pi

import pytest
from one_device import elements_of, left_out, line_of, near, parameters_of, topology_with
from road import equal, equation

from derive.devices.elements import (
    Capacitor,
    CurrentGain,
    Resistor,
    Transconductance,
    VoltageDrive,
)
from derive.devices.linearise import linearise
from derive.devices.models import bipolar
from derive.devices.parameters import DevicePoint
from derive.devices.registry import names_for
from derive.devices.thermal import temperature_of, thermal_voltage
from derive.errors import InputError

DATA = 'I_C = "1 mA", beta = 180, V_A = "80 V", f_T = "250 MHz", C_mu = "3 pF"'
# kT/q at 300.15 K from memory: 25.865 mV.
V_T = 0.0258650


def test_the_thermal_voltage_is_that_of_tables():
    assert near(thermal_voltage(Fraction("300.15")), V_T, 1e-5)
    # CODATA 2018, k/q = 8.617333262e-5 eV/K.
    assert near(thermal_voltage(Fraction(1)), 8.617333262e-5, 1e-9)
    assert temperature_of(thermal_voltage(Fraction(350))) == 350


def test_every_parameter_follows_from_the_current_and_the_data_sheet():
    found = parameters_of("bipolar", DATA)
    g_m = 1e-3 / V_T
    assert near(found.value("g_m"), g_m, 1e-5)
    assert near(found.value("r_pi"), 180 / g_m, 1e-5)
    assert found.value("r_o") == 80_000
    assert near(found.value("C_pi"), g_m / (2 * pi * 250e6) - 3e-12, 1e-5)
    assert found.value("C_mu") == Fraction(3, 10**12)
    assert [line.key for line in found.lines] == ["g_m", "r_pi", "r_o", "C_pi", "C_mu"]


def test_every_parameter_says_where_it_came_from_and_by_which_equation():
    found = parameters_of("bipolar", DATA)
    assert line_of(found, "g_m").origin == "operating point"
    assert line_of(found, "g_m").says == "from I_C = 1 mA; V_T = kT/q = 25.86 mV at 300.15 K"
    assert line_of(found, "r_pi").origin == "data sheet"
    assert line_of(found, "C_pi").says.endswith("f_T = 250 MHz; C_mu = 3 pF")
    assert (line_of(found, "C_mu").origin, line_of(found, "C_mu").equation) == ("given", None)
    wanted = equation("C_pi = g_m/(2*pi*f_T) - C_mu")
    assert equal(line_of(found, "C_pi").equation.right, wanted.right)
    assert equal(line_of(found, "r_o").equation.right, "V_A/I_C")


def test_the_operating_point_gives_the_current_where_the_file_does_not():
    point = {"Q1": DevicePoint("Q1", Fraction(2, 1000))}
    found = parameters_of("bipolar", 'beta = 100, V_A = "50 V"', point)
    assert near(found.value("g_m"), 2e-3 / V_T, 1e-5)
    assert found.value("r_o") == 25_000
    assert "I_C = 2 mA from the operating point" in line_of(found, "g_m").says


def test_what_is_given_stands_against_the_operating_point():
    point = {"Q1": DevicePoint("Q1", Fraction(2, 1000))}
    assert parameters_of("bipolar", 'g_m = "20 mS"', point).value("g_m") == Fraction(20, 1000)
    assert near(parameters_of("bipolar", 'I_C = "1 mA"', point).value("g_m"), 1e-3 / V_T, 1e-5)


def test_what_is_not_given_is_left_out_and_said():
    found = parameters_of("bipolar", 'g_m = "40 mS"')
    assert left_out(found) == {
        "r_pi": "taken as infinite: beta not given",
        "r_o": "taken as infinite: V_A not given",
        "r_b": "taken as zero: not given",
        "C_pi": "taken as zero: f_T not given",
        "C_mu": "taken as zero: not given",
        "C_cs": "taken as zero: not given",
    }


def test_a_transconductance_and_an_early_voltage_give_r_o():
    found = parameters_of("bipolar", 'g_m = "40 mS", V_A = "80 V"')
    assert near(found.value("r_o"), 80 / (0.04 * V_T), 1e-5)


def test_beta_over_r_pi_is_the_transconductance():
    assert parameters_of("bipolar", 'beta = 100, r_pi = "2k5"').value("g_m") == Fraction(4, 100)


def test_the_temperature_of_the_file_counts():
    topology = topology_with("bipolar", 'I_C = "1 mA"', rest='[conditions]\ntemperature = "126.85 °C"')
    # 400 K against 300.15 K.
    found = linearise(topology).devices[0]
    assert near(found.value("g_m"), 1e-3 / V_T * 300.15 / 400, 1e-5)
    assert "at 400 K" in line_of(found, "g_m").says


def test_values_that_agree_within_the_figures_of_a_data_sheet_are_taken():
    found = parameters_of("bipolar", 'I_C = "1 mA", g_m = "38.67 mS"')
    assert found.value("g_m") == Fraction("0.03867")
    with pytest.raises(InputError, match=r"g_m is given as 38.8 mS, but I_C/V_T is 38.662"):
        parameters_of("bipolar", 'I_C = "1 mA", g_m = "38.8 mS"')


def test_a_negative_capacitance_names_the_data_that_disagree():
    with pytest.raises(InputError) as told:
        parameters_of("bipolar", 'I_C = "0.1 mA", f_T = "5 GHz", C_mu = "3 pF"')
    assert "C_pi = g_m/(2*pi*f_T) - C_mu comes to −2.877 pF" in told.value.what
    assert "g_m = 3.866 mS, f_T = 5 GHz and C_mu = 3 pF disagree" in told.value.what


def test_a_value_left_open_leaves_open_what_follows_from_it():
    found = parameters_of("bipolar", 'I_C = "?", beta = 100')
    assert [(line.key, line.value) for line in found.lines] == [("g_m", None), ("r_pi", None)]
    symbols = linearise(topology_with("bipolar", 'g_m = "?"')).symbols
    assert [symbol.text for symbol in symbols if symbol.name == "g_m"] == ["?"]


def test_a_parameter_left_open_is_not_said_to_be_given():
    found = parameters_of("bipolar", 'g_m = "?", r_pi = "1k"')
    assert [(line.key, line.says) for line in found.lines] == [("g_m", "left open"), ("r_pi", "given")]


def test_the_elements_are_those_of_the_hybrid_pi():
    more = f'{DATA}, r_b = "50R", C_cs = "1 pF"'
    assert elements_of("bipolar", more) == (
        Resistor("Q1.r_b", "Q1", ("b", "Q1_base"), "r_b"),
        Resistor("Q1.r_pi", "Q1", ("Q1_base", "x"), "r_pi"),
        Transconductance("Q1.g_m", "Q1", ("out", "x"), ("Q1_base", "x"), "g_m"),
        Resistor("Q1.r_o", "Q1", ("out", "x"), "r_o"),
        Capacitor("Q1.C_pi", "Q1", ("Q1_base", "x"), "C_pi"),
        Capacitor("Q1.C_mu", "Q1", ("Q1_base", "out"), "C_mu"),
        Capacitor("Q1.C_cs", "Q1", ("out", "gnd"), "C_cs"),
    )
    assert dict(linearise(topology_with("bipolar", more)).roles) == dict.fromkeys(
        ("Q1.C_pi", "Q1.C_mu", "Q1.C_cs"), "parasitic"
    )


def test_a_transistor_wired_as_a_diode_has_no_capacitance_from_base_to_collector():
    wires = 'base = "out", collector = "out", emitter = "x"'
    names = [element.name for element in elements_of("bipolar", DATA, wires=wires)]
    assert names == ["Q1.r_pi", "Q1.g_m", "Q1.r_o", "Q1.C_pi"]


def test_a_pnp_has_the_same_small_signal_circuit():
    assert elements_of("bipolar", f'{DATA}, polarity = "pnp"') == elements_of("bipolar", DATA)


def dc(more):
    topology = topology_with("bipolar", more)
    part = topology.parts[-1]
    return part, bipolar.dc_elements(part, names_for(topology))


def test_at_dc_it_is_a_constant_voltage_and_beta_times_its_current():
    _, found = dc('beta = 100, V_BE = "0.7 V"')
    assert found.drives == (VoltageDrive("V_BE", ("b", "x")),)
    assert found.elements == (CurrentGain("Q1.beta", "Q1", ("out", "x"), "V_BE", "beta"),)
    assert [(s.name, s.value, s.origin) for s in found.symbols] == [
        ("V_BE", Fraction(7, 10), "part Q1"),
        ("beta", 100, "part Q1"),
    ]


def test_at_dc_a_pnp_is_turned_round_and_a_voltage_not_given_is_common_practice():
    _, found = dc('beta = 100, polarity = "pnp"')
    assert found.drives[0].nodes == ("x", "b")
    assert found.elements[0].flows == ("x", "out")
    assert (found.symbols[0].value, found.symbols[0].origin) == (Fraction(65, 100), "common practice")


def test_at_dc_beta_is_needed():
    with pytest.raises(InputError, match='needs "beta", and it is not given'):
        dc('I_C = "1 mA"')


def test_the_law_gives_sixty_millivolts_a_decade_and_the_reference_current():
    part, _ = dc("beta = 100")
    values = bipolar.dc_values(part)
    assert near(bipolar.current(0.65, values, V_T), 1e-3)
    # ln(10)·V_T: 59.6 mV at 300 K.
    assert near(bipolar.current(0.65 + 0.0595564, values, V_T), 1e-2, 1e-4)
    with_saturation = values | {"I_S": 1e-14}
    assert near(bipolar.current(0.65, with_saturation, V_T), 8.2e-4, 0.02)


def test_the_region_is_judged_by_the_voltage_from_collector_to_emitter():
    part, _ = dc("beta = 100")
    values = bipolar.dc_values(part)
    volts = {"base": Fraction(1), "collector": Fraction(3), "emitter": Fraction(35, 100)}
    assert bipolar.region(volts, values).passed
    saturated = bipolar.region(volts | {"collector": Fraction(1, 2)}, values)
    assert not saturated.passed
    assert saturated.measured == "V_CE = 150 mV"
    assert "V_CE ≥ 200 mV" in saturated.limit
    pnp = bipolar.region(
        {key: -value for key, value in volts.items()}, values | {"polarity": Fraction(-1)}
    )
    assert pnp.passed
    assert pnp.measured == "V_EC = 2.65 V"
