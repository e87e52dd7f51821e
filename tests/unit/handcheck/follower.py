"""The emitter follower by hand, from Kirchhoff's laws to the normalised form, right and with slips."""

from __future__ import annotations

TOPOLOGY = """
[sheet]
title = "Follower"
[drives]
V_s = { voltage = ["in", "gnd"] }
[parts]
R_S  = { resistor = "600 Ω", between = ["in", "b"], tol = "1 %" }
r_pi = { resistor = "2.5k", between = ["b", "out"] }
C_pi = { capacitor = "12p", between = ["b", "out"] }
C_mu = { capacitor = "2p", between = ["b", "gnd"] }
g_m  = { transconductance = "40 mS", flows = ["gnd", "out"], senses = ["b", "out"] }
R_E  = { resistor = "2k2", between = ["out", "gnd"], tol = "1 %" }
[find.A_v]
voltage = "out"
per = "V_s"
[find.Z_out]
impedance = "out"
"""

RIGHT = (
    "(v_b - V_s)/R_S + s*C_mu*v_b + (v_b - v_out)*(1/r_pi + s*C_pi) = 0",
    "v_out/R_E = (v_b - v_out)*(g_m + 1/r_pi + s*C_pi)",
    "Y = g_m + 1/r_pi + s*C_pi",
    "v_b = v_out*(1 + 1/(R_E*Y))",
    "v_b - v_out = v_out/(R_E*Y)",
    "V_s/R_S = v_b*(1/R_S + s*C_mu) + (v_b - v_out)*(1/r_pi + s*C_pi)",
    "V_s = v_b*(1 + s*R_S*C_mu) + R_S*(v_b - v_out)*(1/r_pi + s*C_pi)",
    "V_s = v_out*(1 + 1/(R_E*Y))*(1 + s*R_S*C_mu) + v_out*R_S*(1/r_pi + s*C_pi)/(R_E*Y)",
    "V_s*R_E*Y = v_out*((R_E*Y + 1)*(1 + s*R_S*C_mu) + R_S*(1/r_pi + s*C_pi))",
    "A_v = R_E*Y/((R_E*Y + 1)*(1 + s*R_S*C_mu) + R_S*(1/r_pi + s*C_pi))",
    "A_v = R_E*(beta + 1 + s*r_pi*C_pi)/((R_E*(beta + 1 + s*r_pi*C_pi) + r_pi)*(1 + s*R_S*C_mu)"
    " + R_S*(1 + s*r_pi*C_pi))",
    "K = (beta + 1)*R_E/(R_S + r_pi + (beta + 1)*R_E)",
    "a_1 = r_pi*C_pi/(beta + 1)",
    "b_1 = (r_pi*C_pi*(R_S + R_E) + R_S*C_mu*(r_pi + (beta + 1)*R_E))/(R_S + r_pi + (beta + 1)*R_E)",
    "b_2 = R_S*R_E*r_pi*C_pi*C_mu/(R_S + r_pi + (beta + 1)*R_E)",
)

# The first slip, in line 2, is a law without the base current and goes no further; the second, a factor R_S lost in
# line 7, is carried into all that follows from it.
WRONG = {
    2: "v_out/R_E = (v_b - v_out)*(g_m + s*C_pi)",
    7: "V_s = v_b*(1 + s*R_S*C_mu) + (v_b - v_out)*(1/r_pi + s*C_pi)",
    8: "V_s = v_out*(1 + 1/(R_E*Y))*(1 + s*R_S*C_mu) + v_out*(1/r_pi + s*C_pi)/(R_E*Y)",
    9: "V_s*R_E*Y = v_out*((R_E*Y + 1)*(1 + s*R_S*C_mu) + 1/r_pi + s*C_pi)",
    10: "A_v = R_E*Y/((R_E*Y + 1)*(1 + s*R_S*C_mu) + 1/r_pi + s*C_pi)",
    11: "A_v = R_E*(beta + 1 + s*r_pi*C_pi)/((R_E*(beta + 1 + s*r_pi*C_pi) + r_pi)*(1 + s*R_S*C_mu)"
    " + 1 + s*r_pi*C_pi)",
    12: "K = (beta + 1)*R_E/(1 + r_pi + (beta + 1)*R_E)",
    14: "b_1 = (r_pi*C_pi*(1 + R_E) + R_S*C_mu*(r_pi + (beta + 1)*R_E))/(1 + r_pi + (beta + 1)*R_E)",
    15: "b_2 = R_S*R_E*r_pi*C_pi*C_mu/(1 + r_pi + (beta + 1)*R_E)",
}

# A slip of sign in line 4, carried on; and a second one, R_S lost in line 10, in what is wrong already.
WRONG_TWICE = {
    4: "v_b = v_out*(1 - 1/(R_E*Y))",
    5: "v_b - v_out = -v_out/(R_E*Y)",
    8: "V_s = v_out*(1 - 1/(R_E*Y))*(1 + s*R_S*C_mu) - v_out*R_S*(1/r_pi + s*C_pi)/(R_E*Y)",
    9: "V_s*R_E*Y = v_out*((R_E*Y - 1)*(1 + s*R_S*C_mu) - R_S*(1/r_pi + s*C_pi))",
    10: "A_v = R_E*Y/((R_E*Y - 1)*(1 + s*R_S*C_mu) - (1/r_pi + s*C_pi))",
    11: "A_v = R_E*(beta + 1 + s*r_pi*C_pi)/((R_E*(beta + 1 + s*r_pi*C_pi) - r_pi)*(1 + s*R_S*C_mu)"
    " - (1 + s*r_pi*C_pi))",
    12: "K = (beta + 1)*R_E/(R_E*(beta + 1) - r_pi - 1)",
}


def lines(slips: dict[int, str]) -> list[str]:
    """Give the derivation with slips in it."""
    return [slips.get(number, line) for number, line in enumerate(RIGHT, 1)]
