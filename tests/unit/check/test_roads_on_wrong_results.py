"""Every road is made to fail: one wrong sign, term, symbol, factor or power at a time."""

from dataclasses import replace

import pytest
from hand_solutions import CIRCUITS, form_of, solution_of

from derive.check.judge import check
from derive.check.roads import (
    asymptotes,
    dimensions,
    generic,
    identity,
    nominal,
    other_engine,
    steps,
)
from derive.expressions.parse import parse_expression
from derive.expressions.tree import ZERO, Negative

FOLLOWER = "emitter follower at high frequency"
NOTCH = "twin-T notch with its null inside the band"
FLOATING = "two coupling capacitors with a floating node between"


def with_(name, *, gain=None, power=None, numerator=None, denominator=None):
    """Give the solution of the circuit with a part of its result exchanged."""
    form = form_of(CIRCUITS[name])
    if gain is not None:
        form = replace(form, gain=parse_expression(gain))
    if power is not None:
        form = replace(form, power_of_s=power)
    for key, texts in (("numerator", numerator), ("denominator", denominator)):
        if texts is not None:
            form = replace(form, **{key: tuple(parse_expression(text) for text in texts)})
    return solution_of(name, form=form)


D0 = "((1 + g_m*r_pi)*R_E + r_pi + R_S)"
D1 = f"(r_pi*C_pi*(R_E + R_S) + R_S*C_mu*((1 + g_m*r_pi)*R_E + r_pi))/{D0}"
D2 = f"R_E*r_pi*C_pi*R_S*C_mu/{D0}"
WRONG = {
    "sign of the gain": with_("low-pass", gain="-1"),
    "beta for beta plus one": with_(FOLLOWER, gain=f"g_m*r_pi*R_E/{D0}"),
    "dropped term": with_(
        FOLLOWER, denominator=("1", f"(r_pi*C_pi*R_E + R_S*C_mu*(R_E + r_pi))/{D0}", D2)
    ),
    "missing quadratic term": with_(FOLLOWER, denominator=("1", D1)),
    "swapped capacitors": with_(FOLLOWER, numerator=("1", "r_pi*C_mu/(1 + g_m*r_pi)")),
    "sign of a zero": with_(FOLLOWER, numerator=("1", "-r_pi*C_pi/(1 + g_m*r_pi)")),
    "no coupling in the leakage": with_(
        "coupled coils", denominator=("1", "L_1/R_1 + L_2/R_2", "L_1*L_2/(R_1*R_2)")
    ),
    "factor of two": with_("difference of two drives", gain="(R_1 + 2*R_3)/(R_1 + R_3)"),
    "response where there is none": with_("node that the drive does not reach", gain="1"),
    "no response where there is one": with_("low-pass", gain="0", denominator=("1",)),
}


@pytest.mark.parametrize("case", WRONG)
@pytest.mark.parametrize("road", [identity, generic, nominal], ids=lambda road: road.NAME)
def test_a_wrong_result_fails(road, case):
    assert road.judge(WRONG[case]).passed is False


@pytest.mark.parametrize("case", WRONG)
def test_another_engine_disagrees_with_a_wrong_result(case, answer_of_engine):
    solution = WRONG[case]
    values, answer = answer_of_engine(solution)
    assert other_engine.compare(solution, values, answer).passed is False


@pytest.fixture(scope="module")
def answer_of_engine():
    """Ask the engine about all the wrong results at once: it starts slowly."""
    begun = other_engine.start(list(WRONG.values()), 60)
    answers = other_engine.answers_of(begun.child)
    kept = {id(a.solution): (a.values, b) for a, b in zip(begun.asked, answers, strict=True)}
    return lambda solution: kept[id(solution)]


def test_equal_values_hide_swapped_symbols_from_the_nominal_check_alone():
    denominator = list(CIRCUITS[NOTCH].denominator)
    denominator[1] = "(R_1 + R_2)*C_2 + R_3*(C_1 + C_2) + R_2*C_3"  # R_1·C_3 is right; R_1 = R_2
    solution = with_(NOTCH, denominator=tuple(denominator))
    assert nominal.judge(solution).passed is True
    assert identity.judge(solution).passed is False
    assert generic.judge(solution).passed is False


def test_an_error_of_one_part_in_a_million_fails_at_nominal_values_and_is_placed():
    verdict = nominal.judge(with_("low-pass", denominator=("1", "R_1*C_1*1000001/1000000")))
    assert verdict.passed is False
    assert verdict.measured.startswith("worst error 10⁻⁶, at ")


@pytest.mark.parametrize(
    ("solution", "measured"),
    [
        (
            with_("low-pass", gain="2"),
            "s → 0: finite, another value in the circuit, finite, another value in the result",
        ),
        (with_(FLOATING, power=0), "s → 0: zero in the circuit"),
        (with_(FLOATING, power=0), "s → ∞: finite, another value in the circuit, zero in the result"),
        (with_("integrator with an ideal op amp", power=0), "s → 0: infinite in the circuit"),
        (with_("low-pass", denominator=("1",)), "s → ∞: zero in the circuit"),
        (with_("low-pass", gain="0"), "s → 0: finite, another value in the circuit, zero in"),
        (with_("node that the drive does not reach", gain="1"), "s → ∞: zero in the circuit"),
    ],
)
def test_a_wrong_limit_fails_and_is_named(solution, measured):
    verdict = asymptotes.judge(solution)
    assert verdict.passed is False
    assert measured in verdict.measured


@pytest.mark.parametrize(
    ("solution", "measured"),
    [
        (with_("low-pass", gain="R_1"), "gain is in Ω, not in no unit"),
        (with_("low-pass", denominator=("1", "R_1*C_1^2")), "b_1 is in s²/Ω, not in s"),
        (with_("low-pass", denominator=("1", "R_1*C_1 + C_1")), "b_1: s and s/Ω are added"),
        (with_("low-pass", denominator=("1 + R_1", "R_1*C_1")), "b_0: no unit and Ω are added"),
        (with_(FLOATING, power=0), "gain is in s, not in no unit"),
        (with_("current drive into a resistor", gain="1/R_1"), "gain is in 1/Ω, not in Ω"),
        (with_("low-pass", gain="R_9/R_1"), "gain: the name R_9 is not one of the circuit's"),
        (with_("low-pass", gain="sqrt(R_1)/R_1"), "gain: a root of Ω"),
        (with_("low-pass", gain="(R_1 || C_1)/R_1"), "gain: Ω and s/Ω are added"),
    ],
)
def test_a_wrong_dimension_fails_and_is_named(solution, measured):
    verdict = dimensions.judge(solution)
    assert verdict.passed is False
    assert verdict.measured == measured


def test_a_result_that_the_steps_do_not_lead_to_fails():
    verdict = steps.judge(with_("low-pass", denominator=("1", "2*R_1*C_1")))
    assert verdict.passed is False


def test_a_check_that_breaks_is_a_failed_check_and_no_crash():
    verdicts = check(with_("low-pass", gain="R_99"), lcapy=False)
    for verdict in verdicts[:6]:
        assert verdict.passed is False
        assert "R_99" in verdict.measured or "result" in verdict.measured


def test_a_result_for_a_circuit_without_a_solution_fails():
    solution = solution_of("low-pass")
    system = solution.derivation.system
    twice = replace(system.small_signal.drives[0], name="V_2")  # two sources across one pair of nodes
    circuit = replace(system.small_signal, drives=(*system.small_signal.drives, twice))
    derivation = replace(solution.derivation, system=replace(system, small_signal=circuit))
    verdict = identity.judge(replace(solution, derivation=derivation))
    assert verdict.passed is False
    assert "contradict" in verdict.measured


def test_a_zero_written_with_a_sign_is_still_zero():
    form = replace(form_of(CIRCUITS["node that the drive does not reach"]), gain=Negative(ZERO))
    solution = solution_of("node that the drive does not reach", form=form)
    assert all(verdict.passed is not False for verdict in check(solution, lcapy=False))
