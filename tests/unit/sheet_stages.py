"""Small stages for the tests of what a sheet says, and their results as text."""

from __future__ import annotations

from functools import cache

from derive.pipeline import derive
from derive.reading.read import parse
from derive.sheet.plain import plain_outcome
from derive.sheet.view import views

HEAD = '[sheet]\ntitle = "Stage"\n[drives]\nV_s = { voltage = ["in", "gnd"] }\n[parts]\n'
FIND = '[find.A_v]\nvoltage = "out"\nper = "V_s"\n'
Z_OUT = '[find.Z_out]\nimpedance = "out"\n'

LOW_PASS = (
    HEAD
    + 'R_1 = { resistor = "1k", between = ["in", "out"] }\n'
    + 'R_2 = { resistor = "3k", between = ["out", "gnd"] }\n'
    + 'C_1 = { capacitor = "1u", between = ["out", "gnd"] }\n'
    + FIND
)
HIGH_PASS = (
    HEAD
    + 'C_1 = { capacitor = "1u", between = ["in", "out"] }\n'
    + 'R_1 = { resistor = "1k", between = ["out", "gnd"] }\n'
    + FIND
)
RESONANT = (
    HEAD
    + 'R_1 = { resistor = "10R", between = ["in", "a"] }\n'
    + 'L_1 = { inductor = "1 mH", between = ["a", "out"] }\n'
    + 'C_1 = { capacitor = "1u", between = ["out", "gnd"] }\n'
    + FIND
)
# A common emitter stage without source resistance in its feedback, with both of its capacitances.
COMMON_EMITTER = (
    HEAD
    + 'R_S = { resistor = "1k", between = ["in", "b"] }\n'
    + 'Q1 = { bipolar = true, base = "b", collector = "out", emitter = "gnd", '
    + 'g_m = "40 mS", r_pi = "2.5k", C_pi = "20 pF", C_mu = "2 pF" }\n'
    + 'R_L = { resistor = "2k", between = ["out", "gnd"] }\n'
    + FIND
)
COUPLED = (
    HEAD
    + 'C_1 = { capacitor = "1u", between = ["in", "b"], role = "coupling" }\n'
    + 'R_B = { resistor = "10k", between = ["b", "gnd"] }\n'
    + 'R_1 = { resistor = "2k", between = ["b", "out"] }\n'
    + 'R_2 = { resistor = "5k", between = ["out", "gnd"] }\n'
    + 'C_L = { capacitor = "1n", between = ["out", "gnd"], role = "parasitic" }\n'
    + FIND
    + Z_OUT
)


@cache
def outcome_of(topology):
    """Derive a stage, once for all tests."""
    return derive(parse(topology, "stage.toml"), other_engine=False).outcome


@cache
def shown(topology, *, steps=False):
    """Give a stage's results as they are shown in a terminal."""
    return plain_outcome(outcome_of(topology), steps=steps)


def view_of(topology, name="A_v", band=None):
    """Give the view of one result."""
    return next(
        view for view in views(outcome_of(topology)) if view.name == name and band in (None, view.band)
    )
