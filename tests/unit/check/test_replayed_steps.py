"""The replay names the first step that does not hold, and why."""

from dataclasses import replace

import pytest
from hand_solutions import LOW_PASS_STEPS, certificate, equation, solution_of

from derive.check.roads.steps import judge
from derive.eliminate.derivation import Step
from derive.expressions.parse import parse_expression


def with_step(place, **changes):
    kept = list(LOW_PASS_STEPS)
    kept[place - 1] = replace(kept[place - 1], **changes)
    return solution_of("low-pass", steps=tuple(kept))


def test_the_nine_steps_of_a_low_pass_hold():
    verdict = judge(solution_of("low-pass"))
    assert verdict.passed is True
    assert verdict.measured == "9 steps of 9"


@pytest.mark.parametrize(
    ("solution", "measured"),
    [
        (
            with_step(1, equation=equation("(v_wanted - V_s)/R_1 - s*C_1*v_wanted = 0")),
            "step 1: not true of the circuit",
        ),
        (
            with_step(3, equation=equation("(1 + s*R_1)*v_wanted = V_s")),
            "step 3: not true of the circuit",
        ),
        (
            with_step(2, certificate=certificate("1", (1, "C_1"))),
            "step 2: does not follow from the steps that it uses",
        ),
        (
            with_step(4, certificate=certificate("1 - s*R_1*C_1", (3, "1"))),
            "step 4: does not follow from the steps that it uses",
        ),
        (
            # True of the circuit, but it does not follow from the equation before it.
            with_step(3, equation=equation("v_wanted = V_s/(1 + s*R_1*C_1)")),
            "step 3: does not follow from the steps that it uses",
        ),
        (
            with_step(2, certificate=certificate("0", (1, "0"))),
            "step 2: its divisor is zero",
        ),
        (
            with_step(2, certificate=certificate("1", (3, "1"))),
            "step 2: it uses step 3, which does not come before it",
        ),
        (
            with_step(2, certificate=certificate("1", (2, "1"))),
            "step 2: it uses step 2, which does not come before it",
        ),
        (with_step(4, nonzero=parse_expression("R_1 - R_1")), "step 4: what it says is not zero is zero"),
        (with_step(2, certificate=None), "step 2: it gives no reason"),
        (with_step(4, number=3), "step 3: its number stands twice"),
        (
            with_step(7, equation=equation("R_1 = 1"), defines="R_1"),
            "step 7: it defines R_1, which already has a meaning",
        ),
        (with_step(7, equation=equation("1 = K")), "step 7: it does not define K"),
        (with_step(5, equation=equation("H = V_s/v_wanted")), "step 5: not true of the circuit"),
        (
            with_step(8, equation=equation("b_1 = 2*R_1*C_1")),
            "step 8: it defines b_1 otherwise than the result does",
        ),
        (with_step(9, equation=equation("H = K/(1 - s*b_1)")), "step 9: not true of the circuit"),
        (
            with_step(2, equation=equation("v_wanted - V_s + s*R_1*C_1*v_other = 0")),
            'step 2: there is no value for "v_other"',
        ),
    ],
)
def test_the_first_step_that_fails_is_named(solution, measured):
    verdict = judge(solution)
    assert verdict.passed is False
    assert verdict.measured == measured


def test_steps_that_stop_before_the_result_fail():
    verdict = judge(solution_of("low-pass", steps=LOW_PASS_STEPS[:5]))
    assert verdict.passed is False
    assert verdict.measured == "no step gives the result for H"


def test_a_result_left_in_terms_of_an_unknown_is_none():
    last = Step(9, "stop", equation("H = v_wanted/V_s"), certificate("1", (5, "1")))
    verdict = judge(solution_of("low-pass", steps=(*LOW_PASS_STEPS[:8], last)))
    assert verdict.passed is False
    assert verdict.measured == "no step gives the result for H"
