"""Limits of the gain as a part goes to zero or infinity."""

from estimated import COMMON_EMITTER, said_of, sections
from road import equal

from derive.expressions.text import to_text
from derive.expressions.walk import substitute

DEGENERATED = """
R_S = { resistor = "1k", between = ["in", "b"] }
r_pi = { resistor = "2k5", between = ["b", "e"] }
g_m = { transconductance = "40 mS", flows = ["out", "e"], senses = ["b", "e"] }
R_E = { resistor = "100 ohm", between = ["e", "gnd"] }
R_C = { resistor = "4k7", between = ["out", "gnd"] }
"""


def limits(parts, **more):
    return {(one.symbol, one.to): one.limit for one in said_of(parts, **more).limits}


def test_a_divider_becomes_a_through_line_or_nothing():
    divider = 'R_1 = { resistor = "1k", between = ["in", "out"] }\nR_2 = { resistor = "1k", between = ["out", "gnd"] }'
    found = {key: to_text(value) for key, value in limits(divider).items()}
    assert found == {
        ("R_1", "0"): "1",
        ("R_1", "inf"): "0",
        ("R_2", "0"): "0",
        ("R_2", "inf"): "1",
    }


def test_a_degenerated_stage_tends_to_the_textbooks_forms():
    found = limits(DEGENERATED)
    # Common practice: without R_E the plain stage, with endless g_m the ratio of collector and emitter resistor.
    assert equal(found["R_E", "0"], "-g_m*r_pi*R_C/(R_S + r_pi)")
    assert equal(found["g_m", "inf"], "-R_C/R_E")
    assert found["R_C", "inf"] is None


def test_finite_limits_come_first_and_those_of_parts_without_say_not_at_all():
    said = said_of(COMMON_EMITTER)
    kinds = [one.limit is None for one in said.limits]
    assert kinds == sorted(kinds)
    assert {one.symbol for one in said.limits} == {"R_S", "r_pi", "g_m", "R_L"}


def test_a_gain_that_goes_with_a_power_of_s_has_no_line_of_limits():
    parts = """
    C_1 = { capacitor = "1 nF", between = ["in", "out"] }
    R_1 = { resistor = "1k", between = ["out", "gnd"] }
    """
    assert limits(parts) == {}
    assert limits(sections(1)) == {}


LONG_TAILED_PAIR = """
R_S1 = { resistor = "1k", between = ["in", "b1"] }
r_pi1 = { resistor = "2k5", between = ["b1", "e"] }
g_m1 = { transconductance = "40 mS", flows = ["c1", "e"], senses = ["b1", "e"] }
R_C1 = { resistor = "4k7", between = ["c1", "gnd"] }
R_S2 = { resistor = "1k", between = ["gnd", "b2"] }
r_pi2 = { resistor = "2k5", between = ["b2", "e"] }
g_m2 = { transconductance = "40 mS", flows = ["out", "e"], senses = ["b2", "e"] }
R_C2 = { resistor = "4k7", between = ["out", "gnd"] }
R_EE = { resistor = "10k", between = ["e", "gnd"] }
"""


def test_an_endless_tail_resistor_of_a_pair_has_its_line():
    found = limits(LONG_TAILED_PAIR)
    # All of one base's current comes out of the other: i·(1 + β1) into e, and β2/(1 + β2) of it through R_C2.
    wanted = "g_m2*r_pi2*R_C2*(1 + g_m1*r_pi1)/((1 + g_m2*r_pi2)*(R_S1 + r_pi1) + (1 + g_m1*r_pi1)*(R_S2 + r_pi2))"
    said = said_of(LONG_TAILED_PAIR)
    names = dict(said.definitions)
    value = substitute(found["R_EE", "inf"], {name: substitute(v, names) for name, v in names.items()})
    assert equal(value, wanted)


def test_a_gain_that_is_one_symbol_has_no_limits():
    load = 'R_T = { resistor = "1k", between = ["out", "gnd"] }'
    drives = 'I_s = { current = ["gnd", "out"] }'
    assert limits(load, drives=drives, find='impedance = "out"') == {}
    two = load + '\nR_2 = { resistor = "1k", between = ["out", "gnd"] }'
    assert limits(two, drives=drives, find='impedance = "out"') != {}


def test_coupled_coils_are_left_out():
    parts = """
    L_1 = { inductor = "1 mH", between = ["in", "gnd"] }
    L_2 = { inductor = "1 mH", between = ["out", "gnd"] }
    K_1 = { coupling = "0.5", coils = ["L_1", "L_2"] }
    R_1 = { resistor = "1k", between = ["in", "gnd"] }
    """
    assert limits(parts) == {}
