"""Sections on time constants, poles and zeros, Miller's effect and limits: what they say, and say once."""

from __future__ import annotations

from dataclasses import replace
from fractions import Fraction

import pytest
from sheet_stages import (
    COMMON_EMITTER,
    COUPLED,
    FIND,
    HEAD,
    LOW_PASS,
    RESONANT,
    Z_OUT,
    outcome_of,
    shown,
    view_of,
)

from derive.estimates.estimates import Bandwidth, Estimate, Estimates, Limit, RootSensitivity
from derive.expressions.tree import ONE, ZERO, Name, Product, Quotient, Sum
from derive.reactances.time_constants import Coefficient, TimeConstant, TimeConstants
from derive.reactances.time_constants import Product as Term
from derive.sheet.document import Display, Folded, Maths, Paragraph, Table
from derive.sheet.plain import line_text
from derive.sheet.sections import limits, miller, poles_and_zeros, time_constants
from derive.sheet.view import views

FOLLOWER = (
    HEAD
    + 'R_S = { resistor = "10k", between = ["in", "b"] }\n'
    + 'Q1 = { bipolar = true, base = "b", collector = "gnd", emitter = "out", '
    + 'g_m = "40 mS", r_pi = "4.5k", C_pi = "20 pF", C_mu = "2 pF" }\n'
    + 'R_E = { resistor = "1k", between = ["out", "gnd"] }\n'
    + FIND
)


def with_solution(view, **changes):
    """Give a view of a result with other nouns in its solution, alone on its sheet."""
    result = replace(view.result, solution=replace(view.result.solution, **changes))
    return views(replace(view.outcome, results=(result,)))[0]


def words(sections):
    """Give all the words of sections, block by block, tables row by row."""
    lines = []
    for section in sections:
        for block in section.blocks:
            if isinstance(block, Paragraph):
                lines.append(line_text(block.line))
            elif isinstance(block, Table):
                lines += [" | ".join(map(line_text, row)) for row in block.rows]
            elif isinstance(block, Display):
                lines.append(line_text((Maths(block.content), *block.reason)))
            elif isinstance(block, Folded):
                lines.append(line_text(block.title))
    return lines


def constant(symbol, ohms, share, *, seconds=None, kind="open-circuit"):
    resistance = None if ohms is None else Name(ohms)
    value = None if resistance is None else Product((resistance, Name(symbol)))
    return TimeConstant(
        symbol, symbol, symbol, "capacitor", kind, ("a", "gnd"), None, resistance, resistance, value,
        seconds, share,
    )  # fmt: skip


def term(*symbols, share):
    product = Product(tuple(Name(symbol) for symbol in symbols))
    return Term(symbols, product, product, share)


def test_who_owns_the_bandwidth_comes_first_and_the_sum_is_the_coefficient():
    text = words(time_constants.compose(view_of(COMMON_EMITTER, band="high")))
    rows = [line for line in text if line.startswith(("C_", "sum"))]
    # R_S' = 1k ∥ 2.5k = 714.29 Ω; R_S'·(1 + 40 mS · 2 kΩ) + 2 kΩ = 59.857 kΩ, by hand.
    assert [row.split(" | ")[0] for row in rows[:3]] == ["C_μ", "C_π", "sum = b_1"]
    assert rows[0].endswith("59.86 kΩ | 119.7 ns | 89 %")
    assert rows[1].endswith("R_seen_C_π = R_S ∥ r_π | 714.3 Ω | 14.29 ns | 11 %")
    assert rows[2].endswith("134 ns | 100 %")


def test_a_mode_that_the_response_does_not_show_is_said_and_no_sum_is_claimed():
    found = TimeConstants(
        (
            constant("C_1", "R_1", 0.75, seconds=Fraction(3)),
            constant("C_2", "R_2", 0.25, seconds=Fraction(1)),
        ),
        (),
        (Coefficient("b_1", (term("C_1", share=0.75), term("C_2", share=0.25))),),
        (ONE, Product((Name("R_2"), Name("C_2")))),
    )
    text = words(time_constants.compose(with_solution(view_of(LOW_PASS), time_constants=found)))
    assert not any("add up to b_1" in line for line in text)
    assert "b_1 + f_1 = R_1·C_1 + R_2·C_2the time constants added up" in text
    assert "1 + s·f_1the further factor" in text
    assert "f_1 = R_2·C_2" in text


@pytest.mark.parametrize("hidden", [(ONE,), (ONE, Name("R_1"))])
def test_the_sum_is_claimed_only_where_every_term_of_the_coefficient_is_a_time_constant(hidden):
    rows = (constant("C_1", "R_1", 1.0, seconds=Fraction(1)),)
    whole = TimeConstants(rows, (), (Coefficient("b_1", (term("C_1", share=1.0),)),), hidden)
    assert time_constants.is_sum(whole) == (hidden == (ONE,))
    more = (term("C_1", share=0.5), term("w_u", share=0.5))
    assert not time_constants.is_sum(replace(whole, coefficients=(Coefficient("b_1", more),)))
    assert not time_constants.is_sum(replace(whole, coefficients=()))


def test_a_capacitor_that_sees_no_resistance_at_all_is_said_to_see_an_infinite_one():
    rows = (constant("C_1", None, None), constant("C_2", "R_2", 1.0, seconds=Fraction(1)))
    found = TimeConstants(rows, (), (), (), "C_1 sees an open circuit at DC")
    text = words(time_constants.compose(with_solution(view_of(LOW_PASS), time_constants=found)))
    assert "C_1 | a – gnd | infinite | – | infinite | –" in text
    assert "C_1 sees an open circuit at DC." in text


def test_what_is_too_large_is_said_in_words():
    found = TimeConstants((), (), (), (), "the circuit is too large for a table of time constants")
    text = words(time_constants.compose(with_solution(view_of(LOW_PASS), time_constants=found)))
    assert text == ["The circuit is too large for a table of time constants."]


def test_nothing_is_said_of_time_constants_where_there_are_none():
    assert time_constants.compose(with_solution(view_of(LOW_PASS), time_constants=None)) == ()


def test_the_derivation_of_a_resistance_stands_once_for_all_results_of_a_band():
    titles = [
        [line for line in words(time_constants.compose(view)) if line.startswith("Derivation")]
        for view in views(outcome_of(COUPLED))
    ]
    told = [line for lines in titles for line in lines]
    assert told == [
        "Derivation of R_seen_C_1, which C_1 sees (open-circuit)",
        "Derivation of R_seen_C_L, which C_L sees (open-circuit)",
    ]


def test_a_second_result_refers_to_the_table_of_the_first():
    text = words(time_constants.compose(view_of(LOW_PASS + Z_OUT, "Z_out")))
    assert text == ["What each part sees, and its time constant, are as for A_v: all drives are at zero."]


def test_resistances_of_the_table_go_by_their_names_in_products():
    text = words(time_constants.compose(view_of(FOLLOWER, band="high")))
    (lead,) = [line for line in text if line.startswith("All drives at zero, the other capacitors open")]
    assert lead.endswith("is the resistance that C_π sees between its nodes.")
    assert any("R_seen_C_π = r_π ∥ ((R_S + R_E)/(1 + g_m·R_E))" in line for line in text)
    (row,) = [line for line in text if line.startswith("b_2 |")]
    assert "C_π·R_seen_C_π·" in row


def test_derivations_are_shown_with_the_steps_only():
    assert "Derivation of R_seen_C_1" not in shown(LOW_PASS)
    assert "Derivation of R_seen_C_1, which C_1 sees (open-circuit)" in shown(LOW_PASS, steps=True)
    assert "(R1.1)" in shown(LOW_PASS, steps=True)


def test_numbers_of_equations_are_left_out_where_no_equation_is_shown():
    assert "from (" not in shown(COMMON_EMITTER)
    assert "; from (" in shown(COMMON_EMITTER, steps=True)


def test_poles_stand_in_closed_form_with_their_certified_numbers():
    text = words(poles_and_zeros.compose(view_of(LOW_PASS)))
    # 1/((1k ∥ 3k)·1 µF) = 1333.3 rad/s = 212.2 Hz
    assert any(line.startswith("ω_p1 = ") and "1.3333 krad/s, 212.2 Hz" in line for line in text)
    assert any(line.startswith("pole | −1.33333 krad/s | 212.21 Hz") for line in text)


def test_poles_that_an_earlier_result_has_are_not_told_twice():
    topology = LOW_PASS + Z_OUT
    first, second = (words(poles_and_zeros.compose(view_of(topology, name))) for name in ("A_v", "Z_out"))
    assert any("ω_p1 = " in line for line in first)
    assert not any("ω_p1 = " in line for line in second)
    assert "The poles, and what is said of them, are those of A_v." in second


def test_why_there_is_no_bandwidth_is_said():
    estimates = Estimates(
        (), (), None, (), (), remark="no bandwidth: a pole lies in the right half-plane"
    )
    text = words(poles_and_zeros.compose(with_solution(view_of(LOW_PASS), estimates=estimates)))
    assert "No bandwidth: a pole lies in the right half-plane." in text


def test_every_crossing_of_the_line_is_said():
    band = Bandwidth(
        2.0, "gain at its peak; −3 dB stands for 1/√2 of it", (10.0, 20.0, 30.0), 10.0, 20.0,
        "it crosses the line 3 times: at 10 Hz, 20 Hz and 30 Hz",
    )  # fmt: skip
    estimates = Estimates((), (), band, (), ())
    text = words(poles_and_zeros.compose(with_solution(view_of(LOW_PASS), estimates=estimates)))
    assert (
        "Pass band to −3 dB: from 10 Hz to 20 Hz. Counted from 2, the gain at its peak; −3 dB stands for 1/√2 of "
        "it. It crosses the line 3 times: at 10 Hz, 20 Hz and 30 Hz."
    ) in text


def test_rules_of_thumb_are_given_with_their_signed_error_and_a_sentence():
    text = words(poles_and_zeros.compose(view_of(RESONANT.replace("10R", "1k"))))
    # R·C = 1 ms; the pole itself lies at (R/L − √((R/L)² − 4/(L·C)))/2 = 1.0010 krad/s.
    (row,) = [line for line in text if " | −1/b_1 | " in line]
    assert " | −1/b_1 | −1 krad/s | −1.001 krad/s | −0.1 % | may be used" in row


def test_why_a_rule_for_real_poles_is_not_there_is_said():
    found = Estimates((), (), None, (), (), rules_remark="the poles are a pair, for which no rule speaks")
    text = words(poles_and_zeros.compose(with_solution(view_of(RESONANT), estimates=found)))
    assert "The poles are a pair, for which no rule speaks." in text


def test_the_quality_of_a_pair_has_sensitivities_of_its_own():
    pair = RootSensitivity("pole", 0, 3 + 4j, (("L_1", -0.5 + 0j),), (("R_1", -1.0), ("L_1", 0.5)))
    found = Estimates((), (), None, (pair,), ())
    text = words(poles_and_zeros.compose(with_solution(view_of(RESONANT), estimates=found)))
    assert any(line.startswith("pole pair | ") and line.endswith(" | L_1 −0.50") for line in text)
    assert "Q of the pole pair |  | R_1 −1.00, L_1 +0.50" in text


def test_a_formula_in_s_is_said_to_be_that_of_a_response():
    rule = Estimate(
        "two factors",
        Product((Sum((ONE, Name("s"))), Sum((ONE, Name("s"))))),
        "Hz",
        1.0,
        1.0,
        0.0,
        True,
        "ok",
    )
    found = Estimates((), (rule,), None, (), ())
    text = words(poles_and_zeros.compose(with_solution(view_of(RESONANT), estimates=found)))
    assert any(line.startswith("two factors | −3 dB of 1/((1 + s)·(1 + s)) | ") for line in text)


def test_the_strongest_part_comes_first_among_those_that_a_root_follows():
    text = words(poles_and_zeros.compose(view_of(COMMON_EMITTER, band="high")))
    (row,) = [line for line in text if line.startswith("zero | 3.183 GHz")]
    (definition,) = [line for line in text if line.startswith("Sensitivity: relative change of a root")]
    assert definition in shown(COMMON_EMITTER)
    # g_m/C_mu goes up with g_m and down with C_mu, by as much.
    assert row.split(" | ")[2] in ("g_m +1.00, C_μ −1.00", "C_μ −1.00, g_m +1.00")


def test_limits_that_tell_stand_in_a_table_and_the_others_in_a_sentence():
    found = Estimates(
        (), (), None, (),
        (
            Limit("R_1", "0", ONE),
            Limit("R_2", "inf", Quotient(Name("R_2"), Sum((Name("R_1"), Name("R_2"))))),
            Limit("R_1", "inf", ZERO),
            Limit("R_2", "0", ZERO),
            Limit("g_m", "inf", None),
        ),
    )  # fmt: skip
    text = words(limits.compose(with_solution(view_of(LOW_PASS), estimates=found)))
    assert text == [
        "R_1 → 0 | 1",
        "R_2 → ∞ | R_2/(R_1 + R_2)",
        "It goes to zero as R_1 → ∞ or R_2 → 0.",
        "It grows without limit as g_m → ∞.",
    ]


def test_limits_of_a_gain_that_an_earlier_result_has_are_referred_to():
    text = words(limits.compose(view_of(COUPLED, "A_v", "high")))
    assert text == ["A_v at zero frequency, and so its limits, are as for A_v in the mid band."]


def test_millers_effect_is_refused_with_its_reason_where_the_gain_is_near_one():
    text = words(miller.compose(view_of(FOLLOWER, band="high")))
    assert text[0].startswith("C_π bridges b (near) and out (far).")
    assert any(line.startswith("Y_near = s·C_π·(1 − A)") for line in text)
    assert any(line.startswith("C_near = ") for line in text)
    assert (
        "The approximation is not to be used here: the gain from b to out is 0.976, near +1" in text[-1]
    )


def test_millers_capacitance_of_a_common_emitter_stage_is_the_known_one():
    text = words(miller.compose(view_of(COMMON_EMITTER, band="high")))
    (near,) = [line for line in text if line.startswith("C_near")]
    # 2 pF·(1 + 40 mS·2 kΩ) = 162 pF
    assert near.startswith("C_near = C_μ·(1 + g_m·R_L)")
    assert near.endswith("162 pF")


def test_nothing_is_said_of_miller_where_nothing_bridges():
    assert miller.compose(view_of(LOW_PASS)) == ()
