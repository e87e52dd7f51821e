from dataclasses import replace
from fractions import Fraction

import pytest
from band_circuits import (
    CE_VALUES,
    OUTPUT,
    C,
    R,
    circuit,
    common_emitter,
    current,
    gain,
    gm,
    impedance,
    printed,
    solution_in,
    value,
)

from derive.bands.restrict import restrict
from derive.check.verdict import Outcome, Result
from derive.devices.elements import CurrentGain
from derive.errors import InputError
from derive.expressions.text import to_text
from derive.quantities.dimension import CAPACITANCE, RATIO, RESISTANCE
from derive.quantities.symbol import Symbol
from derive.sheet.ledger import ledger

LADDER = (
    R("R_1", "gen", "a"),
    R("R_2", "a", "b"),
    R("R_3", "b", "out"),
    R("R_4", "out", "gnd"),
    R("R_5", "out", "gnd"),
)
LADDER_VALUES = {"R_1": "100", "R_2": "220", "R_3": "330", "R_4": "470", "R_5": "560"}


def merged(stage, band="full"):
    narrowed = restrict(stage, band)
    return {item.name: to_text(item.definition) for item in narrowed.definitions}


def refusals(stage, band="full"):
    return {
        change.subject: change.says
        for change in restrict(stage, band).changes
        if change.kind == "merge" and "not used" in change.says
    }


def ladder(merges=(("R_x", ("R_4", "R_5")),), finds=OUTPUT, elements=LADDER, values=LADDER_VALUES):
    return circuit(elements, values, merges=merges, finds=finds)


def test_nothing_is_merged_in_a_circuit_of_primitive_parts_alone():
    stage = ladder(merges=())
    narrowed = restrict(stage, "full")
    assert narrowed.circuit == narrowed.unmerged == stage
    assert (narrowed.changes, narrowed.definitions, narrowed.nodes) == ((), (), ())


def test_parallel_and_series_resistors_get_a_name_by_rule():
    assert merged(ladder()) == {"R_x": "R_4 || R_5", "R_1_2_3_s": "R_1 + R_2 + R_3"}
    changes = {change.subject: change.says for change in restrict(ladder(), "full").changes}
    assert changes == {
        "R_x": "merged: R_4 and R_5 in parallel, between node out and signal ground",
        "R_1_2_3_s": "merged: R_1, R_2 and R_3 in series, between node gen and node out",
    }


def test_the_merged_part_stands_in_the_circuit_with_its_exact_value():
    narrowed = restrict(ladder(), "full")
    symbols = {symbol.name: symbol for symbol in narrowed.circuit.symbols}
    assert list(symbols) == ["R_1_2_3_s", "R_x"]
    assert symbols["R_1_2_3_s"].value == 650
    assert symbols["R_x"].value == Fraction(470 * 560, 470 + 560)
    assert symbols["R_x"].dimension == RESISTANCE
    assert symbols["R_x"].origin == "merged: R_4 || R_5"
    assert [(e.name, e.part, e.between) for e in narrowed.circuit.elements] == [
        ("R_1_2_3_s", "R_1_2_3_s", ("gen", "out")),
        ("R_x", "R_x", ("out", "gnd")),
    ]
    assert len(narrowed.unmerged.elements) == 5


@pytest.mark.parametrize("finds", [(gain("b"),), (gain("out"), impedance("b")), (gain("out", "b"),)])
def test_a_node_that_is_wanted_is_not_merged_away(finds):
    assert merged(ladder(finds=finds))["R_1_2_s"] == "R_1 + R_2"


def test_a_node_that_is_sensed_or_met_by_another_part_is_not_merged_away():
    sensing = (*LADDER, gm("g_m", ("out", "gnd"), ("b", "gnd"), "Q1"))
    met = (*LADDER, C("C_1", "b", "gnd"))
    assert merged(ladder(elements=sensing, values=LADDER_VALUES | {"g_m": "1/50"}))["R_1_2_s"]
    assert merged(ladder(elements=met, values=LADDER_VALUES | {"C_1": "1/1000"}))["R_1_2_s"]


def test_a_part_whose_current_is_wanted_stays_by_itself():
    stage = ladder(merges=(("R_x", ("R_4", "R_5")),), finds=(current("R_4"),))
    assert "R_x" not in merged(stage)
    assert refusals(stage) == {"R_x": "not used in this band: the current of R_4 is sensed or wanted"}


def test_a_part_whose_current_is_sensed_stays_by_itself():
    sensing = CurrentGain("F_1", "F_1", ("out", "gnd"), "R_2", "k_1")
    stage = ladder(elements=(*LADDER, sensing))
    stage = replace(stage, symbols=(*stage.symbols, Symbol("k_1", RATIO, Fraction(2), "part F_1")))
    # R_1 and R_3 are still in series with it, but not with each other.
    assert merged(stage) == {"R_x": "R_4 || R_5"}


def test_a_mixed_combination_is_one_definition():
    elements = (
        R("R_1", "gen", "out"),
        R("R_2", "out", "a"),
        R("R_3", "a", "gnd"),
        R("R_4", "out", "gnd"),
    )
    values = {"R_1": "100", "R_2": "220", "R_3": "330", "R_4": "470"}
    by_rule = circuit(elements, values, supplies=(("V_CC", "vcc"),))
    assert merged(by_rule) == {"R_2_3_4_m": "(R_2 + R_3) || R_4"}
    by_user = circuit(elements, values, merges=(("R_L", ("R_2", "R_3", "R_4")),))
    assert merged(by_user) == {"R_L": "(R_2 + R_3) || R_4"}


def test_the_users_names_may_build_on_one_another_in_any_order():
    merges = (("R_Lp", ("R_B", "R_6")), ("R_B", ("R_4", "R_5")))
    stage = ladder(
        merges, elements=(*LADDER, R("R_6", "out", "gnd")), values=LADDER_VALUES | {"R_6": "680"}
    )
    narrowed = restrict(stage, "full")
    assert [item.name for item in narrowed.definitions][:2] == ["R_B", "R_Lp"]
    assert merged(stage)["R_Lp"] == "R_B || R_6"
    assert narrowed.definitions[1].parts == ("R_B", "R_6")
    exact = {symbol.name: symbol.value for symbol in narrowed.circuit.symbols}
    assert exact["R_Lp"] == 1 / (Fraction(1, 470) + Fraction(1, 560) + Fraction(1, 680))
    assert "R_B" not in exact


def test_what_the_user_named_is_not_merged_further_by_rule():
    stage = common_emitter(merges=(("R_B", ("R_1", "R_2")), ("R_Lp", ("R_C", "R_L", "r_o"))))
    assert merged(stage, "mid") == {"R_B": "R_1 || R_2", "R_Lp": "R_C || R_L || r_o"}
    solution = solution_in(stage, "mid")
    assert to_text(solution.form.gain) == "-g_m*R_B*r_pi*R_Lp/(R_S*R_B + R_S*r_pi + R_B*r_pi)"


def test_a_merge_that_is_none_in_a_band_is_not_used_there_and_said_so():
    stage = common_emitter(merges=(("R_Lp", ("R_C", "R_L")),))
    assert refusals(stage, "low") == {
        "R_Lp": "not used in this band: R_C and R_L are neither in parallel nor in series"
    }
    assert merged(stage, "mid")["R_Lp"] == "R_C || R_L"


@pytest.mark.parametrize(
    ("parts", "why"),
    [
        (("R_4", "R_9"), "R_9 is not in the circuit"),
        (("R_1", "R_4"), "R_1 and R_4 are neither in parallel nor in series"),
        (("R_4", "C_1"), "they are of two kinds"),
        (("R_4", "g_m"), "g_m is neither a resistor nor a capacitor"),
        (("C_1", "C_2"), "they have different roles"),
    ],
)
def test_a_merge_of_what_does_not_go_together_is_not_used(parts, why):
    elements = (
        *LADDER,
        C("C_1", "out", "gnd"),
        C("C_2", "out", "gnd"),
        gm("g_m", ("out", "gnd"), ("a", "gnd"), "Q1"),
    )
    values = LADDER_VALUES | {"C_1": "1/1000", "C_2": "1/2000", "g_m": "1/40"}
    stage = circuit(elements, values, (("C_2", "coupling"),), merges=(("X_1", parts),))
    assert refusals(stage) == {"X_1": f"not used in this band: {why}"}


def test_capacitors_are_merged_only_where_the_user_names_them():
    elements = (R("R_1", "gen", "out"), C("C_a", "out", "gnd"), C("C_b", "gnd", "out"))
    values = {"R_1": "1000", "C_a": "1/1000000", "C_b": "3/1000000"}
    assert merged(circuit(elements, values, supplies=(("V_CC", "vcc"),))) == {}
    named = circuit(elements, values, merges=(("C_t", ("C_a", "C_b")),))
    assert merged(named) == {"C_t": "C_a + C_b"}
    symbol = restrict(named, "full").circuit.symbols[-1]
    assert (symbol.name, symbol.dimension, symbol.value) == ("C_t", CAPACITANCE, Fraction(4, 10**6))
    chain = (R("R_1", "gen", "out"), C("C_a", "out", "m"), C("C_b", "gnd", "m"))
    assert merged(circuit(chain, values, merges=(("C_t", ("C_a", "C_b")),))) == {"C_t": "C_a || C_b"}


def test_a_merged_name_that_is_taken_is_an_input_error_with_its_line():
    with pytest.raises(InputError, match="merge R_1") as caught:
        restrict(ladder(merges=(("R_1", ("R_4", "R_5")),)), "full")
    assert caught.value.where == "hand.toml:7"


def test_a_name_by_rule_never_collides():
    elements = (*LADDER[3:], R("R_4_5", "gen", "out"))
    values = {"R_4": "470", "R_5": "560", "R_4_5": "100"}
    stage = circuit(elements, values, supplies=(("V_CC", "vcc"),))
    assert merged(stage) == {"R_4_5_p": "R_4 || R_5"}


def test_many_parts_have_a_short_name():
    elements = (R("R_0", "gen", "out"), *(R(f"R_{k}", "out", "gnd") for k in range(1, 8)))
    stage = circuit(elements, {f"R_{k}": "100" for k in range(8)}, supplies=(("V_CC", "vcc"),))
    assert list(merged(stage)) == ["R_1_to_7"]


def test_the_ledger_defines_merged_names_in_the_parts_own():
    stage = common_emitter(merges=(("R_B", ("R_1", "R_2")), ("R_i", ("R_B", "r_pi"))))
    solution = solution_in(stage, "mid")
    (result,) = ledger(Outcome(stage, (Result(solution, ()),)))["results"]
    assert result["band"] == "mid"
    assert [name for name, _ in result["definitions"]] == ["R_B", "R_i", "R_C_L_o"]
    expressions = dict(result["definitions"])
    assert expressions["R_B"] == "1/(1/R_1 + 1/R_2)"
    for name, text in (("R_i", "R_1 || R_2 || r_pi"), ("R_C_L_o", "R_C || R_L || r_o")):
        assert "||" not in expressions[name]
        assert value(expressions[name], CE_VALUES) == value(text, CE_VALUES)


def test_merging_changes_no_response():
    for band in ("low", "mid", "high"):
        one = printed(solution_in(common_emitter(), band), CE_VALUES)
        other = printed(solution_in(common_emitter(), band, merge=False), CE_VALUES)
        assert one == other
