"""Impedances at the ports against closed forms, and what is said where there are none."""

import cmath
import math
from dataclasses import replace
from fractions import Fraction

import pytest
from compared_stages import (
    BANDED,
    HIGH_PASS,
    INVERTING,
    LOW_PASS,
    OP_AMP,
    RESONATOR,
    TRANSIMPEDANCE,
    compared,
    stage,
)

import derive.compare.ports as ports
from derive.check.judge import check
from derive.expressions.text import to_text
from derive.expressions.tree import Name

# A bipolar stage with the emitter at ground: g_m = 40 mS, r_pi = 2.5 kΩ, r_o = 50 kΩ.
COMMON_EMITTER = """
[sheet]
title = "Common emitter"
[drives]
V_s = { voltage = ["in", "gnd"] }
[parts]
R_S = { resistor = "500R", between = ["in", "b"] }
R_B = { resistor = "10k", between = ["b", "gnd"] }
Q1 = { bipolar = true, base = "b", collector = "out", emitter = "gnd", g_m = "40 mS", r_pi = "2.5 kΩ", r_o = "50 kΩ" }
R_C = { resistor = "5k", between = ["out", "gnd"] }
[find.A_v]
voltage = "out"
per = "V_s"
"""
FOLLOWER = COMMON_EMITTER.replace(
    'collector = "out", emitter = "gnd"', 'collector = "gnd", emitter = "out"'
)


def together(*resistances):
    return 1 / sum(Fraction(1) / resistance for resistance in resistances)


def test_common_emitter_shows_its_base_and_its_collector():
    found = stage(COMMON_EMITTER)
    at_base = together(10_000, 2_500)
    assert found.input.level.exact == 500 + at_base
    assert (found.past_source.resistor, found.past_source.level.exact) == ("R_S", at_base)
    assert found.output.level.exact == together(5_000, 50_000)
    assert found.gain.exact == -Fraction(40, 1000) * together(5_000, 50_000) * at_base / (500 + at_base)


def test_follower_raises_its_load_and_divides_its_source():
    found = stage(FOLLOWER)
    load, g_m = together(5_000, 50_000), Fraction(40, 1000)
    beta = g_m * 2500
    at_base = 2500 + (beta + 1) * load
    assert found.past_source.level.exact == together(10_000, at_base)
    source = together(500, 10_000)
    assert found.output.level.exact == together(load, (2500 + source) / (beta + 1))


def test_sources_at_the_ports_are_derived_in_symbols():
    found = stage(BANDED)
    assert to_text(found.input.result.solution.form.gain) == "R_S + R_L"
    assert found.input.level.exact == 10_000
    assert found.output.level.exact == 900
    assert "V_s taken out" in found.input.says
    assert "load" in found.input.says
    assert "all drives at zero" in found.output.says


def test_at_mid_band_a_virtual_ground_leaves_the_resistor_before_it():
    found = stage(INVERTING)
    assert (found.input.level.exact, found.past_source.level.exact) == (2000, 0)
    assert found.output.level.exact == 0


def test_an_input_that_takes_no_current_is_infinite_and_says_why():
    found = stage(OP_AMP)
    assert math.isinf(found.input.level.magnitude)
    assert found.input.result is None
    assert "no part lets a current flow at node in" in found.input.remark


def test_a_capacitor_is_infinite_at_zero_frequency_and_nothing_far_above():
    low, high = stage(LOW_PASS), stage(HIGH_PASS)
    assert math.isinf(low.input.level.magnitude)
    assert low.past_source is None
    assert low.output.level.exact == 1000
    assert high.input.level.exact == 1000
    assert high.output.level.exact == 0


def test_at_resonance_only_the_resistor_is_left():
    found = stage(RESONATOR)
    assert found.input.level.magnitude == pytest.approx(100, rel=1e-9)
    assert found.input.level.degrees == pytest.approx(0, abs=1e-6)
    assert found.output.level.magnitude == pytest.approx(0, abs=1e-6)


def test_beside_resonance_the_impedance_has_an_angle():
    # Worked in full with a source resistor, so that mid-band is at f_0 and the load is 1 kΩ ∥ 1 nF there.
    text = RESONATOR.replace("[find.H]", 'C_2 = { capacitor = "1n", between = ["out", "gnd"] }\n[find.H]')
    found = stage(text)
    s = 2j * math.pi * found.at_hertz
    load = 1 / (1 / 100 + s * 1e-9)
    expected = s * 10e-3 + 1 / (s * 10e-9) + load
    assert found.input.level.magnitude == pytest.approx(abs(expected), rel=1e-6)
    assert found.input.level.degrees == pytest.approx(math.degrees(cmath.phase(expected)), abs=1e-4)


def test_a_current_drive_sees_what_is_between_its_nodes():
    found = stage(TRANSIMPEDANCE)
    assert found.input.level.exact == found.output.level.exact == 4000
    assert found.past_source is None


def test_other_drives_are_at_zero():
    text = LOW_PASS.replace("[parts]", 'V_2 = { voltage = ["y", "gnd"] }\n[parts]').replace(
        'C_1 = { capacitor = "10n", between = ["out", "gnd"] }',
        'R_2 = { resistor = "3k", between = ["out", "y"] }',
    )
    assert stage(text).input.level.exact == 4000
    assert stage(text).output.level.exact == 750


def test_several_drives_at_work_have_no_single_impedance():
    text = LOW_PASS.replace("[parts]", 'V_2 = { voltage = ["y", "gnd"] }\n[parts]').replace(
        'between = ["out", "gnd"]', 'between = ["out", "y"]'
    )
    text = text.replace('per = "V_s"', 'per = { V_s = "1/2", V_2 = "-1/2" }')
    found = stage(text)
    assert found.input.level is None
    assert "several drives" in found.input.remark


def test_a_drive_whose_current_is_sensed_is_not_taken_out():
    text = LOW_PASS.replace(
        "[find.H]", 'F_1 = { current_gain = "2", flows = ["out", "gnd"], senses = "V_s" }\n[find.H]'
    )
    found = stage(text)
    assert found.input.level is None
    assert found.input.remark.startswith("F_1 senses the current of V_s")


def test_the_output_of_a_current_is_seen_at_the_ends_of_its_part():
    text = LOW_PASS.replace('C_1 = { capacitor = "10n"', 'R_2 = { resistor = "3k"').replace(
        'voltage = "out"\nper', 'current = "R_2"\nper'
    )
    found = stage(text)
    assert found.output.level.exact == 750
    assert "R_2 itself" in found.output.says


def test_a_part_may_bear_the_name_of_an_impedance():
    text = BANDED.replace("R_L", "Z_in").replace("R_S", "Z_out")
    found = stage(text)
    assert (found.input.level.exact, found.output.level.exact) == (10_000, 900)


def test_a_wrong_impedance_fails_its_checks(monkeypatch):
    def twisted(solution, **more):
        return check(replace(solution, form=replace(solution.form, gain=Name("R_S"))), **more)

    monkeypatch.setattr(ports, "check", twisted)
    (found,) = compared.__wrapped__(BANDED).stages
    assert found.outcome.passed
    assert not found.passed
