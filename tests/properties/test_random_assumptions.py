"""Random stages with random assumptions: errors agree with matrices stamped by the test itself."""

from __future__ import annotations

import math
import random
from functools import cache

import numpy as np
import pytest
from assumed import solutions_of
from assumed_circuits import Stage, draw, polynomials, reduce, removed_response, symbolic, worst_errors

from derive.check.roads import assumptions as road
from derive.errors import InputError

COUNT, BATCH = 60, 10
LOW, HIGH = 10.0, 1e7
WORDS = (
    "removes the whole response",
    "makes the response infinite",
    "contradicts",
    "says the same",
    "changes nothing",
)


@cache
def drawn(batch: int):
    """Give stages that are not refused, each with its result; what is refused has one of the reasons."""
    chance = random.Random(f"assumptions {batch}")
    found = []
    while len(found) < BATCH:
        stage = draw(chance)
        try:
            (solution,) = solutions_of(stage.text)
        except InputError as error:
            if not any(word in str(error) for word in WORDS):
                raise
            continue
        found.append((stage, solution))
    return found


def close(one: float, other: float) -> bool:
    return math.isclose(one, other, rel_tol=2e-3, abs_tol=1e-5)


@pytest.mark.parametrize("batch", range(COUNT // BATCH))
def test_errors_of_reduced_results_agree_with_matrices_stamped_here(batch):
    for stage, solution in drawn(batch):
        response, symbols = symbolic(stage)
        exact, reduced = polynomials(response, stage), response
        for entry in solution.register.entries:
            reduced = reduce(reduced, symbols, stage.assumptions[entry.number - 1])
            own = polynomials(reduced, stage)
            if not (any(own[0]) and any(exact[0])):
                # Nothing is relative to a response that is zero at these values.
                assert (entry.together, entry.status) == (None, "fails"), stage.text
                continue
            magnitude, phase = worst_errors(own, exact, LOW, HIGH)
            errors = entry.together
            assert close(errors.magnitude_db, magnitude), (stage.text, entry.number)
            assert close(abs(errors.phase_deg), abs(phase)), (stage.text, entry.number)
            if errors.gain is not None:
                assert close(errors.gain, gain_error(own, exact)), (stage.text, entry.number)
            assert sorted(-abs(root.approximate) for root in errors.poles) == pytest.approx(
                sorted(-abs(root) for root in np.roots(own[1]) if abs(root)), rel=1e-6
            )


def gain_error(reduced, exact) -> float:
    """Give the error of the lowest coefficients' ratio."""
    gains = []
    for sides in (reduced, exact):
        lowest = [next(value for value in reversed(side) if value) for side in sides]
        gains.append(lowest[0] / lowest[1])
    return gains[0] / gains[1] - 1


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
        verdict = road.judge(solution)
        assert verdict.passed is True, (stage.text, verdict.measured)


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
