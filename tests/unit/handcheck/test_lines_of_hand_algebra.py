"""Truth of single lines: names, ties, roots, what may not appear, and what a proposal must never be."""

from __future__ import annotations

import random
import time

import pytest
from follower import TOPOLOGY
from hand_lines import judged, solution_of

from derive.algebra.modular import PRIME
from derive.errors import InputError
from derive.handcheck.names import Names
from derive.handcheck.points import points_of, stream_of
from derive.handcheck.report import HandReport
from derive.handcheck.ties import Ties

TWO_DRIVES = """
[sheet]
title = "Adder"
[drives]
V_1 = { voltage = ["in1", "gnd"] }
V_2 = { voltage = ["in2", "gnd"] }
[parts]
R_1 = { resistor = "1k", between = ["in1", "m"] }
R_2 = { resistor = "2k", between = ["in2", "m"] }
R_F = { resistor = "10k", between = ["m", "out"] }
U1 = { ideal_opamp = true, output = "out", inputs = ["gnd", "m"] }
[find.A_1]
voltage = "out"
per = "V_1"
[find.A_2]
voltage = "out"
per = "V_2"
"""

BANDED = """
[sheet]
title = "Stage"
[supplies]
V_CC = { node = "vcc", dc = "12 V" }
[drives]
V_s = { voltage = ["in", "gnd"] }
[parts]
C_1 = { capacitor = "1u", between = ["in", "x"], role = "coupling" }
R_S = { resistor = "2k2", between = ["x", "b"] }
R_1 = { resistor = "68k", between = ["vcc", "b"] }
R_2 = { resistor = "82k", between = ["b", "gnd"] }
R_C = { resistor = "4k7", between = ["vcc", "c"] }
Q1 = { bipolar = true, base = "b", collector = "c", emitter = "gnd", g_m = "40 mS", r_pi = "2.5k", C_mu = "3 pF" }
[merge]
R_B = ["R_1", "R_2"]
[find.A_v]
voltage = "c"
per = "V_s"
"""


@pytest.fixture(scope="module")
def follower():
    return solution_of(TOPOLOGY, "A_v")


@pytest.fixture(scope="module")
def banded():
    return solution_of(BANDED, "A_v", "high")


def outcomes(report: HandReport) -> list[str]:
    return [verdict.outcome for verdict in report.verdicts]


@pytest.mark.parametrize(
    "line",
    [
        "i_R_E = v_out/R_E",
        "i_r_pi + i_C_pi + i_g_m = i_R_E",
        "i_R_S = (V_s - v_b)/R_S",
        "A_v = v_out/V_s",
        "v_in = V_s",
        "alpha = beta/(beta + 1)",
        "r_e = alpha/g_m",
        "a_0 + b_0 = 2",
        "b_9 = 0",
        "A_v = K*(1 + a_1*s)/(1 + b_1*s + b_2*s^2)",
        "Z_out = 1/(1/R_E + (beta + 1 + s*r_pi*C_pi)/(r_pi + (1 + s*r_pi*C_pi)*(R_S || (1/(s*C_mu)))))",
    ],
)
def test_names_of_the_circuit_mean_what_the_trade_means_by_them(follower, line):
    assert judged(follower, line).passed


@pytest.mark.parametrize(
    "line",
    ["v_out = A_v", "v_b = v_b + V_s - 1", "v_out = 2", "A_v = v_out", "beta = g_m*r_pi + 1", "V_s = 1"],
)
def test_a_line_that_holds_for_one_level_of_the_drive_only_is_refused(follower, line):
    assert outcomes(judged(follower, line)) == ["mistake"]


def test_names_that_lines_define_can_be_used_below_and_not_above(follower):
    report = judged(follower, "tau = 2*T", "T = b_1", "w = 1/T", "w*b_1 = 1", "w*b_1 = 2")
    assert outcomes(report) == ["refused", "definition", "definition", "true", "mistake"]
    assert "nothing here is called T" in report.verdicts[0].why


def test_what_a_band_took_out_may_not_appear_and_the_reason_is_told(banded):
    report = judged(
        banded, "v_x = V_s", "v_b = s*C_1*R_S", "v_vcc = 0", "i_C_1 = 0", "Q1 = 2", "K = V_CC"
    )
    assert outcomes(report) == ["true", "refused", "true", "refused", "refused", "refused"]
    assert (
        "C_1 is not in the circuit of the high band (short: coupling capacitor" in report.verdicts[1].why
    )
    assert "V_CC" in report.verdicts[5].why


def test_merged_names_and_their_parts_may_stand_side_by_side(banded):
    report = judged(
        banded,
        "R_B = R_1 || R_2",
        "K = -g_m*R_C*(R_1 || R_2 || r_pi)/(R_S + (R_B || r_pi))",
        "i_R_B = v_b/R_B",
        "i_R_B = i_R_2 - i_R_1",
    )
    assert report.passed


def test_r_o_that_the_model_does_without_is_refused_with_the_reason(banded):
    (verdict,) = judged(banded, "K = -g_m*(R_C || r_o)").verdicts
    assert verdict.outcome == "refused"
    assert verdict.why == "r_o is taken as infinite: V_A not given"


def test_ties_are_imposed_and_those_that_cannot_be_are_refused(follower):
    line = "K = (beta + 1)*R_E/(2*R_E + r_pi + (beta + 1)*R_E)"
    assert judged(follower, line, given=["R_S = 2*R_E"]).passed
    assert not judged(follower, line).passed
    assert not judged(follower, line, given=["R_S = 3*R_E"]).passed
    report = judged(follower, line, given=["R_S = 2*R_E", "R_E^2 = 3", "v_b = 1", "R_S = 4*R_E"])
    assert [tie.text for tie, _ in report.refused_ties] == ["v_b = 1", "R_E^2 = 3", "R_S = 4*R_E"]


def test_definitions_may_not_take_the_names_of_the_circuit(follower):
    report = judged(follower, "K = K", define={"R_S": "3", "R_x": "R_S || r_pi", "beta": "g_m*r_pi"})
    assert [each.name for each, _ in report.refused_definitions] == ["R_S"]


def test_definitions_that_go_round_in_a_circle_are_refused(follower):
    report = judged(follower, "K = a", define={"a": "b + 1", "b": "a - 1"})
    assert outcomes(report) == ["refused"]
    assert "defined" in report.verdicts[0].why


@pytest.mark.parametrize(
    ("line", "outcome"),
    [
        ("sqrt(R_S)*sqrt(R_E) = sqrt(R_S*R_E)", "leap"),
        ("sqrt(R_S)^2 = R_S", "leap"),
        ("sqrt(b_2)/b_1 = 1/(b_1/sqrt(b_2))", "leap"),
        ("sqrt(R_S + R_E) = sqrt(R_S) + sqrt(R_E)", "mistake"),
        ("sqrt(R_S^2 - 2*R_S*R_E + R_E^2) = R_S - R_E", "mistake"),
        ("sqrt(R_S^2) = -R_S", "mistake"),
        ("sqrt(-R_S^2) = R_S", "undecided"),
    ],
)
def test_square_roots_are_the_positive_ones_and_never_guessed(follower, line, outcome):
    assert outcomes(judged(follower, line)) == [outcome]


@pytest.mark.parametrize("line", ["1/0 = 3", "K = 1/(R_S - R_S)", "K = R_E || (-R_E)", "0^(-1) = 1"])
def test_a_line_without_a_value_is_not_decided_and_gives_no_traceback(follower, line):
    assert outcomes(judged(follower, line)) == ["undecided"]


def test_other_drives_are_at_zero_unless_a_line_names_them():
    adder = solution_of(TWO_DRIVES, "A_1")
    report = judged(
        adder,
        "v_out = -R_F/R_1*V_1",
        "V_1/R_1 + V_2/R_2 + v_out/R_F = 0",
        "v_out = A_1*V_1 + A_2*V_2",
        "v_out = A_1*V_1 + 2*A_2*V_2",
    )
    assert [v.passed for v in report.verdicts] == [True, True, True, False]


def test_the_proof_states_its_chance_and_exact_algebra_agrees(follower):
    (verdict,) = judged(follower, "K = R_E/(R_E + r_e + R_S/(beta + 1))", exact=True).verdicts
    assert "3 random points modulo 2⁶¹ − 1; degree " in verdict.proof
    assert verdict.proof.endswith("identical when multiplied out in all symbols")


def test_a_name_standing_for_itself_is_never_proposed(follower):
    for line in ("v_b = v_out*(1 - 1/R_E)", "K = R_E/R_S", "r_e = 1/g_m", "b_1 = R_S*C_mu"):
        (verdict,) = judged(follower, line).verdicts
        left = verdict.line.text.split(" ")[0]
        assert verdict.outcome == "mistake"
        for edit in verdict.edits:
            assert left not in repr(edit.line.right).split("'")


def test_every_proposal_is_true_at_points_that_the_search_did_not_use(follower):
    names = Names(follower, ())
    (point,) = points_of(names, Ties(names, ()), stream_of(names, "others", "test"), count=1)
    (verdict,) = judged(follower, "K = beta*R_E/(R_S + r_pi + beta*R_E)").verdicts
    for edit in verdict.edits:
        assert (point.value(edit.line.left) - point.value(edit.line.right)) % PRIME == 0


def test_the_same_derivation_gives_the_same_report(follower):
    lines = ("K = beta*R_E/(R_S + (beta + 1)*R_E)", "v_b = v_out*(1 + 1/(R_E*g_m))")
    assert judged(follower, *lines) == judged(follower, *lines)


def test_an_approximation_is_priced_over_the_band_and_at_the_corners(follower):
    report = judged(
        follower, "A_v ~ 1/(1 + s*R_S*C_mu)", "K ~ 1", "b_1 ~ R_S*C_mu", "A_v ~ 1/(1 + s*R_S*C_mu/3)"
    )
    assert outcomes(report) == ["within", "within", "beyond", "beyond"]
    pole = report.verdicts[0].pricing.errors.poles[0]
    assert pole.error == pytest.approx(0.0825, abs=0.001)
    # Worked by hand: R_E·(β + 1)/(R_S + r_π + (β + 1)·R_E) with β = 100.
    exact = 101 * 2200 / (600 + 2500 + 101 * 2200)
    assert report.verdicts[1].pricing.relative == pytest.approx(1 / exact - 1)
    (left_out,) = report.verdicts[1].pricing.neglected
    assert left_out.ratio == pytest.approx(1 - exact)
    assert "2 %" in report.verdicts[2].why


def test_an_approximation_that_is_exact_says_so(follower):
    (verdict,) = judged(follower, "K ~ (beta + 1)*R_E/(R_S + r_pi + (beta + 1)*R_E)").verdicts
    assert (verdict.outcome, verdict.why) == ("within", "it is even exact")


def test_three_hundred_terms_are_judged_within_a_second(follower):
    chance = random.Random(5)
    names = ["R_S", "R_E", "r_pi", "g_m*R_S*r_pi", "C_pi/C_mu*R_E"]
    terms = [f"{chance.randrange(2, 99)}*{chance.choice(names)}" for _ in range(150)]
    line = "R_S + " + " + ".join(terms) + " - (" + " + ".join(terms) + ") = R_E"
    begun = time.process_time()
    (verdict,) = judged(follower, line).verdicts
    assert time.process_time() - begun < 1
    assert verdict.outcome == "mistake"


def test_coefficients_are_right_before_and_after_what_ties_cancel():
    # A compensated divider: with equal time constants it has no corner at all.
    divider = solution_of("""
[sheet]
title = "Probe"
[drives]
V_s = { voltage = ["in", "gnd"] }
[parts]
R_1 = { resistor = "9M", between = ["in", "out"] }
C_1 = { capacitor = "10p", between = ["in", "out"] }
R_2 = { resistor = "1M", between = ["out", "gnd"] }
C_2 = { capacitor = "90p", between = ["out", "gnd"] }
[find.H]
voltage = "out"
per = "V_s"
""")
    lines = ("b_1 = (R_1 || R_2)*(C_1 + C_2)", "b_1 = 0", "a_1 = 0", "H = K", "b_1 = R_1*C_2")
    report = judged(divider, *lines, given=["C_2 = R_1*C_1/R_2"])
    assert [v.passed for v in report.verdicts] == [True, True, True, True, False]
    assert [v.passed for v in judged(divider, *lines).verdicts] == [True, False, False, False, False]


@pytest.mark.parametrize(
    "line",
    [
        "K = " + "1/(1 + " * 95 + "R_S" + ")" * 95,
        "K = ((v_b + v_out + V_s)^64)^15",
        "K = (R_S + R_E + r_pi + 1/g_m)^64",
        "v_b*v_out*A_v*K*b_1 = a_1^64 + b_2^-64",
        "K = " + "sqrt(1 + " * 12 + "R_S" + ")" * 12,
    ],
)
def test_lines_that_nobody_writes_are_judged_without_a_traceback_or_a_hang(follower, line):
    begun = time.process_time()
    assert outcomes(judged(follower, line))[0] in ("mistake", "undecided")
    assert time.process_time() - begun < 5


def test_ties_under_which_there_is_no_response_are_an_input_error(follower):
    with pytest.raises(InputError):
        judged(follower, "K = 1", given=["R_S = -r_pi - (g_m*r_pi + 1)*R_E"])


def test_an_approximation_of_a_name_that_nobody_defined_is_refused_with_the_cure(follower):
    (verdict,) = judged(follower, "f_c ~ 1/(2*pi*b_1)").verdicts
    assert (verdict.outcome, verdict.cure) == (
        "refused",
        'say first what it is exactly, by a line "f_c = ..."',
    )
