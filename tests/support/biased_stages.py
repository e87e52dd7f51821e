"""Biased stages as topology files, with coupling, bypass and devices' own capacitances."""

from __future__ import annotations

SHEET = '[sheet]\ntitle = "Stage"\n'
V_CC = '[supplies]\nV_CC = { node = "vcc", dc = "12 V" }\n'
V_S = '[drives]\nV_s = { voltage = ["in", "gnd"] }\n'
GAIN = '[find.A_v]\nvoltage = "out"\nper = "V_s"\n'
NPN = '[models.npn]\nbeta = 180\nV_A = "80 V"\nf_T = "250 MHz"\nC_mu = "3 pF"\n'


def two(kind: str, name: str, value: str, one: str, other: str, role: str = "") -> str:
    """Write a part between two nodes."""
    acts = f', role = "{role}"' if role else ""
    return f'{name} = {{ {kind} = "{value}", between = ["{one}", "{other}"]{acts} }}\n'


INPUT = two("resistor", "R_S", "1k", "in", "x") + two("capacitor", "C_1", "2u2", "x", "b", "coupling")
OUTPUT = two("capacitor", "C_2", "2u2", "c", "out", "coupling") + two(
    "resistor", "R_L", "47k", "out", "gnd"
)
DIVIDER = two("resistor", "R_1", "68k", "vcc", "b") + two("resistor", "R_2", "22k", "b", "gnd")
Q1 = 'Q1 = { bipolar = "npn", base = "b", collector = "c", emitter = "e" }\n'

COMMON_EMITTER = (
    SHEET
    + V_CC
    + V_S
    + "[parts]\n"
    + INPUT
    + DIVIDER
    + Q1
    + two("resistor", "R_E1", "47R", "e", "f")
    + two("resistor", "R_E2", "2k2", "f", "gnd")
    + two("capacitor", "C_E", "47u", "f", "gnd", "bypass")
    + two("resistor", "R_C", "4k7", "vcc", "c")
    + OUTPUT
    + NPN
    + GAIN
    + '[find.Z_in]\nimpedance = "b"\n'
)
# The least stage with a result in every band: no resistance at the source, and one capacitance of its own.
SMALL = (
    SHEET
    + V_CC
    + V_S
    + "[parts]\n"
    + two("capacitor", "C_1", "2u2", "in", "b", "coupling")
    + two("resistor", "R_1", "68k", "vcc", "b")
    + two("resistor", "R_2", "22k", "b", "gnd")
    + Q1
    + two("resistor", "R_E", "2k2", "e", "gnd")
    + two("capacitor", "C_E", "47u", "e", "gnd", "bypass")
    + two("resistor", "R_C", "4k7", "vcc", "c")
    + NPN.replace('V_A = "80 V"\n', "")
    + GAIN.replace("out", "c")
)
MIRROR = (
    SHEET
    + V_CC
    + '[drives]\nI_s = { current = ["gnd", "m"] }\n[parts]\n'
    + two("resistor", "R_REF", "10k", "vcc", "m")
    + 'Q1 = { bipolar = "npn", base = "m", collector = "m", emitter = "gnd" }\n'
    + 'Q2 = { bipolar = "npn", base = "m", collector = "out", emitter = "gnd" }\n'
    + two("resistor", "R_L", "4k7", "vcc", "out")
    + NPN
    + '[find.Z_t]\nvoltage = "out"\nper = "I_s"\n'
)
DIRECT_COUPLED = (
    SHEET
    + V_CC
    + V_S
    + "[parts]\n"
    + INPUT
    + DIVIDER
    + Q1
    + two("resistor", "R_E", "2k2", "e", "gnd")
    + two("resistor", "R_C", "4k7", "vcc", "c")
    + 'Q2 = { bipolar = "npn", base = "c", collector = "vcc", emitter = "out" }\n'
    + two("resistor", "R_E2", "5k", "out", "gnd")
    + NPN.replace('V_A = "80 V"\n', "")
    + GAIN
)
COMMON_SOURCE = (
    SHEET
    + V_CC
    + V_S
    + "[parts]\n"
    + INPUT.replace('"b"', '"g"')
    + two("resistor", "R_1", "1M", "vcc", "g")
    + two("resistor", "R_2", "470k", "g", "gnd")
    + 'M1 = { mosfet = "nmos", gate = "g", drain = "c", source = "e", g_mb = "0.2 mS" }\n'
    + two("resistor", "R_SS", "1k", "e", "gnd")
    + two("capacitor", "C_SS", "47u", "e", "gnd", "bypass")
    + two("resistor", "R_D", "2k2", "vcc", "c")
    + OUTPUT
    + '[models.nmos]\nk = "2 mA/V²"\nV_t = "1 V"\nC_gs = "2 pF"\nC_gd = "0.5 pF"\n'
    + GAIN
)
JFET_FOLLOWER = (
    SHEET
    + V_CC
    + V_S
    + "[parts]\n"
    + INPUT.replace('"b"', '"g"')
    + two("resistor", "R_G", "1M", "g", "gnd")
    + 'J1 = { jfet = true, gate = "g", drain = "vcc", source = "out", I_DSS = "8 mA", V_P = "-4 V" }\n'
    + two("resistor", "R_SS", "2k2", "out", "gnd")
    + two("resistor", "R_L", "10k", "out", "gnd")
    + GAIN
)
STAGES = {
    "common emitter": COMMON_EMITTER,
    "mirror": MIRROR,
    "direct-coupled": DIRECT_COUPLED,
    "common source": COMMON_SOURCE,
    "jfet follower": JFET_FOLLOWER,
}
# Every band at once, whatever the roles call for.
ALL_BANDS = 'bands = ["low", "mid", "high", "full"]\n'


def in_all_bands(text: str) -> str:
    """Give the same stage with every band asked for."""
    return ALL_BANDS + text
