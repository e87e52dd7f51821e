"""The road that judges readable forms passes right ones and notices every kind of wrong one."""

from dataclasses import replace

import pytest
from hand_solutions import CIRCUITS, form_of, solution_of

from derive.bands.restrict import restrict
from derive.check.roads import readable as road
from derive.devices.linearise import linearise
from derive.expressions.parse import parse_expression
from derive.expressions.text import to_text
from derive.pipeline import solve
from derive.readable.form import ReadableForm
from derive.reading.read import parse

FOLLOWER = "emitter follower at high frequency"
BETA = ("beta", parse_expression("g_m*r_pi"))
# The follower by hand: Gray and Meyer, from memory; equal to the form in the table of hand solutions.
GAIN = "1/(1 + (R_S + r_pi)/((1 + beta)*R_E))"
ZERO = "r_pi*C_pi/(1 + beta)"
B_1 = "C_mu*(R_S || (r_pi + (1 + beta)*R_E)) + C_pi*(r_pi || ((R_S + R_E)/(1 + g_m*R_E)))"
B_2 = "R_S*R_E*r_pi*C_pi*C_mu/(R_S + r_pi + (1 + beta)*R_E)"


def judged(gain=GAIN, zero=ZERO, b_1=B_1, b_2=B_2, definitions=(BETA,)):
    texts = (gain, ("1", zero), ("1", b_1, b_2) if b_2 else ("1", b_1))
    entries = [tuple(map(parse_expression, part)) if isinstance(part, tuple) else part for part in texts]
    form = ReadableForm(parse_expression(gain), entries[1], entries[2], definitions)
    return road.judge(replace(solution_of(FOLLOWER), readable=form))


def test_hand_form_has_the_shape_of_the_circuit():
    assert len(form_of(CIRCUITS[FOLLOWER]).denominator) == 3


def test_right_form_passes_with_its_bound():
    verdict = judged()
    assert verdict.passed is True
    assert "3 points" in verdict.measured
    assert "chance" in verdict.limit


WRONG = {
    "beta for beta plus one": {"gain": "1/(1 + (R_S + r_pi)/(beta*R_E))"},
    "sign of the gain": {"gain": f"-({GAIN})"},
    "zero in the other half-plane": {"zero": f"-({ZERO})"},
    "parallel for series": {"b_1": B_1.replace("(r_pi + (1 + beta)*R_E)", "(r_pi || ((1 + beta)*R_E))")},
    "swapped capacitors": {
        "b_1": B_1.replace("C_mu", "C_x").replace("C_pi", "C_mu").replace("C_x", "C_pi")
    },
    "missing resistance": {"b_1": B_1.replace("R_S + R_E", "R_S")},
    "wrong last coefficient": {"b_2": f"2*({B_2})"},
    "missing last coefficient": {"b_2": ""},
    "wrong definition": {"definitions": (("beta", parse_expression("g_m*R_E")),)},
}


@pytest.mark.parametrize("case", WRONG)
def test_wrong_form_fails(case):
    assert judged(**WRONG[case]).passed is False


def test_two_mistakes_that_cancel_in_the_response_fail():
    # K·(1 + a_1·s): twice the gain with halves in the numerator has no 1 to begin with.
    solution = solution_of(FOLLOWER)
    form = solution.form
    twisted = ReadableForm(
        parse_expression(f"2*({GAIN})"),
        (parse_expression("1/2"), parse_expression(f"({ZERO})/2")),
        form.denominator,
        (BETA,),
    )
    verdict = road.judge(replace(solution, readable=twisted))
    assert verdict.passed is False
    assert "gain" in verdict.measured


def test_division_by_zero_for_all_values_fails():
    assert judged(gain="1/(R_S - R_S)").passed is False


def test_nothing_to_judge_is_neither_pass_nor_fail():
    assert road.judge(solution_of(FOLLOWER)).passed is None


def far(text):
    """Give a high-pass with its gain far above all corners in these words."""
    circuit = linearise(parse(TOPOLOGY, "high_pass.toml"), {})
    right = solve(restrict(circuit, "full"), circuit.topology.finds[0])
    readable = replace(right.readable, far_gain=parse_expression(text))
    return road.judge(replace(right, readable=readable))


TOPOLOGY = """
[sheet]
title = "Coupling capacitor and load"
[drives]
V_s = { voltage = ["in", "gnd"] }
[parts]
C_1 = { capacitor = "1u", between = ["in", "a"] }
R_1 = { resistor = "1k", between = ["a", "out"] }
R_2 = { resistor = "3k3", between = ["out", "gnd"] }
[find.A_v]
voltage = "out"
per = "V_s"
"""


def test_gain_far_above_all_corners_is_judged_too():
    assert far("R_2/(R_1 + R_2)").passed is True
    wrong = far("R_1/(R_1 + R_2)")
    assert wrong.passed is False
    assert "far above" in wrong.measured


SECTIONS = """
[sheet]
title = "Two sections with a buffer between"
[drives]
V_s = { voltage = ["in", "gnd"] }
[parts]
R_1 = { resistor = "1k", between = ["in", "a"] }
C_1 = { capacitor = "1n", between = ["a", "gnd"] }
A_1 = { voltage_gain = "2", output = ["b", "gnd"], senses = ["a", "gnd"] }
R_2 = { resistor = "3k3", between = ["b", "out"] }
C_2 = { capacitor = "1n", between = ["out", "gnd"] }
[find.A_v]
voltage = "out"
per = "V_s"
"""


def test_factors_of_the_denominator_are_found_and_judged():
    circuit = linearise(parse(SECTIONS, "sections.toml"), {})
    right = solve(restrict(circuit, "full"), circuit.topology.finds[0])
    texts = [tuple(map(to_text, factor)) for factor in right.readable.denominator_factors]
    assert sorted(texts) == [("1", "R_1*C_1"), ("1", "R_2*C_2")]
    assert road.judge(right).passed is True
    one = right.readable.denominator_factors[0]
    wrong = replace(right, readable=replace(right.readable, denominator_factors=(one, one)))
    verdict = road.judge(wrong)
    assert verdict.passed is False
    assert "factors" in verdict.measured
