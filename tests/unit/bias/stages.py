"""Biased stages that several tests of the bias use, by name."""

from __future__ import annotations

from biased import fet, npn, pnp, resistor

TWO_RAILS = (("V_CC", "vcc", "12"), ("V_EE", "vee", "-12"))
DIVIDER = (
    resistor("R_1", "68k", "vcc", "b"),
    resistor("R_2", "12k", "b", "gnd"),
    npn("Q1", "b", "c", "e"),
    resistor("R_C", "4k7", "vcc", "c"),
    resistor("R_E", "1k", "e", "gnd"),
)
PNP = (
    resistor("R_1", "12k", "vcc", "b"),
    resistor("R_2", "68k", "b", "vee"),
    pnp("Q1", "b", "c", "e"),
    resistor("R_C", "4k7", "c", "vee"),
    resistor("R_E", "2k", "vcc", "e"),
)
COUPLED = (*DIVIDER, npn("Q2", "c", "vcc", "e2"), resistor("R_E2", "5k", "e2", "gnd"))
MIRROR = (
    resistor("R_REF", "10k", "vcc", "m"),
    npn("Q1", "m", "m", "gnd"),
    npn("Q2", "m", "c2", "gnd"),
    resistor("R_L", "2k", "vcc", "c2"),
)
MOSFET = (
    resistor("R_1", "1M", "vcc", "g"),
    resistor("R_2", "1M", "g", "gnd"),
    fet("mosfet", "M1", "g", "d", "x", k="2 mA/V²", V_t="1 V"),
    resistor("R_S", "1k", "x", "gnd"),
    resistor("R_D", "1k", "vcc", "d"),
)
GROUNDED_SOURCE = (
    resistor("R_1", "3M", "vcc", "g"),
    resistor("R_2", "1M", "g", "gnd"),
    fet("mosfet", "M1", "g", "d", "gnd", k="100 uA/V²", V_t="1 V"),
    resistor("R_D", "10k", "vcc", "d"),
)
JFET = (
    resistor("R_G", "1M", "g", "gnd"),
    fet("jfet", "J1", "g", "d", "x", I_DSS="8 mA", V_P="-4 V"),
    resistor("R_S", "1k", "x", "gnd"),
    resistor("R_D", "2k", "vcc", "d"),
)
STAGES = {
    "divider": (DIVIDER, TWO_RAILS[:1]),
    "pnp between two rails": (PNP, TWO_RAILS),
    "direct-coupled": (COUPLED, TWO_RAILS[:1]),
    "mirror": (MIRROR, TWO_RAILS[:1]),
    "mosfet": (MOSFET, TWO_RAILS[:1]),
    "grounded source": (GROUNDED_SOURCE, TWO_RAILS[:1]),
    "jfet": (JFET, TWO_RAILS[:1]),
}
