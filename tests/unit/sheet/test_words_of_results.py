"""What the result at a glance says in words: drives taken together, zero results, bare powers of s."""

from fractions import Fraction

import pytest

from derive.pipeline import derive
from derive.reading.read import parse
from derive.sheet.figures import decibels
from derive.sheet.plain import plain_outcome

TOPOLOGY = """
[sheet]
title = "Words"
[drives]
V_1 = { voltage = ["a", "gnd"] }
V_2 = { voltage = ["b", "gnd"] }
I_s = { current = ["gnd", "c"] }
[parts]
R_1 = { resistor = "1k", between = ["a", "x"] }
R_2 = { resistor = "3k", between = ["b", "x"] }
C_1 = { capacitor = "1n", between = ["c", "gnd"] }
[find.H]
"""


def shown(find, *, steps=False):
    outcome = derive(parse(TOPOLOGY + find, "words.toml"), other_engine=False).outcome
    return plain_outcome(outcome, steps=steps)


def test_an_impedance_that_a_source_holds_at_zero_says_so():
    text = shown('impedance = "a"')
    assert "The impedance is zero for all values, H = 0: sources hold this voltage" in text


def test_a_drive_that_does_not_reach_the_output_is_said():
    text = shown('voltage = "c"\nper = "V_1"')
    assert "H = 0: what is driven does not reach what is sought." in text


def test_an_integrator_is_one_fraction():
    assert "  H = 1/(s·C_1)\n" in shown('voltage = "c"\nper = "I_s"')


def test_weights_leave_no_number_to_cancel_in_what_is_multiplied_by():
    text = shown('voltage = "x"\nper = { V_1 = "1/2", V_2 = "-1/2" }', steps=True)
    assert "times 2·R_1·R_2, multiplied out and collected." in text
    assert "/2, multiplied out" not in text


def test_a_divisor_used_in_multiplying_out_is_stated_not_to_be_zero():
    text = shown('voltage = "c"\nper = "V_1"', steps=True)
    assert "times 1/(s·C_1), multiplied out and collected. Divisor, not zero: s·C_1." in text


@pytest.mark.parametrize("ratio", [0.99998, 1.00002, 1])
def test_a_level_of_about_nothing_has_no_sign(ratio):
    assert decibels(Fraction(ratio)) == "0.00 dB"


BYPASSED = """
[sheet]
title = "Bypassed"
[drives]
V_s = { voltage = ["a", "gnd"] }
[parts]
R_1 = { resistor = "1k", between = ["a", "x"] }
R_2 = { resistor = "3k", between = ["x", "gnd"] }
C_1 = { capacitor = "1u", between = ["x", "gnd"], role = "bypass" }
R_3 = { resistor = "1k", between = ["x", "y"] }
R_4 = { resistor = "1k", between = ["y", "gnd"] }
[find.Z]
impedance = "x"
[find.Z_y]
impedance = "y"
"""


def in_band(name):
    topology = parse(f'bands = ["{name}"]\n{BYPASSED}', "words.toml")
    return plain_outcome(derive(topology, other_engine=False).outcome)


def test_an_impedance_across_a_shorted_capacitor_is_not_put_down_to_a_source():
    text = in_band("mid")
    assert "Z = 0: its two nodes are one in this circuit." in text
    assert "sources hold" not in text


def test_a_band_that_stands_alone_is_named_unless_it_keeps_every_part():
    asked = "Impedance seen between y and gnd, all drives at zero"
    assert f"{asked}; mid band.\n" in in_band("mid")
    assert f"{asked}.\n" in in_band("full")
