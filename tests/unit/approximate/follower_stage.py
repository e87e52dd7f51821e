"""An emitter follower that drives a cable, with its small-signal values, and three usual assumptions."""

STAGE = """
[sheet]
title = "Echo line buffer"
[supplies]
V_CC = { node = "vcc", dc = "9 V" }
[drives]
V_s = { voltage = ["gen", "gnd"] }
[parts]
R_S   = { resistor  = "3k3",   between = ["gen", "b"], tol = "5 %" }
R_1   = { resistor  = "68k",   between = ["vcc", "b"], tol = "F" }
R_2   = { resistor  = "82k",   between = ["b", "gnd"], tol = "F" }
Q1    = { bipolar = "npn", base = "b", collector = "vcc", emitter = "e" }
R_E   = { resistor  = "1k8",   between = ["e", "gnd"], tol = "F" }
R_iso = { resistor  = "47R",   between = ["e", "line"], tol = "J" }
C_cab = { capacitor = "3n0",   between = ["line", "gnd"], tol = "20 %", role = "parasitic" }
[models.npn]
polarity = "npn"
g_m  = "80 mS"
r_pi = "2k25"
C_pi = "48 pF"
C_mu = "3 pF"
[merge]
R_B = ["R_1", "R_2"]
[find.A_v]
voltage = "line"
per     = "V_s"
"""
ASSUMED = """
[[assume]]
that = "R_B -> inf"
because = "the base divider is large against what the base shows"
[[assume]]
that = "beta >> 1"
because = "beta is 180"
[[assume]]
that = "C_mu -> 0"
because = "its pole is far"
"""
