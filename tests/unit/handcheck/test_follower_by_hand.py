"""Fifteen lines of a follower's derivation: what is right, where it goes wrong, and what is carried on."""

from __future__ import annotations

import pytest
from follower import RIGHT, TOPOLOGY, WRONG, WRONG_TWICE, lines
from hand_lines import judged, solution_of

from derive.expressions.text import to_text
from derive.handcheck.report import HandReport


@pytest.fixture(scope="module")
def stage():
    return solution_of(TOPOLOGY, "A_v")


def outcomes(report: HandReport) -> list[str]:
    return [verdict.outcome for verdict in report.verdicts]


def test_a_right_derivation_stands_line_by_line_and_each_line_follows(stage):
    report = judged(stage, *RIGHT)
    assert report.passed
    assert outcomes(report) == ["true", "true", "definition", *["true"] * 12]
    # Laws come from the circuit itself, the rest from lines above.
    assert [v.sources for v in report.verdicts[:2]] == [(), ()]
    assert all(v.sources and max(v.sources) < v.line.number for v in report.verdicts[3:])


def test_two_slips_are_found_with_their_cures_and_what_is_carried_on_is_told_apart(stage):
    report = judged(stage, *lines(WRONG))
    assert outcomes(report) == [
        *["true", "mistake", "definition", "true", "true", "true", "mistake"],
        *["carried"] * 5,
        *["leap", "carried", "carried"],
    ]
    first, second = (v for v in report.verdicts if v.outcome == "mistake")
    assert report.first_mistake is first
    assert to_text(first.edits[0].line) == "v_out/R_E = (v_b - v_out)*(g_m + s*C_pi + 1/r_pi)"
    assert second.edits[0].kind == "dropped factor"
    assert second.cure == "multiply (v_b - v_out)*(1/r_pi + s*C_pi) by R_S"
    # Each carried line names a wrong line above it, in the end line 7.
    wrong = {7}
    for verdict in report.verdicts[7:]:
        if verdict.outcome == "carried":
            assert verdict.sources[0] in wrong
            wrong.add(verdict.line.number)
    assert not report.passed


def test_a_second_slip_in_what_is_wrong_already_is_found_by_what_it_should_follow_from(stage):
    report = judged(stage, *lines(WRONG_TWICE))
    found = {v.line.number: v for v in report.verdicts}
    assert [n for n, v in found.items() if v.outcome == "mistake"] == [4, 10]
    assert [n for n, v in found.items() if v.outcome == "carried"] == [5, 8, 9, 11, 12]
    assert found[4].edits[0].kind == "sign"
    assert found[4].edits[0].makes == "true"
    edit = found[10].edits[0]
    assert (edit.kind, edit.makes, edit.says) == (
        "dropped factor",
        "follow",
        "multiply 1/r_pi + s*C_pi by R_S",
    )
    # Taken seconds for siemens: the second slip shows in the units too.
    assert [remark.says for remark in found[10].dimensions] == ["this is in 1/Ω, and is added to no unit"]
    assert found[8].sources[0] == 5
    assert found[11].sources[0] == 10


def test_a_true_line_out_of_nowhere_is_accepted_and_marked(stage):
    report = judged(stage, RIGHT[0], RIGHT[11])
    assert outcomes(report) == ["true", "leap"]
    assert report.verdicts[1].why == "true of the circuit, not from the line above"
    assert report.passed


def test_coefficients_read_off_a_wrong_response_are_carried(stage):
    report = judged(stage, WRONG[11], WRONG[12])
    assert outcomes(report) == ["mistake", "carried"]
    assert report.verdicts[1].sources == (1,)


def test_a_mistake_is_not_excused_by_another_one_that_it_does_not_follow_from(stage):
    report = judged(stage, "K = (beta + 1)*R_E/(R_S + (beta + 1)*R_E)", "a_1 = C_pi/g_m")
    assert outcomes(report) == ["mistake", "mistake"]
