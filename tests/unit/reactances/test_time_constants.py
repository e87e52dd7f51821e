"""What capacitors and inductors see in small circuits, against forms worked by hand or from textbooks."""

from __future__ import annotations

from fractions import Fraction

import pytest
from road import circuit_of, equal, solution_of

from derive.check.judge import check
from derive.check.roads import steps
from derive.check.verdict import Solution
from derive.expressions.parse import parse_expression
from derive.expressions.text import to_text
from derive.expressions.tree import ONE, ZERO
from derive.expressions.walk import substitute
from derive.normalise.normalise import normalise
from derive.reactances.cancel import multiplied
from derive.reactances.find_time_constants import find_time_constants
from derive.readable.vocabulary import vocabulary_of

FOLLOWER = """
R_S = { resistor = "600 ohm", between = ["in", "b"] }
Q1 = { bipolar = "small", base = "b", collector = "gnd", emitter = "out" }
R_E = { resistor = "2k2", between = ["out", "gnd"] }
[models.small]
polarity = "npn"
g_m = "40 mS"
r_pi = "4k5"
C_pi = "22 pF"
C_mu = "3 pF"
"""
COMMON_EMITTER = """
R_S = { resistor = "600 ohm", between = ["in", "b"] }
r_pi = { resistor = "2k5", between = ["b", "gnd"] }
C_pi = { capacitor = "12 pF", between = ["b", "gnd"] }
C_mu = { capacitor = "2 pF", between = ["b", "out"] }
g_m = { transconductance = "40 mS", flows = ["out", "gnd"], senses = ["b", "gnd"] }
R_L = { resistor = "4k7", between = ["out", "gnd"] }
"""
LOW_PASS = """
R_1 = { resistor = "1k", between = ["in", "out"] }
C_1 = { capacitor = "1n", between = ["out", "gnd"] }
"""


def constants_of(parts, **more):
    form, derivation = solution_of(parts, **more)
    return find_time_constants(derivation, form, vocabulary_of(derivation.system.small_signal))


def rows_of(found, kind="open-circuit"):
    return {
        row.symbol: row for row in (found.open_circuit if kind == "open-circuit" else found.short_circuit)
    }


def products_of(found, name):
    return {p.symbols: p for each in found.coefficients if each.name == name for p in each.products}


def spelt_out(row):
    """Give the readable resistance in the circuit's own symbols."""
    names = {}
    for name, meaning in row.definitions:
        names[name] = substitute(meaning, names)
    return substitute(row.readable, names)


# Gray, Hurst, Lewis, Meyer, Analysis and Design of Analog Integrated Circuits, ch. 7, from memory.
def test_follower_s_capacitors_see_the_textbook_resistances():
    rows = rows_of(constants_of(FOLLOWER))
    assert equal(rows["C_mu"].resistance, "R_S || (r_pi + (1 + g_m*r_pi)*R_E)")
    assert equal(rows["C_pi"].resistance, "r_pi || ((R_S + R_E)/(1 + g_m*R_E))")
    for row in rows.values():
        assert equal(spelt_out(row), row.resistance)
        assert row.part == "Q1"
        assert row.reactance == "capacitor"
    assert rows["C_pi"].between == ("b", "out")
    r_pi, r_s, r_e, g_m = (Fraction(v) for v in ("4500", "600", "2200", "0.04"))
    outside = (r_s + r_e) / (1 + g_m * r_e)
    assert rows["C_pi"].seconds == Fraction(22, 10**12) * r_pi * outside / (r_pi + outside)


def test_common_emitter_s_c_mu_sees_the_miller_form():
    found = constants_of(COMMON_EMITTER)
    rows = rows_of(found)
    assert equal(rows["C_pi"].resistance, "R_S || r_pi")
    assert equal(rows["C_mu"].resistance, "(R_S || r_pi)*(1 + g_m*R_L) + R_L")
    assert equal(products_of(found, "b_2")["C_pi", "C_mu"].term, "(R_S || r_pi)*C_pi*R_L*C_mu")
    # The zero at +g_m/C_mu: a_1 = −C_mu/g_m, common practice.
    assert equal(products_of(found, "a_1")["C_mu",].term, "-C_mu/g_m")
    assert equal(products_of(found, "a_1")["C_mu",].readable, "-C_mu/g_m")
    assert found.hidden == (ONE,)
    assert found.remark == ""
    assert sum(row.share for row in rows.values()) == pytest.approx(1)
    assert rows["C_mu"].share > 0.9


def test_steps_of_each_resistance_replay_and_keep_the_circuit_s_nodes():
    for row in constants_of(FOLLOWER).open_circuit:
        form, _ = normalise(row.derivation)
        assert steps.judge(Solution(row.derivation, form, None)).passed
        assert row.derivation.system.find.name == f"R_{row.symbol}"
        assert {unknown.subject for unknown in row.derivation.system.unknowns} <= {"b", "out"}
        assert equal(form.gain, row.resistance)


def test_inductor_has_l_over_r_and_the_other_reactances_rest():
    found = constants_of("""
R_1 = { resistor = "1k", between = ["in", "a"] }
L_1 = { inductor = "1m", between = ["a", "out"] }
R_2 = { resistor = "2k", between = ["out", "gnd"] }
C_1 = { capacitor = "1n", between = ["out", "gnd"] }
""")
    rows = rows_of(found)
    assert equal(rows["L_1"].resistance, "R_1 + R_2")
    assert equal(rows["L_1"].constant, "L_1/(R_1 + R_2)")
    assert rows["L_1"].seconds == Fraction(1, 1000) / 3000
    # The coil is a short for the capacitor, whose nodes keep the name met first.
    assert equal(rows["C_1"].resistance, "R_1 || R_2")
    # Turned, the coil is open: C_1 then sees R_2 alone; b_2 = L_1·C_1·R_2/(R_1 + R_2).
    assert equal(products_of(found, "b_2")["L_1", "C_1"].term, "L_1*C_1*R_2/(R_1 + R_2)")


def test_series_resonance_has_a_b_2_that_no_order_of_constants_gives():
    # The coil sees the open capacitor: its constant is 0, and the capacitor's with the coil open is infinite.
    found = constants_of("""
L_1 = { inductor = "1m", between = ["in", "out"] }
C_1 = { capacitor = "1n", between = ["out", "gnd"] }
""")
    rows = rows_of(found)
    assert rows["L_1"].resistance is None
    assert rows["L_1"].constant == ZERO
    assert rows["L_1"].seconds == 0
    assert rows["C_1"].resistance == ZERO
    assert rows["C_1"].constant == ZERO
    assert products_of(found, "b_1") == {}
    assert equal(products_of(found, "b_2")["L_1", "C_1"].term, "L_1*C_1")
    assert "taken whole" in found.remark


def test_node_without_a_way_for_dc_gives_no_resistance_and_says_so():
    found = constants_of(
        """
C_1 = { capacitor = "1n", between = ["in", "out"] }
C_2 = { capacitor = "1n", between = ["out", "gnd"] }
"""
    )
    for row in found.open_circuit:
        assert row.resistance is row.readable is row.constant is row.seconds is row.share is None
    assert found.coefficients == ()
    assert "C_1 sees is infinite" in found.remark


def test_part_that_only_brings_a_pole_at_zero_leaves_the_others_their_sum():
    # Driven by a current, C_1 carries all of it; what C_2 sees does not depend on it.
    found = constants_of(
        """
C_1 = { capacitor = "1u", between = ["in", "out"] }
R_1 = { resistor = "1k", between = ["out", "gnd"] }
C_2 = { capacitor = "1n", between = ["out", "gnd"] }
""",
        drives='I_s = { current = ["gnd", "in"] }',
        find='voltage = "out"\nper = "I_s"',
    )
    rows = rows_of(found)
    assert rows["C_1"].resistance is None
    assert equal(rows["C_2"].resistance, "R_1")
    assert equal(products_of(found, "b_1")["C_2",].term, "R_1*C_2")
    assert found.remark == "C_1 carries the drive's current: it does not act in H"


def test_capacitor_that_blocks_dc_is_a_pole_at_the_origin_of_an_impedance():
    parts = """
C_1 = { capacitor = "1u", between = ["in", "out"] }
R_1 = { resistor = "1k", between = ["out", "gnd"] }
"""
    found = constants_of(parts, drives='I_s = { current = ["gnd", "in"] }', find='impedance = "in"')
    assert found.remark == "C_1 blocks DC: a pole at the origin"
    # Into a capacitor alone, the voltage per ampere grows without end towards DC.
    found = constants_of(
        'C_1 = { capacitor = "1u", between = ["in", "gnd"] }',
        drives='I_s = { current = ["gnd", "in"] }',
        find='voltage = "in"\nper = "I_s"',
    )
    assert found.remark == "C_1 sees an open circuit at DC: a pole at the origin"


def test_capacitor_across_a_voltage_drive_sees_nothing():
    found = constants_of('C_x = { capacitor = "1n", between = ["in", "gnd"] }' + LOW_PASS)
    row = rows_of(found)["C_x"]
    assert row.resistance == row.readable == row.constant == ZERO
    assert row.seconds == 0
    assert row.derivation is None or row.derivation.numerator == 0


def test_hidden_factor_is_the_mode_that_the_response_does_not_show():
    # The impedance at "in" side is not disturbed: out2 hangs behind a unity-gain buffer.
    found = constants_of(
        LOW_PASS
        + """
A = { voltage_gain = "1", output = ["x", "gnd"], senses = ["out", "gnd"] }
R_2 = { resistor = "1k", between = ["x", "y"] }
C_2 = { capacitor = "1n", between = ["y", "gnd"] }
"""
    )
    assert len(found.hidden) == 2
    assert equal(found.hidden[1], "R_2*C_2")
    assert equal(found.hidden_readable[1], "R_2*C_2")
    assert found.hidden_symbols == ("C_2",)
    assert found.hidden_says == (
        "C_2 with R_2 is a mode of the circuit, 1/(R_2·C_2), that does not show in H: it cancels. The time "
        "constants in the table are those of the whole circuit, the coefficients those of H."
    )
    # The table is the circuit's, with half of its sum each; the coefficient is that of the response.
    assert [row.share for row in found.open_circuit] == [0.5, 0.5]
    (own,) = products_of(found, "b_1").values()
    assert equal(own.term, "R_1*C_1")
    assert own.share == 1


def test_zeros_and_poles_of_a_response_without_the_hidden_mode_are_its_own():
    # Into a common-base stage, from memory: C_mu at the collector is not seen, r_e ∥ C_pi is.
    found = constants_of(
        """
R_T = { resistor = "50 ohm", between = ["in", "e"] }
r_e = { resistor = "25 ohm", between = ["e", "gnd"] }
C_pi = { capacitor = "10p", between = ["e", "gnd"] }
g_m = { transconductance = "40 mS", flows = ["gnd", "out"], senses = ["e", "gnd"] }
R_C = { resistor = "1k", between = ["out", "gnd"] }
C_mu = { capacitor = "2p", between = ["out", "gnd"] }
""",
        drives='I_s = { current = ["gnd", "in"] }',
        find='impedance = "in"',
    )
    assert found.hidden_symbols == ("C_mu",)
    assert {each.name for each in found.coefficients} == {"b_1", "a_1"}
    assert equal(products_of(found, "b_1")["C_pi",].term, "r_e*C_pi")
    assert equal(products_of(found, "a_1")["C_pi",].term, "(R_T || r_e)*C_pi")


def test_hidden_mode_of_a_response_without_any_has_no_coefficients():
    # A coupling capacitor to the left of a buffer, and the resistance to the right of it.
    found = constants_of(
        """
C_1 = { capacitor = "1u", between = ["in", "a"] }
R_1 = { resistor = "1k", between = ["a", "gnd"] }
A = { voltage_gain = "1", output = ["x", "gnd"], senses = ["a", "gnd"] }
R_2 = { resistor = "1k", between = ["x", "out"] }
""",
        find='impedance = "out"',
    )
    assert found.coefficients == ()
    assert found.hidden_says.endswith(
        "it cancels. The time constants in the table are those of the whole circuit."
    )


def test_what_cancels_between_time_constants_is_not_written():
    # A tank behind a source: L/R and R·C make L·C, textbook.
    found = constants_of(
        """
R_t = { resistor = "10k", between = ["in", "gnd"] }
L_t = { inductor = "1m", between = ["in", "gnd"] }
C_t = { capacitor = "1n", between = ["in", "gnd"] }
""",
        drives='I_s = { current = ["gnd", "in"] }',
        find='voltage = "in"\nper = "I_s"',
    )
    (product,) = products_of(found, "b_2").values()
    assert to_text(product.readable) == "L_t*C_t"


@pytest.mark.parametrize(
    ("factors", "product", "cancels"),
    [
        (("L/R", "R*C"), "L*C", True),
        (("-R_1*R_4*C_1/R_3", "-R_2*R_3*C_2/R_4"), "R_1*C_1*R_2*C_2", True),
        (("-R_1/R_3", "R_3"), "-R_1", True),
        (("R_1/(R_2*R_2)", "R_2*C"), "R_1*C/R_2", True),
        (("L/R", "C*(R + R_2)"), "L/R*C*(R + R_2)", False),
    ],
)
def test_equal_factors_above_and_below_cancel(factors, product, cancels):
    found, some = multiplied([parse_expression(factor) for factor in factors])
    assert (to_text(found), some) == (to_text(parse_expression(product)), cancels)


def test_current_sensed_in_a_capacitor_counts_in_what_it_sees():
    # A source of k times C_1's own current draws it from the same node: C_1 acts as (1 + k)·C_1.
    found = constants_of(LOW_PASS + 'F = { current_gain = "3", flows = ["out", "gnd"], senses = "C_1" }')
    (row,) = found.open_circuit
    assert equal(row.resistance, "R_1*(1 + F)")
    assert row.derivation is not None
    form, _ = normalise(row.derivation)
    assert steps.judge(Solution(row.derivation, form, None)).passed


def test_current_sensed_in_a_coil_at_rest_is_still_sensed():
    # At rest L_1 is a short that carries the current of R_2; F takes k times that from the node.
    found = constants_of("""
R_1 = { resistor = "1k", between = ["in", "out"] }
R_2 = { resistor = "2k", between = ["out", "x"] }
L_1 = { inductor = "1m", between = ["x", "gnd"] }
F = { current_gain = "3", flows = ["out", "gnd"], senses = "L_1" }
C_1 = { capacitor = "1n", between = ["out", "gnd"] }
""")
    assert equal(rows_of(found)["C_1"].resistance, "R_1 || (R_2/(1 + F))")
    assert rows_of(found)["C_1"].derivation is not None
    assert equal(rows_of(found)["L_1"].resistance, "R_2 + (1 + F)*R_1")


def test_current_sensed_in_a_capacitor_at_rest_is_none():
    found = constants_of(
        LOW_PASS
        + """
R_3 = { resistor = "1k", between = ["y", "gnd"] }
C_3 = { capacitor = "1n", between = ["y", "gnd"] }
T_1 = { transresistance = "50 ohm", output = ["x", "gnd"], senses = "C_1" }
R_2 = { resistor = "1k", between = ["x", "y"] }
"""
    )
    assert equal(rows_of(found)["C_3"].resistance, "R_2 || R_3")
    assert equal(rows_of(found)["C_1"].resistance, "R_1")
    assert rows_of(found)["C_1"].derivation is not None


def test_op_amp_s_own_pole_stands_in_the_coefficients_and_is_said():
    # A follower of gain A_0 and unity gain at w_u, behind an RC: b_1 = RC + A_0/(w_u·(1 + A_0)).
    found = constants_of(
        """
R_1 = { resistor = "1k", between = ["in", "p"] }
C_1 = { capacitor = "1n", between = ["p", "gnd"] }
U1 = { opamp = true, output = "out", inputs = ["p", "out"], A_0 = "100000", f_unity = "1 MHz" }
"""
    )
    assert [row.symbol for row in found.open_circuit] == ["C_1"]
    terms = products_of(found, "b_1")
    assert equal(terms["C_1",].term, "R_1*C_1")
    assert equal(terms["w_u",].term, "A_0/(w_u*(1 + A_0))")
    assert equal(terms["w_u",].readable, "A_0/(w_u*(1 + A_0))")
    assert "an op amp's own pole has no part to own it" in found.remark
    assert found.open_circuit[0].share < 1


def test_coupled_coils_are_said_to_have_no_sums():
    found = constants_of(
        """
R_1 = { resistor = "1k", between = ["in", "p"] }
L_1 = { inductor = "1m", between = ["p", "gnd"] }
L_2 = { inductor = "1m", between = ["out", "gnd"] }
R_2 = { resistor = "1k", between = ["out", "gnd"] }
k = { coupling = "0.9", coils = ["L_1", "L_2"] }
"""
    )
    rows = rows_of(found)
    assert equal(rows["L_1"].resistance, "R_1")
    assert equal(rows["L_2"].resistance, "R_2")
    assert found.coefficients == ()
    assert "couples L_1 and L_2" in found.remark


def test_short_circuit_constants_of_a_response_with_low_corners():
    # Each coupling capacitor with the other a short: R_S + R_1 ∥ R_2, and R_2 + R_S ∥ R_1. Gray, Hurst,
    # Lewis, Meyer on short-circuit time constants, from memory.
    found = constants_of("""
R_S = { resistor = "1k", between = ["in", "a"] }
C_1 = { capacitor = "1u", between = ["a", "b"], role = "coupling" }
R_1 = { resistor = "10k", between = ["b", "gnd"] }
C_2 = { capacitor = "2u2", between = ["b", "out"], role = "coupling" }
R_2 = { resistor = "22k", between = ["out", "gnd"] }
""")
    rows = rows_of(found, "short-circuit")
    assert equal(rows["C_1"].resistance, "R_S + (R_1 || R_2)")
    assert equal(rows["C_2"].resistance, "R_2 + (R_S || R_1)")
    assert sum(row.share for row in rows.values()) == pytest.approx(1)
    assert rows["C_1"].share > rows["C_2"].share
    assert equal(rows_of(found)["C_1"].resistance, "R_S + R_1")


def test_response_without_low_corners_has_no_short_circuit_constants():
    assert constants_of(COMMON_EMITTER).short_circuit == ()


def test_capacitors_in_a_loop_have_no_short_circuit_constants():
    found = constants_of(
        """
C_1 = { capacitor = "1n", between = ["in", "out"], role = "coupling" }
C_2 = { capacitor = "1n", between = ["out", "gnd"] }
R_1 = { resistor = "1k", between = ["out", "gnd"] }
"""
    )
    assert found.short_circuit == ()
    assert "capacitors in a loop" in found.remark
    assert equal(rows_of(found)["C_1"].resistance, "R_1")


def test_nothing_that_stores_energy_has_no_time_constants():
    assert constants_of('R_1 = { resistor = "1k", between = ["in", "out"] }\n'
                        'R_2 = { resistor = "1k", between = ["out", "gnd"] }') is None  # fmt: skip


def test_value_left_open_has_no_seconds_but_all_symbols():
    found = constants_of(LOW_PASS.replace('"1n"', '"?"'))
    (row,) = found.open_circuit
    assert row.seconds is None
    assert row.share is None
    assert equal(row.constant, "R_1*C_1")


def ladder(sections: int) -> str:
    parts = []
    for index in range(1, sections + 1):
        before = "in" if index == 1 else f"n{index - 1}"
        here = "out" if index == sections else f"n{index}"
        parts.append(f'R_{index} = {{ resistor = "1k", between = ["{before}", "{here}"] }}')
        parts.append(f'C_{index} = {{ capacitor = "1n", between = ["{here}", "gnd"] }}')
    return "\n".join(parts)


def test_long_ladder_has_its_table_and_says_that_products_are_too_many():
    # Elmore: the last capacitor of a ladder sees all resistors before it.
    found = constants_of(ladder(10))
    rows = rows_of(found)
    assert len(rows) == 10
    assert equal(rows["C_10"].resistance, " + ".join(f"R_{k}" for k in range(1, 11)))
    assert float(sum(row.seconds for row in rows.values())) == pytest.approx(55e-6)
    assert found.coefficients == ()
    assert "too large" in found.remark


def test_more_capacitors_than_anybody_reads_have_a_remark_alone():
    more = [f'C_{k} = {{ capacitor = "1n", between = ["out", "gnd"] }}' for k in range(2, 18)]
    found = constants_of("\n".join([LOW_PASS, *more]))
    assert (found.open_circuit, found.short_circuit, found.coefficients) == ((), (), ())
    assert found.hidden == ()
    assert "too large" in found.remark


def test_same_circuit_gives_the_same_words_twice():
    one, other = constants_of(FOLLOWER), constants_of(FOLLOWER)
    assert one.coefficients == other.coefficients
    assert [row.readable for row in one.open_circuit] == [row.readable for row in other.open_circuit]
    assert one.remark == other.remark


@pytest.mark.parametrize("parts", [FOLLOWER, COMMON_EMITTER, LOW_PASS, ladder(4)])
def test_every_road_of_checking_passes(parts):
    form, derivation = solution_of(parts)
    found = find_time_constants(derivation, form, vocabulary_of(circuit_of(parts)))
    solution = Solution(derivation, form, None, None, time_constants=found)
    verdicts = check(solution, lcapy=False)
    named = {verdict.name: verdict.passed for verdict in verdicts}
    assert named["time constants"] is True


def test_readable_form_may_be_read_back():
    for row in constants_of(FOLLOWER).open_circuit:
        assert equal(parse_expression(to_text(spelt_out(row))), row.resistance)
