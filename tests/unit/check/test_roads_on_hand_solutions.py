"""Every road passes on circuits whose responses were worked by hand."""

from dataclasses import replace

import pytest
from hand_solutions import CIRCUITS, solution_of

from derive.check.judge import check, check_all
from derive.check.roads import (
    asymptotes,
    dimensions,
    generic,
    identity,
    nominal,
    steps,
)
from derive.devices.elements import CurrentDrive

IN_PLACE = (identity, generic, nominal, asymptotes, dimensions, steps)


@pytest.mark.parametrize("name", CIRCUITS)
@pytest.mark.parametrize("road", IN_PLACE, ids=lambda road: road.NAME)
def test_a_right_answer_passes(road, name):
    verdict = road.judge(solution_of(name))
    assert verdict.passed is True, verdict.measured


def test_another_engine_agrees_on_every_circuit():
    verdicts = check_all([solution_of(name) for name in CIRCUITS], lcapy_seconds=60)
    for name, row in zip(CIRCUITS, verdicts, strict=True):
        assert row[6].name == "another engine"
        assert row[6].passed is True, (name, row[6].measured)


def test_verdicts_come_in_one_order_and_are_the_same_each_time():
    first = check(solution_of("coupled coils"), lcapy=False)
    assert first == check(solution_of("coupled coils"), lcapy=False)
    assert [verdict.name for verdict in first] == [
        "identity in all symbols",
        "generic values",
        "nominal values",
        "asymptotes",
        "dimensions",
        "every step",
        "another engine",
        "readable form",
        "time constants",
        "Miller's theorem",
        "estimates",
        "assumptions",
        "short forms",
    ]
    assert first[6].passed is None
    assert first[6].measured == "not asked for"


def test_asymptotes_are_named_as_they_are():
    def measured(name):
        return asymptotes.judge(solution_of(name)).measured

    assert measured("low-pass") == "s → 0: equal; s → ∞: zero in both"
    assert measured("integrator with an ideal op amp") == ("s → 0: infinite in both; s → ∞: zero in both")
    assert measured("capacitive divider, a loop of capacitors and the source") == (
        "s → 0: zero in both; s → ∞: equal"
    )


def test_the_bound_on_a_false_pass_is_stated_with_its_degree():
    limit = identity.judge(solution_of("low-pass")).limit
    # 1/(1 + s·R·C) against a 7-row tableau: small degrees over 2⁶⁰, some 9·10⁻¹⁹ each.
    assert limit == "a wrong result passes a point with a chance of 6·10⁻¹⁸ at most (degree 6 or less)"


def test_drives_of_two_kinds_have_no_common_dimension_to_judge():
    solution = solution_of("difference of two drives")
    system = solution.derivation.system
    first, second = system.small_signal.drives
    drives = (first, CurrentDrive(second.name, second.nodes))
    circuit = replace(system.small_signal, drives=drives)
    derivation = replace(solution.derivation, system=replace(system, small_signal=circuit))
    verdict = dimensions.judge(replace(solution, derivation=derivation))
    assert verdict.passed is None
    assert verdict.measured == "not tried: the drives are of two kinds"


def test_a_response_that_vanishes_at_nominal_values_is_judged_exactly():
    bridge = "balanced bridge, whose output vanishes at its nominal values only"
    assert nominal.judge(solution_of(bridge)).measured == "no response at these values, exactly"


def test_an_open_value_leaves_the_nominal_check_untried_and_the_others_at_work():
    solution = solution_of("low-pass", open_value="R_1")
    verdict = nominal.judge(solution)
    assert verdict.passed is None
    assert verdict.measured == "not tried: a value is left open"
    assert identity.judge(solution).passed is True
