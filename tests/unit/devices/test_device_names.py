"""Symbols of devices: bare for one, with an index for several that may have them."""

import pytest
from road import topology_of

from derive.devices.linearise import linearise

R = """
R_1 = { resistor = "1k", between = ["in", "out"] }
R_2 = { resistor = "1k", between = ["out", "gnd"] }
R_3 = { resistor = "1k", between = ["out", "x"] }
"""
LINES = {
    "Q": '{0} = {{ bipolar = true, base = "in", collector = "out", emitter = "x", beta = 9, '
    'r_pi = "1k" }}',
    "M": '{0} = {{ mosfet = true, gate = "in", drain = "out", source = "x", g_m = "1 mS", C_gs = "1p" }}',
    "J": '{0} = {{ jfet = true, gate = "in", drain = "out", source = "x", g_m = "1 mS", C_gd = "1p" }}',
    "D": '{0} = {{ diode = true, anode = "out", cathode = "x", r_d = "10R" }}',
}


@pytest.mark.parametrize(
    ("devices", "symbols"),
    [
        (("Q1",), ["r_pi", "g_m"]),
        (("Q1", "Q_tail"), ["r_pi1", "g_m1", "r_pi_tail", "g_m_tail"]),
        (("Q1", "D1"), ["r_pi", "g_m", "r_d"]),
        (("Q1", "M2"), ["r_pi", "g_m1", "g_m2", "C_gs"]),
        (("Q1", "J1"), ["r_pi", "g_m_Q1", "g_m_J1", "C_gd"]),
        (("M1", "J2"), ["g_m1", "C_gs1", "g_m2", "C_gd2"]),
    ],
)
def test_a_symbol_has_an_index_where_another_device_may_have_it(devices, symbols):
    lines = "\n".join(LINES[name[0]].format(name) for name in devices)
    found = [symbol.name for symbol in linearise(topology_of(R + lines)).symbols]
    assert sorted(found[3:]) == sorted(symbols)


def test_parts_keep_their_roles_and_devices_name_their_parasitics():
    parts = 'C_1 = { capacitor = "1u", between = ["in", "out"], role = "coupling" }\n'
    parts += 'C_2 = { capacitor = "1u", between = ["in", "out"] }\n' + LINES["M"].format("M1")
    assert linearise(topology_of(R + parts)).roles == (("C_1", "coupling"), ("M1.C_gs", "parasitic"))
