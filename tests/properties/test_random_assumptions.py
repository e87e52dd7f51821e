"""Random stages with random assumptions: errors agree with matrices stamped by the test itself."""

from __future__ import annotations

from dataclasses import replace
from functools import cache
from itertools import islice

import numpy as np
import pytest
from assumed import solutions_of
from assumed_circuits import Stage, polynomials, reduce, removed_response, symbolic, worst_errors
from assumed_comparison import HIGH, LOW, close, differences, disputed, drawn_stages

COUNT, BATCH = 40, 10


@cache
def drawn(batch: int):
    return list(islice(drawn_stages(f"assumptions {batch}"), BATCH))


@pytest.mark.parametrize("batch", range(COUNT // BATCH))
def test_errors_of_reduced_results_agree_with_matrices_stamped_here(batch):
    for stage, solution in drawn(batch):
        assert differences(stage, solution) == [], stage.text


def test_an_error_that_is_wrong_in_the_fourth_digit_would_be_seen():
    stage, solution = drawn(0)[0]
    entry = solution.register.entries[0]
    wrong = replace(entry.together, magnitude_db=entry.together.magnitude_db * 1.005 + 5e-5)
    register = replace(solution.register, entries=(replace(entry, together=wrong),))
    assert any("magnitude" in words for words in differences(stage, replace(solution, register=register)))


@pytest.mark.parametrize("batch", range(COUNT // BATCH))
def test_removed_and_shorted_parts_agree_with_the_stage_without_them(batch):
    for stage, solution in drawn(batch):
        first = solution.register.entries[0]
        form, name, to = stage.assumptions[first.number - 1]
        if form != "->" or first.alone is None:
            continue
        frequencies = np.geomspace(LOW, HIGH, 61)
        error = removed_response(stage, {name: to}, frequencies) / removed_response(
            stage, {}, frequencies
        )
        magnitude = 20 * np.log10(np.abs(error))
        assert np.max(np.abs(magnitude)) <= abs(first.alone.magnitude_db) * (1 + 1e-6) + 1e-6, stage.text
        at_end = next(each for each in first.alone.at if each.hertz == HIGH)
        assert close(float(magnitude[-1]), at_end.magnitude_db), stage.text


@pytest.mark.parametrize("batch", range(COUNT // BATCH))
def test_the_road_of_assumptions_agrees_on_right_registers(batch):
    for stage, solution in drawn(batch):
        assert disputed(solution) == "", stage.text


def test_half_a_turn_is_one_error_whichever_its_sign():
    # Opening R_3 takes the wanted sign from the gain: the phase is off by 180 degrees at every frequency.
    parts = (
        ("R_1", ("n0", "n1"), "22k"),
        ("R_2", ("n1", "gnd"), "1M"),
        ("R_3", ("n1", "n2"), "47R"),
        ("R_4", ("n2", "gnd"), "150k"),
        ("g_1", ("n2", "gnd", "n1", "gnd"), "10 mS"),
    )
    stage = Stage(parts, (("->", "R_3", "inf"),))
    (solution,) = solutions_of(stage.text)
    assert abs(solution.register.entries[0].together.phase_deg) == 180
    assert disputed(solution) == ""
    entry = solution.register.entries[0]
    at = (replace(entry.together.at[0], phase_deg=170.0), *entry.together.at[1:])
    wrong = replace(entry, together=replace(entry.together, at=at))
    assert disputed(replace(solution, register=replace(solution.register, entries=(wrong,))))


def test_stages_have_assumptions_of_every_form_on_the_circuit_and_on_coefficients():
    every = [pair for batch in range(COUNT // BATCH) for pair in drawn(batch)]
    assert len(every) == COUNT
    entries = [entry for _, solution in every for entry in solution.register.entries]
    assert {entry.assumption.form for entry in entries} == {
        "to_inf",
        "to_zero",
        "much_greater",
        "much_less",
        "equal",
    }
    assert {entry.reduced.how for entry in entries} == {"circuit", "coefficients", "substitution"}
    assert {entry.status for entry in entries} >= {"holds", "fails"}
    assert sum(len(entries_of(solution)) > 1 for _, solution in every) > COUNT // 4


def entries_of(solution):
    return solution.register.entries


def test_a_stage_that_strikes_by_another_rule_would_be_seen():
    parts = (
        ("R_1", ("n0", "n1"), "1k"),
        ("R_2", ("n1", "gnd"), "22k"),
        ("R_3", ("n1", "n2"), "1k"),
        ("C_1", ("n2", "gnd"), "1n"),
    )
    stage = Stage(parts, ((">>", "R_2", "R_1"),))
    (solution,) = solutions_of(stage.text)
    response, symbols = symbolic(stage)
    other = reduce(response, symbols, ("->", "R_1", "0"))
    wrong = worst_errors(polynomials(other, stage), polynomials(response, stage), LOW, HIGH)
    assert not close(solution.register.entries[0].together.magnitude_db, wrong[0])
