"""The common-emitter stage against its textbook band circuits.

Source: Sedra and Smith, Microelectronic Circuits; Gray and Meyer, Analysis and Design of Analog
Integrated Circuits; from memory.
"""

from dataclasses import replace
from fractions import Fraction

import pytest
from band_circuits import (
    CE_ELEMENTS,
    CE_ROLES,
    CE_VALUES,
    C,
    R,
    circuit,
    common_emitter,
    gain,
    printed,
    solution_in,
    value,
    with_value,
)

from derive.bands.restrict import restrict
from derive.bands.wiring import with_nodes
from derive.check.judge import check

R_S = "(R_S || R_1 || R_2 || r_pi)"
R_L = "(R_C || R_L || r_o)"
K_MID = f"-g_m*{R_L}*(R_1 || R_2 || r_pi)/(R_S + (R_1 || R_2 || r_pi))"


def says(band):
    return {(change.kind, change.subject): change.says for change in band.changes}


def test_mid_band_gain():
    constant, power, numerator, denominator = printed(solution_in(common_emitter(), "mid"), CE_VALUES)
    assert constant == value(K_MID, CE_VALUES)
    assert (power, numerator, denominator) == (0, [1], [1])


def test_high_band_has_the_pole_pair_and_the_zero():
    constant, power, numerator, denominator = printed(solution_in(common_emitter(), "high"), CE_VALUES)
    assert constant == value(K_MID, CE_VALUES)
    assert power == 0
    assert numerator == [1, value("-C_mu/g_m", CE_VALUES)]
    assert denominator == [
        1,
        value(f"{R_S}*(C_pi + C_mu*(1 + g_m*{R_L})) + {R_L}*C_mu", CE_VALUES),
        value(f"{R_S}*{R_L}*C_pi*C_mu", CE_VALUES),
    ]


@pytest.mark.parametrize("merge", [True, False])
def test_low_band_of_the_bypassed_stage_has_the_zero_of_the_emitter_and_its_pole(merge):
    gone = {"C_1": ("x", "b"), "C_2": ("c", "out"), "r_o": ("c", "e")}
    elements = [e for e in CE_ELEMENTS if e.name not in ("C_1", "C_2", "Q1.r_o")]
    values = {name: text for name, text in CE_VALUES.items() if name not in gone}
    joined = {"x": "b", "out": "c"}
    moved = [_moved(element, joined) for element in elements]
    stage = circuit(moved, values, [r for r in CE_ROLES if r[0] not in gone], supplies=(("V_CC", "vcc"),))
    stage = _asking(stage, "c")
    constant, power, numerator, denominator = printed(solution_in(stage, "low", merge=merge), values)
    assert power == 0
    assert numerator == [1, value("R_E*C_E", values)]
    seen = "(R_E || ((r_pi + (R_S || R_1 || R_2))/(1 + g_m*r_pi)))"
    assert denominator == [1, value(f"C_E*{seen}", values)]
    # Far below, the emitter resistor degenerates the stage.
    source = "(R_1 || R_2)/(R_S + (R_1 || R_2))"
    beta = "g_m*r_pi"
    assert constant == value(
        f"-{source}*{beta}*(R_C || R_L)/((R_S || R_1 || R_2) + r_pi + ({beta} + 1)*R_E)", values
    )


def _moved(element, names):
    return with_nodes(element, lambda node: names.get(node, node))


def _asking(stage, node):
    return replace(stage, topology=replace(stage.topology, finds=(gain(node),)))


def test_the_sum_of_short_circuit_rates_is_exact_in_the_low_band():
    """The coefficient ratio b_2/b_3 is the sum of 1/(R_i C_i), the other capacitors shorted."""
    values = {name: text for name, text in CE_VALUES.items() if name != "r_o"}
    stage = circuit(
        [e for e in CE_ELEMENTS if e.name != "Q1.r_o"], values, CE_ROLES, supplies=(("V_CC", "vcc"),)
    )
    _, power, _, denominator = printed(solution_in(stage, "low"), values)
    assert (power, len(denominator)) == (2, 4)
    rates = (
        "1/(C_1*(R_S + (R_1 || R_2 || r_pi)))"
        " + 1/(C_E*(R_E || ((r_pi + (R_S || R_1 || R_2))/(1 + g_m*r_pi))))"
        " + 1/(C_2*(R_C + R_L))"
    )
    assert denominator[2] / denominator[3] == value(rates, values)


def test_every_change_has_its_reason():
    assert says(restrict(common_emitter(), "mid", merge=False)) == {
        ("signal ground", "V_CC"): "node vcc is signal ground: a supply holds its voltage; "
        "R_1 and R_C then go to ground",
        ("short", "C_1"): "short: coupling capacitor, its reactance is small from mid-band up; "
        "node b is now node x",
        ("open", "C_pi"): "open: device capacitance, acts at high frequency only",
        ("open", "C_mu"): "open: device capacitance, acts at high frequency only",
        ("short", "C_E"): "short: bypass capacitor, its reactance is small from mid-band up; "
        "node e is now signal ground",
        ("short", "C_2"): "short: coupling capacitor, its reactance is small from mid-band up; "
        "node out is now node c",
        ("left out", "R_E"): "left out: shorted by C_E",
    }
    assert [key for key in says(restrict(common_emitter(), "low", merge=False))] == [
        ("signal ground", "V_CC"),
        ("open", "C_pi"),
        ("open", "C_mu"),
    ]


def test_a_parasitic_capacitor_of_the_users_own_is_named_so():
    stage = circuit(
        (R("R_1", "gen", "out"), C("C_s", "out", "gnd"), R("R_2", "out", "gnd")),
        {"R_1": "1000", "C_s": "1/1000000000000", "R_2": "50"},
        (("C_s", "parasitic"),),
    )
    assert says(restrict(stage, "mid")) == {
        ("open", "C_s"): "open: parasitic capacitor, acts at high frequency only"
    }


def test_symbols_of_what_vanished_are_dropped():
    narrowed = restrict(common_emitter(), "mid")
    assert [symbol.name for symbol in narrowed.unmerged.symbols] == [
        "R_S", "R_1", "R_2", "r_pi", "g_m", "r_o", "R_C", "R_L",
    ]  # fmt: skip
    assert [symbol.name for symbol in narrowed.circuit.symbols] == [
        "R_S",
        "R_1_2",
        "r_pi",
        "g_m",
        "R_C_L_o",
    ]
    assert narrowed.nodes == (("b", "x"), ("vcc", "gnd"), ("e", "gnd"), ("out", "c"))


def test_roads_pass_in_every_band():
    for band in ("low", "mid", "high", "full"):
        verdicts = check(
            solution_in(common_emitter(), band), lcapy=band in ("mid", "high"), lcapy_seconds=60
        )
        assert [v.name for v in verdicts if v.passed is False] == []
        assert sum(v.passed is True for v in verdicts) >= 6


def test_a_value_left_open_leaves_the_merged_value_open():
    merged = restrict(with_value(common_emitter(), "R_2", None), "mid").circuit
    values = {symbol.name: symbol.value for symbol in merged.symbols}
    assert values["R_1_2"] is None
    assert values["R_C_L_o"] == 1 / (Fraction(1, 3300) + Fraction(1, 10000) + Fraction(1, 80000))
