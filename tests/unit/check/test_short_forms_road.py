"""Short forms are judged by the circuit itself: right ones pass, and every kind of wrong one fails."""

from __future__ import annotations

from dataclasses import replace
from fractions import Fraction

import pytest

from derive.bands.restrict import restrict
from derive.check.excitation import excite
from derive.check.pencil import pencil_of
from derive.check.roads import short_forms
from derive.check.roads.nominal import nominal_values
from derive.check.stamp import assemble
from derive.devices.linearise import linearise
from derive.expressions.parse import parse_expression
from derive.expressions.tree import Name, Product
from derive.pipeline import solve
from derive.reading.read import parse

STAGE = """
[sheet]
title = "Two stages"
[drives]
V_s = { voltage = ["in", "gnd"] }
[parts]
R_S = { resistor = "1k", between = ["in", "b"] }
r_pi1 = { resistor = "2k5", between = ["b", "gnd"] }
C_pi1 = { capacitor = "12p", between = ["b", "gnd"] }
g_m1 = { transconductance = "1 mS", flows = ["x", "gnd"], senses = ["b", "gnd"] }
R_1 = { resistor = "1M", between = ["x", "gnd"] }
C_1 = { capacitor = "0.2p", between = ["x", "gnd"] }
g_m2 = { transconductance = "5 mS", flows = ["out", "gnd"], senses = ["x", "gnd"] }
R_2 = { resistor = "200k", between = ["out", "gnd"] }
C_c = { capacitor = "30p", between = ["x", "out"] }
C_L = { capacitor = "5p", between = ["out", "gnd"] }
[find.A_v]
voltage = "out"
per = "V_s"
[budget]
simplify = true
range = ["1 kHz", "10 MHz"]
"""
RINGING = """
[sheet]
title = "Resonance"
[drives]
I_s = { current = ["gnd", "out"] }
[parts]
R_P = { resistor = "10k", between = ["out", "gnd"] }
L_1 = { inductor = "1m", between = ["out", "gnd"] }
C_1 = { capacitor = "1n", between = ["out", "gnd"] }
[find.Z]
voltage = "out"
per = "I_s"
[budget]
simplify = true
"""


def solution_of(text):
    circuit = linearise(parse(text, "stage.toml"), {})
    return solve(restrict(circuit, "full"), circuit.topology.finds[0])


@pytest.fixture(scope="module")
def right():
    return solution_of(STAGE)


def place_of(solution, kind):
    return next(k for k, answer in enumerate(solution.simplified) if answer.question.kind == kind)


def changed(solution, kind, **fields):
    answers = list(solution.simplified)
    place = place_of(solution, kind)
    answers[place] = replace(answers[place], **fields)
    return replace(solution, simplified=tuple(answers))


def judged(solution):
    return short_forms.judge(solution)


def test_right_forms_pass_and_are_counted(right):
    verdict = judged(right)
    assert verdict.passed is True
    count = sum(answer.form is not None for answer in right.simplified)
    count += sum(answer.beyond is not None for answer in right.simplified)
    assert verdict.measured.startswith(f"{count} forms")


@pytest.mark.parametrize(
    "kind",
    ["low-frequency gain", "dominant pole", "second pole", "unity-gain frequency", "response in a band"],
)
def test_another_form_with_the_old_value_fails(right, kind):
    form = right.simplified[place_of(right, kind)].form
    verdict = judged(changed(right, kind, form=Product((parse_expression("101/100"), form))))
    assert verdict.passed is False
    assert kind in verdict.measured


@pytest.mark.parametrize(
    "kind", ["low-frequency gain", "dominant pole", "second pole", "unity-gain frequency"]
)
def test_a_wrong_value_of_the_circuit_fails(right, kind):
    answer = right.simplified[place_of(right, kind)]
    off = answer.original * 1.001
    price = replace(answer.price, relative=answer.value / off - 1)
    assert judged(changed(right, kind, original=off, price=price)).passed is False


@pytest.mark.parametrize(
    "kind", ["low-frequency gain", "dominant pole", "second pole", "unity-gain frequency"]
)
def test_a_misstated_error_fails(right, kind):
    answer = right.simplified[place_of(right, kind)]
    price = replace(answer.price, relative=answer.price.relative + 1e-4)
    verdict = judged(changed(right, kind, price=price))
    assert verdict.passed is False
    assert "off by" in verdict.measured


def test_a_misstated_error_over_a_range_fails(right):
    answer = right.simplified[place_of(right, "response in a band")]
    for fields in ({"magnitude_db": answer.price.magnitude_db + 0.01}, {"phase_deg": 0.0}):
        price = replace(answer.price, **fields)
        assert judged(changed(right, "response in a band", price=price)).passed is False


def test_the_second_pole_given_for_the_first_fails(right):
    second = right.simplified[place_of(right, "second pole")]
    question = right.simplified[place_of(right, "dominant pole")].question
    verdict = judged(changed(right, "second pole", question=question))
    assert second.form is not None
    assert verdict.passed is False


def test_a_form_beyond_the_budget_that_is_said_to_be_within_fails(right):
    answer = right.simplified[place_of(right, "dominant pole")]
    form = Product((parse_expression("6/5"), answer.form))
    value = answer.value * 1.2
    price = replace(answer.price, relative=value / answer.original - 1)
    worse = replace(answer, form=form, value=value, price=price)
    verdict = judged(changed(right, "dominant pole", form=form, value=value, price=price))
    assert verdict.passed is False
    assert "beyond the budget" in verdict.measured
    # The same beside another, as one that goes beyond it, is true.
    assert judged(changed(right, "dominant pole", beyond=worse)).passed is True


def test_definitions_have_to_come_before_their_use_and_to_be_new(right):
    kind = "low-frequency gain"
    answer = right.simplified[place_of(right, kind)]
    named = Product((Name("F_I"), answer.form))
    one = ("F_I", parse_expression("F_II*1"))
    other = ("F_II", parse_expression("R_S/R_S"))
    right_order = changed(right, kind, form=named, definitions=(*answer.definitions, other, one))
    assert judged(right_order).passed is True
    wrong_order = changed(right, kind, form=named, definitions=(*answer.definitions, one, other))
    assert judged(wrong_order).passed is False
    clash = changed(right, kind, definitions=(*answer.definitions, ("R_S", parse_expression("R_1"))))
    verdict = judged(clash)
    assert verdict.passed is False
    assert "R_S is defined" in verdict.measured


def test_a_pair_of_poles_is_judged_by_its_distance_from_the_origin():
    solution = solution_of(RINGING)
    answer = solution.simplified[place_of(solution, "dominant pole")]
    assert answer.left == "omega_1"
    assert judged(solution).passed is True
    off = answer.original * 1.01
    price = replace(answer.price, relative=answer.value / off - 1)
    assert judged(changed(solution, "dominant pole", original=off, price=price)).passed is False


def test_poles_are_found_where_theory_has_them_and_hidden_ones_do_not_count():
    # R_2·C_2 hangs at the drive alone: its pole is a natural frequency that the response does not show.
    text = """
[sheet]
title = "Hidden"
[drives]
I_s = { current = ["gnd", "in"] }
[parts]
R_1 = { resistor = "1k", between = ["in", "gnd"] }
C_1 = { capacitor = "1n", between = ["in", "gnd"] }
g_m = { transconductance = "1 mS", flows = ["y", "gnd"], senses = ["in", "gnd"] }
R_2 = { resistor = "1M", between = ["y", "gnd"] }
C_2 = { capacitor = "1n", between = ["y", "gnd"] }
[find.Z]
voltage = "in"
per = "I_s"
"""
    solution = solution_of(text)
    values = {"": Fraction(0), **nominal_values(solution.judged)}
    pencil = pencil_of(assemble(solution.judged, excite(solution.derivation.system), values.__getitem__))
    natural = sorted(root.real for root in pencil.natural(1 + 0j))
    assert natural == pytest.approx([-1e6, -1e3], rel=1e-6)
    assert pencil.poles_up_to(-1e6) == pytest.approx([-1e6], rel=1e-6)
    assert pencil.response(0j) == pytest.approx(1000)


def test_where_none_were_asked_for_there_is_nothing_to_judge():
    verdict = judged(solution_of(STAGE.replace("simplify = true\n", "")))
    assert (verdict.passed, verdict.applies) == (None, False)
