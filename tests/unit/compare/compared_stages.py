"""Stages whose figures are known in closed form, and the short way to compare them."""

from functools import cache

from derive.compare.compare import compare
from derive.reading.read import parse

LOW_PASS = """
[sheet]
title = "Low-pass"
[drives]
V_s = { voltage = ["in", "gnd"] }
[parts]
R_1 = { resistor = "1k", between = ["in", "out"] }
C_1 = { capacitor = "10n", between = ["out", "gnd"] }
[find.H]
voltage = "out"
per = "V_s"
"""
HIGH_PASS = """
[sheet]
title = "High-pass"
[drives]
V_s = { voltage = ["in", "gnd"] }
[parts]
C_1 = { capacitor = "100n", between = ["in", "out"] }
R_1 = { resistor = "1k", between = ["out", "gnd"] }
[find.H]
voltage = "out"
per = "V_s"
"""
RESONATOR = """
[sheet]
title = "Series resonance"
[drives]
V_s = { voltage = ["in", "gnd"] }
[parts]
L_1 = { inductor = "10 mH", between = ["in", "x"] }
C_1 = { capacitor = "10n", between = ["x", "out"] }
R_1 = { resistor = "100R", between = ["out", "gnd"] }
[find.H]
voltage = "out"
per = "V_s"
"""
NOTCH = """
[sheet]
title = "Notch"
[drives]
V_s = { voltage = ["in", "gnd"] }
[parts]
R_1 = { resistor = "1k", between = ["in", "out"] }
L_1 = { inductor = "10 mH", between = ["out", "x"] }
C_1 = { capacitor = "10n", between = ["x", "gnd"] }
[find.H]
voltage = "out"
per = "V_s"
"""
# One pole: f_unity = 1 MHz, and a gain of 1 + 99k/1k.
OP_AMP = """
[sheet]
title = "Op amp"
[drives]
V_s = { voltage = ["in", "gnd"] }
[parts]
U1 = { opamp = true, output = "out", inputs = ["in", "m"], f_unity = "1 MHz" }
R_1 = { resistor = "1k", between = ["m", "gnd"] }
R_2 = { resistor = "99k", between = ["out", "m"] }
[find.H]
voltage = "out"
per = "V_s"
"""
INVERTING = """
[sheet]
title = "Inverting"
[drives]
V_s = { voltage = ["in", "gnd"] }
[parts]
U1 = { ideal_opamp = true, output = "out", inputs = ["gnd", "m"] }
R_1 = { resistor = "2k", between = ["in", "m"] }
R_2 = { resistor = "10k", between = ["out", "m"] }
[find.H]
voltage = "out"
per = "V_s"
"""
INTEGRATOR = INVERTING.replace(
    'R_2 = { resistor = "10k", between', 'C_2 = { capacitor = "1u", between'
).replace("Inverting", "Integrator")
OPEN = LOW_PASS.replace('resistor = "1k"', 'resistor = "?"')
# Coupling at 1/(2π·(1k + 9k)·1u) = 15.9 Hz; at mid-band 9k/(1k + 9k), and 1k ∥ 9k with 1 nF above.
BANDED = """
[sheet]
title = "Coupled"
[drives]
V_s = { voltage = ["in", "gnd"] }
[parts]
R_S = { resistor = "1k", between = ["in", "x"] }
C_1 = { capacitor = "1u", between = ["x", "out"], role = "coupling" }
R_L = { resistor = "9k", between = ["out", "gnd"] }
C_L = { capacitor = "1n", between = ["out", "gnd"], role = "parasitic" }
[find.H]
voltage = "out"
per = "V_s"
"""
TRANSIMPEDANCE = """
[sheet]
title = "Current into a resistor"
[drives]
I_s = { current = ["gnd", "out"] }
[parts]
R_1 = { resistor = "5k", between = ["out", "gnd"] }
R_2 = { resistor = "20k", between = ["out", "gnd"] }
[find.Z_m]
voltage = "out"
per = "I_s"
"""


@cache
def compared(*texts, find=None):
    """Give the comparison of texts, named after their titles; each is worked once."""
    topologies = [parse(text, f"stage_{k}.toml") for k, text in enumerate(texts)]
    names = [topology.title_block.title.replace(" ", "_").lower() for topology in topologies]
    return compare(topologies, names, find)


def stage(text, find=None):
    """Give one stage alone."""
    return compared(text, find=find).stages[0]
