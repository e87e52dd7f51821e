"""Operating points of textbook stages against their closed formulas, worked out here by hand."""

from fractions import Fraction
from math import sqrt

import pytest
from biased import fet, npn, other, pnp, resistor, simple, topology

from derive.bias.solve import operating_point
from derive.devices.parameters import DevicePoint
from derive.expressions.text import to_text

V_BE, BETA = Fraction("0.7"), 100
TWO_RAILS = (("V_CC", "vcc", "12"), ("V_EE", "vee", "-12"))
COMMON_EMITTER = (
    resistor("R_1", "68k", "vcc", "b"),
    resistor("R_2", "12k", "b", "gnd"),
    npn("Q1", "b", "c", "e"),
    resistor("R_C", "4k7", "vcc", "c"),
    resistor("R_E", "1k", "e", "gnd"),
    simple("capacitor", "C_1", "1u", "in", "b"),
    simple("capacitor", "C_E", "100u", "e", "gnd"),
    simple("capacitor", "C_2", "1u", "c", "out"),
    resistor("R_L", "10k", "out", "gnd"),
)


def current(point, part):
    return next(device.current for device in point.devices if device.part == part)


def test_the_divider_biased_common_emitter_stage():
    point = operating_point(topology(COMMON_EMITTER, drives=[("V_s", "voltage", ("in", "gnd"))]))
    v_bb = Fraction(12) * 12 / 80
    r_b = Fraction(68000 * 12000, 80000)
    i_c = BETA * (v_bb - V_BE) / (r_b + (BETA + 1) * 1000)
    assert point.method == "linear"
    assert current(point, "Q1") == i_c
    nodes = dict(point.nodes)
    v_e = i_c * Fraction(101, 100) * 1000
    assert nodes["e"] == v_e
    assert nodes["b"] == v_e + V_BE
    assert nodes["c"] == 12 - 4700 * i_c
    assert nodes["vcc"] == 12
    assert (nodes["in"], nodes["out"]) == (0, 0)
    assert point.devices == (
        DevicePoint("Q1", i_c, (("base", v_e + V_BE), ("collector", nodes["c"]), ("emitter", v_e))),
    )
    assert point.passed


def test_power_is_what_the_supply_delivers():
    point = operating_point(topology(COMMON_EMITTER))
    i_c, nodes = current(point, "Q1"), dict(point.nodes)
    from_supply = 12 * (i_c + (12 - nodes["b"]) / 68000)
    power = dict(point.dissipation)
    assert sum(power.values()) == from_supply
    assert power["R_E"] == nodes["e"] ** 2 / 1000
    assert power["R_L"] == 0
    assert list(power) == ["R_1", "R_2", "Q1", "R_C", "R_E", "R_L"]


def test_the_divider_is_shown_by_thevenin():
    (found,) = operating_point(topology(COMMON_EMITTER)).derivations
    texts = [to_text(step.equation) for step in found.steps]
    assert texts[-3:] == [
        "V_BB = V_CC*R_2/(R_1 + R_2)",
        "R_B = R_1 || R_2",
        "I_C = beta*(V_BB - V_BE)/(R_B + (beta + 1)*R_E)",
    ]
    assert found.result == found.steps[-1].equation
    assert not any("V_c" in text or "V_out" in text for text in texts), "what does not bear on I_C"


def test_the_pnp_stage_mirrors_the_npn_stage():
    parts = (
        resistor("R_1", "12k", "vcc", "b"),
        resistor("R_2", "68k", "b", "gnd"),
        pnp("Q1", "b", "c", "e"),
        resistor("R_C", "4k7", "c", "gnd"),
        resistor("R_E", "1k", "vcc", "e"),
    )
    point = operating_point(topology(parts))
    npn_current = current(operating_point(topology(COMMON_EMITTER)), "Q1")
    assert current(point, "Q1") == npn_current
    assert dict(point.nodes)["c"] == 4700 * npn_current
    assert point.passed
    assert point.derivations[0].steps[-1].equation.left.text == "I_C"


def test_the_emitter_follower_with_one_base_resistor():
    parts = (
        resistor("R_B", "470k", "vcc", "b"),
        npn("Q1", "b", "vcc", "e"),
        resistor("R_E", "2k2", "e", "gnd"),
    )
    point = operating_point(topology(parts))
    assert current(point, "Q1") == BETA * (12 - V_BE) / (470000 + 101 * 2200)


def test_a_pair_with_like_base_resistors_shares_the_tail_current():
    parts = (
        resistor("R_B1", "1k", "b1", "gnd"),
        resistor("R_B2", "1k", "b2", "gnd"),
        npn("Q1", "b1", "c1", "e"),
        npn("Q2", "b2", "c2", "e"),
        resistor("R_T", "10k", "e", "vee"),
        resistor("R_C1", "5k", "vcc", "c1"),
        resistor("R_C2", "5k", "vcc", "c2"),
    )
    point = operating_point(topology(parts, TWO_RAILS))
    expected = BETA * (12 - V_BE) / (1000 + 2 * 101 * 10000)
    assert current(point, "Q1") == current(point, "Q2") == expected
    assert point.passed


def test_a_pair_with_both_bases_at_ground_shares_it_by_its_like_junctions():
    parts = (
        npn("Q1", "in", "c1", "e"),
        npn("Q2", "gnd", "c2", "e"),
        resistor("R_T", "10k", "e", "vee"),
        resistor("R_C1", "5k", "vcc", "c1"),
        resistor("R_C2", "5k", "vcc", "c2"),
    )
    drives = [("V_s", "voltage", ("in", "gnd"))]
    point = operating_point(topology(parts, TWO_RAILS, drives))
    expected = Fraction(BETA, BETA + 1) * (12 - V_BE) / 10000 / 2
    assert current(point, "Q1") == current(point, "Q2") == expected
    assert not any(found.broken for found in point.derivations)


def test_a_current_mirror_has_the_ratio_of_its_saturation_currents():
    parts = (
        resistor("R_REF", "10k", "vcc", "m"),
        npn("Q1", "m", "m", "gnd", I_S="1 fA"),
        npn("Q2", "m", "c2", "gnd", I_S="3 fA"),
        resistor("R_L", "1k", "vcc", "c2"),
    )
    point = operating_point(topology(parts))
    reference = (12 - V_BE) / 10000
    # The reference carries I_C1 and both base currents, 1 + 3 parts.
    first = reference / (1 + Fraction(4, BETA))
    assert current(point, "Q1") == first
    assert current(point, "Q2") == 3 * first
    # V_BE by the law is kT/q·ln(I/I_S), here somewhat below 0.7 V: the currents stay near.
    assert all(check.passed and check.difference for check in point.newton)


def test_two_direct_coupled_stages():
    parts = (
        *COMMON_EMITTER[:5],
        npn("Q2", "c", "vcc", "e2"),
        resistor("R_E2", "5k", "e2", "gnd"),
    )
    point = operating_point(topology(parts))
    first = BETA * (Fraction(9, 5) - V_BE) / (10200 + 101 * 1000)
    # Q2's base sees V_CC - R_C·I_C1 behind R_C.
    second = BETA * (12 - 4700 * first - V_BE) / (4700 + 101 * 5000)
    assert current(point, "Q1") == first
    assert current(point, "Q2") == second


def test_feedback_bias_and_an_inductor_as_load():
    parts = (
        resistor("R_F", "220k", "c", "b"),
        npn("Q1", "b", "c", "gnd"),
        resistor("R_C", "2k2", "x", "c"),
        simple("inductor", "L_1", "1m", "vcc", "x"),
    )
    point = operating_point(topology(parts))
    assert current(point, "Q1") == BETA * (12 - V_BE) / (220000 + 101 * 2200)
    assert dict(point.nodes)["x"] == 12


def test_a_diode_carries_what_the_resistor_leaves_it():
    parts = (
        resistor("R_1", "10k", "vcc", "a"),
        ("D1", "diode", {"anode": ("a",), "cathode": ("gnd",)}, {"V_F": "0.6 V"}, {}, None),
    )
    point = operating_point(topology(parts))
    assert current(point, "D1") == Fraction("11.4") / 10000
    assert dict(point.dissipation)["D1"] == Fraction("11.4") / 10000 * Fraction("0.6")


def mosfet_stage(gate_low="1M", k="2 mA/V²"):
    return (
        resistor("R_1", "1M", "vdd", "g"),
        resistor("R_2", gate_low, "g", "gnd"),
        fet("mosfet", "M1", "g", "d", "x", k=k, V_t="1 V"),
        resistor("R_S", "1k", "x", "gnd"),
        resistor("R_D", "1k", "vdd", "d"),
    )


def test_a_mosfet_with_source_resistor_by_its_quadratic():
    point = operating_point(topology(mosfet_stage(), [("V_DD", "vdd", "10")]))
    # (k/2)·R·x² + x - 4 = 0 with k·R = 2: x² + x - 4 = 0.
    overdrive = (sqrt(17) - 1) / 2
    assert point.method == "square law, closed form"
    assert float(current(point, "M1")) == pytest.approx(1e-3 * overdrive**2, rel=1e-14)
    assert float(dict(point.nodes)["x"]) == pytest.approx(overdrive**2, rel=1e-14)
    assert point.passed


def test_the_root_has_forty_digits():
    point = operating_point(topology(mosfet_stage(), [("V_DD", "vdd", "10")]))
    overdrive = 1000 * current(point, "M1") / 1
    # x² = 4 - x, so that the current c = x² in mA satisfies (4 - c)² = c.
    assert abs((4 - overdrive) ** 2 - overdrive) < Fraction(1, 10**37)


def test_a_p_channel_mosfet_mirrors_it():
    parts = (
        resistor("R_1", "1M", "g", "gnd"),
        resistor("R_2", "1M", "vdd", "g"),
        fet("mosfet", "M1", "g", "d", "x", "p-channel", k="2 mA/V²", V_t="-1 V"),
        resistor("R_S", "1k", "vdd", "x"),
        resistor("R_D", "1k", "d", "gnd"),
    )
    mirrored = operating_point(topology(parts, [("V_DD", "vdd", "10")]))
    straight = operating_point(topology(mosfet_stage(), [("V_DD", "vdd", "10")]))
    assert current(mirrored, "M1") == current(straight, "M1")
    assert dict(mirrored.nodes)["d"] == 10 - dict(straight.nodes)["d"]
    assert mirrored.passed


def test_a_jfet_biases_itself():
    parts = (
        resistor("R_G", "1M", "g", "gnd"),
        fet("jfet", "J1", "g", "d", "x", I_DSS="8 mA", V_P="-4 V"),
        resistor("R_S", "1k", "x", "gnd"),
        resistor("R_D", "2k", "vdd", "d"),
    )
    point = operating_point(topology(parts, [("V_DD", "vdd", "20")]))
    # 8 mA·(1 - 2/4)² = 2 mA, and 2 mA · 1 kΩ = 2 V.
    assert current(point, "J1") == Fraction(2, 1000)
    assert dict(point.nodes)["d"] == 16
    assert point.passed


def test_a_gate_at_a_fixed_voltage_needs_no_root():
    parts = (*mosfet_stage()[:2], fet("mosfet", "M1", "g", "d", "gnd", k="100 uA/V²", V_t="1 V"))
    parts = (*parts, mosfet_stage()[4])
    point = operating_point(topology(parts, [("V_DD", "vdd", "10")]))
    assert current(point, "M1") == Fraction(1, 20000) * 16
    assert not point.derivations[0].broken


def test_two_fets_one_after_the_other_are_both_in_closed_form():
    parts = (
        *mosfet_stage(),
        fet("mosfet", "M2", "d", "vdd", "out", k="2 mA/V²", V_t="1 V"),
        resistor("R_S2", "1k", "out", "gnd"),
    )
    point = operating_point(topology(parts, [("V_DD", "vdd", "10")]))
    assert point.method == "square law, closed form"
    first = ((sqrt(17) - 1) / 2) ** 2
    beyond = 10 - first - 1
    second = ((sqrt(1 + 4 * beyond) - 1) / 2) ** 2
    assert float(current(point, "M2")) == pytest.approx(second * 1e-3, rel=1e-13)
    assert not any(found.broken for found in point.derivations)


def test_a_mosfet_pair_is_solved_numerically():
    parts = (
        resistor("R_G", "1k", "g1", "gnd"),
        fet("mosfet", "M1", "g1", "d1", "x", k="2 mA/V²", V_t="1 V"),
        fet("mosfet", "M2", "gnd", "d2", "x", k="8 mA/V²", V_t="1 V"),
        resistor("R_T", "5k", "x", "vee"),
        resistor("R_D1", "5k", "vcc", "d1"),
        resistor("R_D2", "2k", "vcc", "d2"),
    )
    point = operating_point(topology(parts, TWO_RAILS))
    assert point.method == "square law, numeric"
    # Like overdrive: currents as 1 to 4, 5·1 mA·x² through 5 kΩ, and 1 + x + 25·x² = 12.
    overdrive = (sqrt(1 + 4 * 25 * 11) - 1) / 50
    assert float(current(point, "M1")) == pytest.approx(1e-3 * overdrive**2, rel=1e-14)
    assert current(point, "M2") == 4 * current(point, "M1")
    assert point.derivations[0].steps == ()
    assert "Newton" in point.derivations[0].says


def test_a_bipolar_stage_behind_a_jfet():
    parts = (
        resistor("R_G", "1M", "g", "gnd"),
        fet("jfet", "J1", "g", "b", "x", I_DSS="8 mA", V_P="-4 V"),
        resistor("R_S", "1k", "x", "gnd"),
        resistor("R_D", "1k", "vcc", "b"),
        pnp("Q1", "b", "c", "e"),
        resistor("R_E", "1k", "vcc", "e"),
        resistor("R_C", "1k", "c", "gnd"),
    )
    point = operating_point(topology(parts))
    assert current(point, "J1") == Fraction(2, 1000)
    # R_D carries 2 mA less the base current: 1k·(2 mA - I_B) = V_BE + 1k·101·I_B.
    assert current(point, "Q1") == BETA * (2 - V_BE) / (1000 + 101 * 1000)
    assert point.method == "square law, closed form"
    assert point.passed


def test_an_op_amp_holds_a_current():
    parts = (
        resistor("R_1", "10k", "vcc", "p"),
        resistor("R_2", "2k", "p", "gnd"),
        other("ideal_opamp", "U1", output=("b",), inputs=("p", "e")),
        npn("Q1", "b", "c", "e"),
        resistor("R_E", "1k", "e", "gnd"),
        resistor("R_C", "1k", "vcc", "c"),
    )
    point = operating_point(topology(parts))
    assert current(point, "Q1") == Fraction(2, 1000) * Fraction(100, 101)
    assert dict(point.nodes)["b"] == 2 + V_BE


def test_an_op_amp_with_finite_gain_at_dc():
    parts = (
        other(
            "opamp",
            "U1",
            parameters={"A_0": "1000", "f_unity": "1 MHz"},
            output=("b",),
            inputs=("p", "e"),
        ),
        resistor("R_1", "10k", "vcc", "p"),
        resistor("R_2", "2k", "p", "gnd"),
        npn("Q1", "b", "vcc", "e"),
        resistor("R_E", "1k", "e", "gnd"),
    )
    point = operating_point(topology(parts))
    # 1000·(2 - v_e) = v_e + 0.7
    assert dict(point.nodes)["e"] == (2000 - V_BE) / 1001


def test_a_current_source_between_capacitors_and_a_dead_resistor_do_no_harm():
    parts = (
        *COMMON_EMITTER,
        simple("capacitor", "C_3", "1n", "in", "y"),
        resistor("R_Y", "1k", "y", "z"),
        simple("capacitor", "C_4", "1n", "z", "gnd"),
    )
    drives = [("I_s", "current", ("gnd", "in"))]
    point = operating_point(topology(parts, drives=drives))
    assert current(point, "Q1") == current(operating_point(topology(COMMON_EMITTER)), "Q1")
    assert "y" not in dict(point.nodes)
    assert dict(point.dissipation)["R_Y"] == 0


def test_the_current_of_an_inductor_may_be_sensed():
    parts = (
        simple("inductor", "L_1", "1m", "vcc", "a"),
        resistor("R_1", "10k", "a", "gnd"),
        other("current_gain", "F", "2", senses_part="L_1", flows=("gnd", "b")),
        resistor("R_B", "1k", "b", "gnd"),
        npn("Q1", "b", "vcc", "e"),
        resistor("R_E", "1k", "e", "gnd"),
    )
    point = operating_point(topology(parts))
    # 2 · 1.2 mA into 1 kΩ: 2.4 V behind 1 kΩ.
    assert current(point, "Q1") == BETA * (Fraction("2.4") - V_BE) / (1000 + 101 * 1000)


def test_what_is_given_needs_no_solving():
    given = npn("Q1", "b", "c", "e", I_C="1 mA")
    assert operating_point(topology((given, *COMMON_EMITTER[3:5]))) is None
    assert operating_point(topology((resistor("R_1", "1k", "vcc", "gnd"),))) is None
    small_signal = npn("Q1", "b", "c", "e", beta=None, V_BE=None, g_m="40 mS")
    assert operating_point(topology((small_signal,), supplies=())) is None


def test_a_given_current_without_beta_stands_for_its_device():
    parts = (
        *COMMON_EMITTER[:5],
        npn("Q2", "c", "vcc", "e2", beta=None, I_C="0.5 mA"),
        resistor("R_E2", "5k", "e2", "gnd"),
    )
    point = operating_point(topology(parts))
    assert dict(point.nodes)["e2"] == Fraction("2.5")
    assert [check.part for check in point.newton] == ["Q1"]
    assert [found.part for found in point.derivations] == ["Q1"]
