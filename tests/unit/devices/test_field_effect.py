"""MOSFET and JFET: the square law, what follows from it, and the elements."""

from fractions import Fraction
from math import pi

import pytest
from one_device import elements_of, left_out, line_of, near, parameters_of, topology_with
from road import equal

from derive.devices.elements import Capacitor, CurrentDrive, Resistor, Transconductance
from derive.devices.models import jfet, mosfet
from derive.devices.parameters import DevicePoint
from derive.devices.registry import names_for
from derive.errors import InputError

POINT = 'I_D = "1 mA", V_ov = "0.2 V"'


@pytest.mark.parametrize(
    ("more", "g_m"),
    [
        (POINT, "10e-3"),
        ('k = "5 mA/V²", V_ov = "0.2 V"', "1e-3"),
        ('I_D = "1 mA", k = "2 mA/V²"', "2e-3"),
        ('I_D = "1 mA", k = "2 mA/V²", lambda = "0.1 1/V"', "2e-3"),
        ('g_m = "3 mS"', "3e-3"),
    ],
)
def test_a_mosfets_transconductance_follows_from_two_of_three(more, g_m):
    assert parameters_of("mosfet", more).value("g_m") == Fraction(g_m)


def test_a_mosfets_other_parameters_follow_from_the_current_and_the_data_sheet():
    found = parameters_of("mosfet", f'{POINT}, lambda = "0.02 1/V", f_T = "1 GHz", C_gd = "0.1 pF"')
    assert found.value("r_o") == 50_000
    assert near(found.value("C_gs"), 0.01 / (2 * pi * 1e9) - 0.1e-12)
    assert equal(line_of(found, "g_m").equation.right, "2*I_D/V_ov")
    assert equal(line_of(found, "r_o").equation.right, "1/(lambda*I_D)")
    assert line_of(found, "r_o").origin == "data sheet"
    assert left_out(found)["g_mb"] == "taken as zero: not given"


def test_a_mosfets_operating_point_gives_the_overdrive_from_the_voltages():
    volts = (("gate", Fraction(2)), ("drain", Fraction(5)), ("source", Fraction(1)))
    point = {"M1": DevicePoint("M1", Fraction(1, 1000), volts)}
    found = parameters_of("mosfet", 'k = "50 mA/V²", V_t = "0.8 V"', point)
    assert found.value("g_m") == Fraction(1, 100)
    assert "V_ov = 200 mV from the operating point" in line_of(found, "g_m").says
    mirrored = {"M1": DevicePoint("M1", Fraction(1, 1000), tuple((k, -v) for k, v in volts))}
    for threshold in ("0.8 V", "-0.8 V"):
        more = f'k = "50 mA/V²", V_t = "{threshold}", polarity = "p-channel"'
        assert parameters_of("mosfet", more, mirrored).value("g_m") == Fraction(1, 100)


def test_a_mosfet_with_a_bulk_node_has_all_its_elements():
    more = (
        f'{POINT}, lambda = "0.02 1/V", g_mb = "2 mS", C_gs = "1p", C_gd = "2p", C_db = "3p", C_sb = "4p"'
    )
    assert elements_of("mosfet", more + ', bulk = "b"') == (
        Transconductance("M1.g_m", "M1", ("out", "x"), ("b", "x"), "g_m"),
        Transconductance("M1.g_mb", "M1", ("out", "x"), ("b", "x"), "g_mb"),
        Resistor("M1.r_o", "M1", ("out", "x"), "r_o"),
        Capacitor("M1.C_gs", "M1", ("b", "x"), "C_gs"),
        Capacitor("M1.C_gd", "M1", ("b", "out"), "C_gd"),
        Capacitor("M1.C_db", "M1", ("out", "b"), "C_db"),
        Capacitor("M1.C_sb", "M1", ("x", "b"), "C_sb"),
    )
    to_ground = {element.name: element for element in elements_of("mosfet", more)}
    assert to_ground["M1.g_mb"].senses == ("gnd", "x")
    assert to_ground["M1.C_db"].between == ("out", "gnd")


def test_a_bulk_at_the_source_has_no_effect_and_the_sheet_can_say_so():
    more = f'{POINT}, g_mb = "2 mS", C_sb = "4p", bulk = "x"'
    assert [element.name for element in elements_of("mosfet", more)] == ["M1.g_m"]
    why = left_out(parameters_of("mosfet", more))
    assert why["g_mb"] == "without effect: bulk and source are one node"
    assert why["C_sb"] == "without effect: source and bulk are one node"


def test_a_mosfet_that_works_as_a_current_source_needs_no_transconductance():
    wires = 'gate = "x", drain = "out", source = "x"'
    found = parameters_of("mosfet", 'I_D = "1 mA", lambda = "0.1 1/V"', wires=wires)
    assert [(line.key, line.value) for line in found.lines] == [("r_o", 10_000)]
    assert left_out(found)["g_m"] == "without effect: gate and source are one node"


def dc_values(model, kind, more):
    return model.dc_values(topology_with(kind, more).parts[-1])


def test_the_square_law_meets_the_triode_region_and_is_cut_off_below_threshold():
    values = dc_values(mosfet, "mosfet", 'k = "2 mA/V²", V_t = "1 V"')
    assert near(mosfet.current(3, 5, values), 4e-3)
    assert near(mosfet.current(3, 2, values), 4e-3)
    assert near(mosfet.current(3, 1, values), 3e-3)
    assert mosfet.current(1, 5, values) == 0
    # Drain and source change places where the voltage does.
    assert near(mosfet.current(3, -1, values), -5e-3)
    assert near(mosfet.current(3, 5, values | {"lambda": 0.1}), 6e-3)


def test_the_saturation_region_is_judged_by_both_voltages():
    values = dc_values(mosfet, "mosfet", 'k = "2 mA/V²", V_t = "1 V"')
    volts = {"gate": Fraction(3), "drain": Fraction(5), "source": Fraction(0)}
    assert mosfet.region(volts, values).passed
    triode = mosfet.region(volts | {"drain": Fraction(1)}, values)
    assert not triode.passed
    assert triode.measured == "V_GS = 3 V, V_DS = 1 V"
    assert not mosfet.region(volts | {"gate": Fraction(1)}, values).passed


def test_at_dc_a_field_effect_transistor_is_a_current_that_its_law_settles():
    topology = topology_with("mosfet", 'k = "2 mA/V²", V_t = "-1 V", polarity = "p-channel"')
    found = mosfet.dc_elements(topology.parts[-1], names_for(topology))
    assert found.drives == (CurrentDrive("I_D", ("x", "out")),)
    assert [(s.name, s.value) for s in found.symbols] == [
        ("I_D", None),
        ("k", Fraction(2, 1000)),
        ("V_t", 1),
    ]
    with pytest.raises(InputError, match='needs "V_t"'):
        mosfet.dc_elements(topology_with("mosfet", 'k = "2 mA/V²"').parts[-1], names_for(topology))


@pytest.mark.parametrize("pinch_off", ["-4 V", "4 V"])
def test_a_jfets_transconductance_follows_from_its_square_law(pinch_off):
    more = f'I_D = "2 mA", I_DSS = "8 mA", V_P = "{pinch_off}"'
    # 2·sqrt(2·8)/4 = 2 mS.
    found = parameters_of("jfet", more)
    assert found.value("g_m") == Fraction(2, 1000)
    assert line_of(found, "g_m").origin == "data sheet"
    assert parameters_of("jfet", f'{more}, V_ov = "2 V"').value("g_m") == Fraction(2, 1000)
    with pytest.raises(InputError, match="g_m"):
        parameters_of("jfet", f'{more}, V_ov = "1 V"')


def test_a_jfets_irrational_transconductance_is_rounded_to_forty_digits():
    g_m = parameters_of("jfet", 'I_D = "1 mA", I_DSS = "8 mA", V_P = "-4 V"').value("g_m")
    # 2·sqrt(8)/4 mS = sqrt(2) mS, sqrt(2) to 30 digits (OEIS A002193).
    root = Fraction("1.41421356237309504880168872421")
    assert abs(g_m * 1000 - root) < Fraction(1, 10**29)


def test_a_jfets_operating_point_counts_from_pinch_off():
    volts = (("gate", Fraction(0)), ("drain", Fraction(8)), ("source", Fraction(2)))
    point = {"J1": DevicePoint("J1", Fraction(2, 1000), volts)}
    found = parameters_of("jfet", 'I_DSS = "8 mA", V_P = "-4 V", lambda = "0.01 1/V"', point)
    assert found.value("g_m") == Fraction(2, 1000)
    assert found.value("r_o") == 50_000


def test_a_jfets_law_is_that_of_its_data_sheet():
    values = dc_values(jfet, "jfet", 'I_DSS = "8 mA", V_P = "-4 V"')
    assert near(jfet.current(0, 10, values), 8e-3)
    assert near(jfet.current(-2, 10, values), 2e-3)
    assert jfet.current(-4, 10, values) == 0
    volts = {"gate": Fraction(0), "drain": Fraction(10), "source": Fraction(2)}
    assert jfet.region(volts, values).passed
    assert not jfet.region(volts | {"drain": Fraction(3)}, values).passed
