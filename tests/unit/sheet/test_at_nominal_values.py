"""The line of nominal values: the quantity in its pass band, K only as the factor that it is."""

from __future__ import annotations

import math

import pytest
from sheet_stages import COMMON_EMITTER, FIND, HEAD, HIGH_PASS, LOW_PASS, outcome_of, shown, view_of

from derive.expressions.tree import Name
from derive.sheet.final import final, is_long
from derive.sheet.plain import line_text, summary_rows
from derive.sheet.sections import glance, normal_form

# A series LCR tuned to 1/(2π·√(1 mH · 1 µF)) = 5.0329 kHz, where the whole voltage is across R_1.
TUNED = (
    HEAD
    + 'L_1 = { inductor = "1 mH", between = ["in", "a"] }\n'
    + 'C_1 = { capacitor = "1u", between = ["a", "out"] }\n'
    + 'R_1 = { resistor = "1R", between = ["out", "gnd"] }\n'
    + FIND
)
INTEGRATOR = (
    '[sheet]\ntitle = "Integrator"\n[drives]\nI_s = { current = ["gnd", "out"] }\n[parts]\n'
    + 'C_1 = { capacitor = "1u", between = ["out", "gnd"] }\n'
    + '[find.Z]\nvoltage = "out"\nper = "I_s"\n'
)
# Three sections: b_2 and b_3 written out are long.
LADDER = (
    HEAD
    + "".join(
        f'R_{k} = {{ resistor = "{k}k", between = ["{a}", "{b}"] }}\n'
        f'C_{k} = {{ capacitor = "{k}n", between = ["{b}", "gnd"] }}\n'
        f'G_{k} = {{ resistor = "{k}k", between = ["{b}", "gnd"] }}\n'
        for k, (a, b) in enumerate((("in", "a"), ("a", "b"), ("b", "out")), 1)
    )
    + FIND
)


def nominal(topology):
    return next(line for line in shown(topology).splitlines() if line.startswith("At the nominal"))


def test_a_tuned_stage_is_told_by_its_gain_at_the_peak_and_k_by_what_it_multiplies():
    line = nominal(TUNED)
    # K = R·C = 1 µs; the peak is 1 at f_0.
    assert "|A_v| = 1 (0.00 dB) at its peak, 5.033 kHz" in line
    assert "K = 1 µs, the factor of s" in line
    assert "A_v = 1 µs" not in line
    ((_, gain, _),) = summary_rows(outcome_of(TUNED))
    assert gain == "1 at 5.033 kHz"


def test_the_peak_lies_where_a_sweep_finds_it():
    def size(hertz):
        s = 2j * math.pi * hertz
        return abs(s * 1e-6 / (1 + s * 1e-6 + s * s * 1e-9))

    sweep = [5000 + k / 10 for k in range(700)]
    assert max(sweep, key=size) == pytest.approx(5032.9, abs=0.1)


def test_an_integrator_has_its_pole_at_the_origin_and_k_is_the_factor_of_one_over_s():
    line = nominal(INTEGRATOR)
    assert ", the factor of 1/s; pole at the origin; no zeros." in line
    assert "Z has a pole at the origin." in shown(INTEGRATOR)


def test_what_lies_above_a_corner_is_still_told_by_its_level_there():
    assert "A_v = 1 (0.00 dB) far above the corner" in nominal(HIGH_PASS)
    assert "the factor of" not in nominal(HIGH_PASS)
    assert "A_v also has a zero at the origin." in shown(HIGH_PASS)


def test_a_level_at_zero_frequency_is_said_to_be_there():
    assert "A_v = 0.75 (−2.50 dB) at zero frequency" in nominal(LOW_PASS)


def test_a_constant_has_no_word_of_poles_and_zeros():
    divider = LOW_PASS.replace('C_1 = { capacitor = "1u", between = ["out", "gnd"] }\n', "")
    assert nominal(divider) == "At the nominal values A_v = 0.75 (−2.50 dB)."


def test_long_coefficients_are_left_to_the_normal_form():
    view = view_of(LADDER)
    long = {entry.name for entry in final(view).named if is_long(view, entry)}
    assert long
    assert not long & {"K", "a_1", "b_1"}
    lines = [block for section in glance.compose(view.outcome) for block in section.blocks]
    boxed = [block.content.left for block in lines if hasattr(block, "content")]
    assert not {Name(name) for name in long} & set(boxed)
    told = [line_text(block.line) for block in lines if hasattr(block, "line")]
    assert any("written out under Normal form" in line and "b_2 = " in line for line in told)
    (section,) = normal_form.compose(view)
    written = {block.content.left for block in section.blocks if hasattr(block, "content")}
    assert {Name(name) for name in long} <= written


def test_short_coefficients_stay_where_they_are():
    view = view_of(COMMON_EMITTER)
    assert not any(is_long(view, entry) for entry in final(view).named)


def test_a_long_constant_stands_in_the_box_itself():
    bridged = (
        HEAD
        + 'R_1 = { resistor = "1k", between = ["in", "a"] }\n'
        + 'R_2 = { resistor = "2k", between = ["in", "b"] }\n'
        + 'R_3 = { resistor = "3k", between = ["a", "gnd"] }\n'
        + 'R_4 = { resistor = "5k", between = ["b", "gnd"] }\n'
        + 'R_5 = { resistor = "7k", between = ["a", "b"] }\n'
        + '[find.A_v]\nvoltage = ["a", "b"]\nper = "V_s"\n'
    )
    view = view_of(bridged)
    found = final(view)
    assert found.named == ()
    assert found.equation.left == Name("A_v")
    assert found.equation.right != Name("K")
