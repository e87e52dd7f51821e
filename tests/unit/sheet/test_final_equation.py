"""The equation in the box: explicit when short, else by names that stand below it."""

from __future__ import annotations

import re

import pytest
from sheet_stages import (
    COMMON_EMITTER,
    COUPLED,
    HIGH_PASS,
    LOW_PASS,
    RESONANT,
    outcome_of,
    shown,
    view_of,
)

from derive.expressions.unicode_text import to_unicode
from derive.expressions.walk import names_of
from derive.sheet.definitions import known_definitions
from derive.sheet.final import final
from derive.sheet.view import views


def boxed(topology, name="A_v", band=None):
    return to_unicode(final(view_of(topology, name, band)).equation)


def named(topology, name="A_v", band=None):
    found = final(view_of(topology, name, band)).named
    return {entry.name: to_unicode(entry.value) for entry in found}


def test_a_short_result_is_written_out_with_parts_in_parallel():
    assert boxed(LOW_PASS) == "A_v = R_2/(R_1 + R_2)·(1/(1 + s·C_1·(R_1 ∥ R_2)))"
    assert named(LOW_PASS) == {}


def test_a_zero_at_the_origin_and_a_pole_are_written_by_their_corner():
    assert boxed(HIGH_PASS) == "A_v = 1/(1 + ω_L/s)"
    assert named(HIGH_PASS) == {"omega_L": "1/(R_1·C_1)"}
    # 1/(2π · 1 kΩ · 1 µF)
    assert "the corner; 159.15 Hz" in shown(HIGH_PASS)
    assert "At the nominal values A_v = 1 (0.00 dB) far above the corner" in shown(HIGH_PASS)


def test_a_name_that_a_part_bears_is_not_used_for_the_corner():
    taken = HIGH_PASS.replace("R_1", "omega_L")
    assert "ω_L/s" not in boxed(taken)
    assert boxed(taken) == "A_v = s·ω_L·C_1/(1 + s·ω_L·C_1)"


def test_a_complex_pair_is_written_by_its_frequency_and_quality():
    assert boxed(RESONANT) == "A_v = 1/(1 + s/(Q·ω_0) + (s/ω_0)²)"
    assert named(RESONANT)["omega_0"] == "1/√(L_1·C_1)"
    # sqrt(L/C)/R = 31.62/10
    assert re.search(r"^ +3\.162$", shown(RESONANT), re.MULTILINE)


def test_two_real_poles_are_not_written_as_a_pair():
    assert "Q" not in boxed(RESONANT.replace("10R", "1k"))


def test_a_zero_in_the_right_half_plane_is_written_and_named_as_one():
    # The zero of a common emitter stage lies at +g_m/C_mu: common practice.
    assert "(1 − s/ω_z)" in boxed(COMMON_EMITTER, band="high")
    assert named(COMMON_EMITTER, band="high")["omega_z"] == "g_m/C_μ"
    # 40 mS/(2π · 2 pF) = 3.1831 GHz
    assert "the zero, in the right half-plane; 3.1831 GHz" in shown(COMMON_EMITTER)


def test_who_owns_the_bandwidth_stands_beside_the_first_coefficient():
    # R_S' = 1k ∥ 2.5k = 714.3 Ω: C_π sees it (14.29 ns); C_μ sees R_S'·(1 + 80) + 2k (119.7 ns).
    line = next(line for line in shown(COMMON_EMITTER).splitlines() if "134 ns" in line)
    assert line.strip() == "134 ns: C_μ 89 %, C_π 11 %"


def test_what_was_shown_before_is_referred_to():
    text = shown(COUPLED)
    assert "K is A_v in the mid band." not in text  # too short to be looked for elsewhere
    longer = COUPLED.replace(
        'R_2 = { resistor = "5k", between = ["out", "gnd"] }\n',
        'R_2 = { resistor = "5k", between = ["out", "x"] }\n'
        'A_1 = { voltage_gain = "-3", output = ["x", "gnd"], senses = ["b", "gnd"] }\n'
        'R_3 = { resistor = "7k", between = ["out", "y"] }\n'
        'A_2 = { voltage_gain = "4", output = ["y", "gnd"], senses = ["b", "gnd"] }\n',
    )
    assert " is A_v in the mid band." in shown(longer)


def test_a_result_that_is_the_same_in_two_bands_is_not_printed_twice():
    # Behind an ideal source the impedance is that of a resistor, in every band.
    behind = (
        'A_1 = { voltage_gain = "2", output = ["x", "gnd"], senses = ["b", "gnd"] }\n'
        'R_9 = { resistor = "9k", between = ["x", "y"] }\n[find.Z_y]\nimpedance = "y"\n'
    )
    text = shown(COUPLED.replace("[find.A_v]", behind + "[find.A_v]"))
    assert text.count("  Z_y = R_9\n") == 1
    assert text.count("Z_y is the same as in the mid band.") == 2


def test_the_mid_band_says_where_the_pass_band_ends():
    found = re.search(
        r"Pass band to −3 dB: from (.*) \(low band\) to (.*) \(high band\)\.", shown(COUPLED)
    )
    # C_1 sees 10k ∥ 7k = 4.118 kΩ: 38.65 Hz; C_L sees 2k ∥ 5k = 1.4286 kΩ: 111.4 kHz.
    assert found
    assert found.groups() == ("38.65 Hz", "111.4 kHz")


@pytest.mark.parametrize("topology", [LOW_PASS, HIGH_PASS, RESONANT, COMMON_EMITTER, COUPLED])
def test_every_name_in_the_box_is_a_symbol_or_stands_below_it(topology):
    for view in views(outcome_of(topology)):
        if view.result.solution.form.is_zero:
            continue
        found = final(view)
        known = {symbol.name for symbol in outcome_of(topology).circuit.symbols} | {"s", view.name}
        known |= {name for name, _ in known_definitions(view)}
        known |= {merged.name for merged in view.result.solution.band.definitions}
        for entry in found.named:
            assert set(names_of(entry.value)) <= known
        assert set(names_of(found.equation)) <= known | {entry.name for entry in found.named}
