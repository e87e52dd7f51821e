"""The road of assumptions is made to fail: by a wrong reduced result, wrong errors, and wrong statuses."""

from __future__ import annotations

from dataclasses import replace

import pytest
from assumed import solutions_of
from follower_stage import ASSUMED, STAGE

from derive.check.roads.assumptions import judge
from derive.expressions.tree import Name, Product, Sum
from derive.expressions.walk import substitute


@pytest.fixture(scope="module")
def solution():
    return next(each for each in solutions_of(STAGE + ASSUMED) if each.band.band == "high")


def with_entry(solution, place, **changes):
    entries = list(solution.register.entries)
    entries[place] = replace(entries[place], **changes)
    return replace(solution, register=replace(solution.register, entries=tuple(entries)))


def with_reduced(solution, place, **changes):
    return with_entry(
        solution, place, reduced=replace(solution.register.entries[place].reduced, **changes)
    )


def failed(solution):
    verdict = judge(solution)
    assert verdict.passed is False, verdict
    return verdict.measured


def test_a_right_register_passes(solution):
    verdict = judge(solution)
    assert verdict.passed is True
    assert verdict.measured == "3 assumptions: equal at 2 points, errors agree"


def test_no_assumptions_are_no_verdict(solution):
    assert judge(replace(solution, register=None)).passed is None


@pytest.mark.parametrize("place", [0, 1, 2])
def test_a_wrong_reduced_result_is_seen(solution, place):
    form = solution.register.entries[place].reduced.form
    doubled = replace(form, gain=Product((Name("r_pi"), form.gain)))
    assert f"assumption {place + 1}" in failed(with_reduced(solution, place, form=doubled))


@pytest.mark.parametrize("place", [0, 1, 2])
def test_swapped_symbols_in_a_reduced_result_are_seen(solution, place):
    form = solution.register.entries[place].reduced.form
    swapped = {"R_S": Name("R_E"), "R_E": Name("R_S")}
    wrong = replace(form, denominator=tuple(substitute(value, swapped) for value in form.denominator))
    assert f"assumption {place + 1}" in failed(with_reduced(solution, place, form=wrong))


def test_a_part_that_was_not_removed_is_seen(solution):
    assert "another reduced result" in failed(with_reduced(solution, 0, form=solution.form))


def test_a_term_too_many_struck_is_seen(solution):
    struck = solution.register.entries[1].reduced.struck
    assert "put back" in failed(with_reduced(solution, 1, struck=struck[1:]))
    more = (*struck, replace(struck[0], term=Sum((Name("R_S"), Name("R_E")))))
    assert "put back" in failed(with_reduced(solution, 1, struck=more))


@pytest.mark.parametrize("field", ["gain", "magnitude_db", "phase_deg", "high_edge"])
@pytest.mark.parametrize("place", [0, 1, 2])
def test_a_wrong_error_is_seen(solution, field, place):
    errors = solution.register.entries[place].together
    wrong = replace(errors, **{field: getattr(errors, field) * 1.01 + 1e-4})
    assert f"assumption {place + 1}" in failed(with_entry(solution, place, together=wrong))


def test_a_wrong_error_of_an_assumption_by_itself_is_seen(solution):
    errors = solution.register.entries[2].alone
    wrong = replace(errors, magnitude_db=errors.magnitude_db * 1.01 + 1e-4)
    assert "by itself" in failed(with_entry(solution, 2, alone=wrong))


def test_a_wrong_error_at_a_frequency_is_seen(solution):
    errors = solution.register.entries[0].together
    moved = (replace(errors.at[0], phase_deg=errors.at[0].phase_deg + 0.01), *errors.at[1:])
    assert "the errors at" in failed(with_entry(solution, 0, together=replace(errors, at=moved)))


def test_a_wrong_or_missing_pole_is_seen(solution):
    errors = solution.register.entries[0].together
    first = replace(errors.poles[0], error=errors.poles[0].error + 0.001)
    assert "poles" in failed(
        with_entry(solution, 0, together=replace(errors, poles=(first, *errors.poles[1:])))
    )
    assert "poles" in failed(with_entry(solution, 0, together=replace(errors, poles=errors.poles[1:])))
    errors = solution.register.entries[2].together
    assert "poles" in failed(with_entry(solution, 2, together=replace(errors, lost_poles=())))


def test_a_wrong_ratio_is_seen(solution):
    ratio = solution.register.entries[0].ratio
    assert "ratio" in failed(with_entry(solution, 0, ratio=ratio * 1.001))


def test_a_wrong_status_is_seen(solution):
    for place, entry in enumerate(solution.register.entries):
        other = "holds" if entry.status == "fails" else "fails"
        assert "status" in failed(with_entry(solution, place, status=other))


def test_an_assumption_said_to_hold_where_a_corner_breaks_it_is_seen():
    text = STAGE + '[budget]\nmagnitude = "9 dB"\ngain = "9 %"\n[[assume]]\nthat = "R_B -> inf"\n'
    solution = next(each for each in solutions_of(text) if each.band.band == "mid")
    (entry,) = solution.register.entries
    assert entry.status == "fails at a corner"
    assert judge(solution).passed is True
    assert "corner" in failed(with_entry(solution, 0, status="holds"))
    elsewhere = replace(entry.worst, at=tuple(words.replace("+", "−") for words in entry.worst.at))
    assert "corner" in failed(with_entry(solution, 0, worst=elsewhere))
