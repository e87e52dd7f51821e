"""Closed forms of poles and zeros: the textbook's, to the letter where they are short."""

from math import sqrt

import pytest
from estimated import COMMON_EMITTER, SERIES_RLC, said_of, sections
from road import equal

from derive.expressions.text import to_text


def form(said, name):
    (found,) = [one for one in said.closed_forms if one.name == name]
    return found


def names(said):
    return [one.name for one in said.closed_forms]


def test_the_pole_of_one_section_is_1_over_rc():
    pole = form(said_of(sections(1)), "omega_p1")
    assert to_text(pole.readable) == "1/(R_1*C_1)"
    assert (pole.of, pole.value, pole.says) == ("pole", 1e6, "left half-plane pole")


def test_the_zero_of_a_common_emitter_stage_is_named_as_in_the_right_half_plane():
    zero = form(said_of(COMMON_EMITTER), "omega_z1")
    assert to_text(zero.readable) == "g_m/C_mu"
    assert zero.value == pytest.approx(0.04 / 2e-12)
    assert zero.says == "right half-plane zero"


def test_a_complex_pair_is_given_by_omega_0_and_q():
    said = said_of(SERIES_RLC % "500 ohm")
    assert names(said) == ["omega_0", "Q"]
    omega, quality = said.closed_forms
    assert to_text(omega.readable) == "1/sqrt(L_1*C_1)"
    assert omega.value == pytest.approx(1e6)
    # Q = (1/R)·√(L/C): textbook.
    assert to_text(quality.readable) == "sqrt(L_1/C_1)/R_1"
    assert quality.value == pytest.approx(2)
    assert omega.says == "complex pair of poles in the left half-plane: Q is above 1/2"


def test_two_real_poles_are_given_by_the_formula_where_it_is_short():
    said = said_of(SERIES_RLC % "5k")
    assert names(said) == ["omega_p1", "omega_p2"]
    root = sqrt(25e-12 - 4e-12)
    for pole, value in zip(said.closed_forms, (2 / (5e-6 + root), (5e-6 + root) / 2e-12), strict=True):
        assert pole.value == pytest.approx(value, rel=1e-12)
        assert pole.says == "left half-plane pole, one of two real ones"
    first = form(said, "omega_p1")
    assert to_text(first.readable).startswith("2/(")
    assert "sqrt(" in to_text(first.readable)


def test_two_real_poles_have_no_q_where_the_formula_is_long():
    # Common practice: ω_0 and Q are for pairs. -1/b_1 and -b_1/b_2 tell these two, with their errors.
    said = said_of(COMMON_EMITTER)
    assert names(said) == ["omega_z1"]
    assert [one.name for one in said.estimates[:2]] == ["dominant pole", "second pole"]


def test_cascaded_sections_come_apart():
    parts = (
        sections(1, 10)
        + "\n"
        + (SERIES_RLC % "500 ohm").replace('"out"', '"end"').replace('"in", "a"', '"out2", "a"')
    )
    parts += '\nA_9 = { voltage_gain = "1", output = ["out2", "gnd"], senses = ["out", "gnd"] }'
    parts = parts.replace('R_1 = { resistor = "500 ohm"', 'R_9 = { resistor = "500 ohm"')
    parts = parts.replace(
        'C_1 = { capacitor = "1 nF", between = ["end"', 'C_9 = { capacitor = "1 nF", between = ["end"'
    )
    said = said_of(parts, find='voltage = "end"\nper = "V_s"')
    # By rising magnitude; the pair at 1e6 rad/s has the same one as the section of 1 µs.
    found = {one.name: to_text(one.readable) for one in said.closed_forms}
    assert found["omega_p1"] == "1/(R_2*C_2)"
    assert "1/(R_1*C_1)" in found.values()
    assert found["omega_0"] == "1/sqrt(L_1*C_9)"
    assert found["Q"] == "sqrt(L_1/C_9)/R_9"


def test_equal_poles_of_one_quadratic_have_q_of_one_half():
    said = said_of(SERIES_RLC % "2k")
    assert form(said, "Q").value == 0.5
    assert form(said, "Q").says == "two equal real poles in the left half-plane: Q is 1/2"


def test_an_undamped_pair_has_no_q():
    parts = (
        (SERIES_RLC % "500 ohm")
        .replace("R_1 = { resistor", "L_9 = { inductor")
        .replace("500 ohm", "1 mH")
    )
    said = said_of(parts)
    assert names(said) == ["omega_0"]
    assert said.closed_forms[0].says == "pair of poles on the imaginary axis: Q is infinite"
    assert said.closed_forms[0].value == pytest.approx(1 / sqrt(2e-3 * 1e-9))


def test_real_poles_on_either_side_are_both_given():
    parts = """
    C_1 = { capacitor = "1 nF", between = ["out", "gnd"] }
    R_1 = { resistor = "1k", between = ["in", "out"] }
    C_2 = { capacitor = "1 nF", between = ["b", "gnd"] }
    R_2 = { resistor = "1k", between = ["b", "gnd"] }
    g_1 = { transconductance = "2 mS", flows = ["gnd", "b"], senses = ["out", "gnd"] }
    g_2 = { transconductance = "2 mS", flows = ["gnd", "out"], senses = ["b", "gnd"] }
    """
    said = said_of(parts)
    # (1 + s·τ)² = g_1·g_2·R_1·R_2 = 4 with τ = 1 µs: s = 1e6·(−1 ± 2).
    found = [
        (one.name, one.value, one.says.split(",")[0]) for one in said.closed_forms if one.of == "pole"
    ]
    assert found == [
        ("omega_p1", pytest.approx(1e6), "right half-plane pole"),
        ("omega_p2", pytest.approx(3e6), "left half-plane pole"),
    ]
    assert said.bandwidth is None


def test_an_unstable_pole_is_named_by_its_side():
    parts = (
        sections(1)
        + '\ng_1 = { transconductance = "2 mS", flows = ["gnd", "out"], senses = ["out", "gnd"] }'
    )
    pole = form(said_of(parts), "omega_p1")
    assert pole.says == "right half-plane pole"
    assert equal(pole.readable, "(g_1 - 1/R_1)/C_1")
    assert pole.value == pytest.approx(1e6)


def test_open_values_leave_the_value_open_and_the_side_where_it_hangs_on_them():
    parts = sections(1).replace('"1k"', '"?"')
    pole = form(said_of(parts), "omega_p1")
    assert (pole.value, pole.says) == (None, "left half-plane pole")
    parts += '\ng_1 = { transconductance = "2 mS", flows = ["gnd", "out"], senses = ["out", "gnd"] }'
    pole = form(said_of(parts), "omega_p1")
    assert pole.says == "pole on the real axis; on which side hangs on the values"
    pair = said_of((SERIES_RLC % "500 ohm").replace("1 mH", "?"))
    assert names(pair) == ["omega_0", "Q"]
    assert pair.closed_forms[0].says == "complex pair where Q is above 1/2, else two real poles"


def test_names_do_not_clash_with_the_circuit():
    parts = sections(1).replace("C_1", "omega_p1")
    assert names(said_of(parts)) == ["omega_p1_H"]
    parts = (SERIES_RLC % "500 ohm").replace("R_1", "Q")
    assert names(said_of(parts)) == ["omega_0", "Q_H"]


def test_a_pole_at_the_origin_at_these_values_is_said_so():
    parts = (
        sections(1)
        + '\ng_1 = { transconductance = "1 mS", flows = ["gnd", "out"], senses = ["out", "gnd"] }'
    )
    pole = form(said_of(parts), "omega_p1")
    assert (pole.value, pole.says) == (0, "pole at the origin at these values")
