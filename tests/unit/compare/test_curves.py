"""The curves against numpy, their phase without jumps, and the range that they are shown in."""

import math

import numpy as np
import pytest
from compared_stages import (
    BANDED,
    HIGH_PASS,
    INTEGRATOR,
    INVERTING,
    LOW_PASS,
    NOTCH,
    OP_AMP,
    RESONATOR,
    compared,
    stage,
)

from derive.normalise.exact_response import ExactResponse
from derive.response.curves import curve_of, range_of


def arrays(found):
    return tuple(
        np.array([getattr(point, name) for point in found.curve])
        for name in ("hertz", "decibels", "degrees")
    )


def low_pass(s):
    return 1 / (1 + s * 1e3 * 10e-9)


def high_pass(s):
    return s * 1e-4 / (1 + s * 1e-4)


def resonator(s):
    return 100 / (100 + s * 10e-3 + 1 / (s * 10e-9))


def op_amp(s):
    loop = 2 * np.pi * 1e6 / s / 100
    return 100 * loop / (1 + loop)


def banded(s):
    load = 1 / (1 / 9e3 + s * 1e-9)
    return load / (1e3 + 1 / (s * 1e-6) + load)


@pytest.mark.parametrize(
    ("text", "response"),
    [
        (LOW_PASS, low_pass),
        (HIGH_PASS, high_pass),
        (RESONATOR, resonator),
        (OP_AMP, op_amp),
        (BANDED, banded),
    ],
)
def test_curves_are_the_response_of_the_whole_circuit(text, response):
    hertz, decibels, degrees = arrays(stage(text))
    expected = response(2j * np.pi * hertz)
    assert decibels == pytest.approx(20 * np.log10(np.abs(expected)), abs=1e-9)
    turns = (degrees - np.degrees(np.angle(expected))) / 360
    assert turns == pytest.approx(np.round(turns), abs=1e-9)
    assert np.max(np.abs(np.diff(degrees))) < 180
    assert len(hertz) >= 200
    assert np.all(np.diff(hertz) > 0)


def test_an_inverting_stage_stands_at_minus_180_degrees():
    assert {point.degrees for point in stage(INVERTING).curve} == {-180.0}
    assert stage(LOW_PASS).curve[0].degrees == pytest.approx(0, abs=0.1)


def test_a_narrow_peak_is_not_missed():
    sharp = RESONATOR.replace("100R", "1m0")
    peak = max(stage(sharp).curve, key=lambda point: point.decibels)
    assert peak.decibels == pytest.approx(0, abs=0.01)
    assert peak.hertz == pytest.approx(1 / (2 * math.pi * 1e-5), rel=1e-6)


def test_a_notch_goes_deep_and_has_no_point_where_nothing_is_left():
    _, decibels, _ = arrays(stage(NOTCH))
    assert decibels.min() < -50
    assert np.all(np.isfinite(decibels))


def test_all_curves_share_one_range():
    found = compared(LOW_PASS, HIGH_PASS, BANDED)
    ends = {(stage.curve[0].hertz, round(stage.curve[-1].hertz, 3)) for stage in found.stages}
    assert len(ends) == 1
    ((low, high),) = ends
    assert low < 15.9 / 10
    assert high > 176.8e3 * 10


def test_the_range_is_whole_decades_around_all_edges():
    assert range_of([(20.0, 2e4)], [], []) == (0.1, 1e6)
    assert range_of([(None, 1e4)], [1e6], []) == (10.0, 1e7)
    assert range_of([(50.0, None)], [], []) == (1.0, 1e5)
    assert range_of([(None, None)], [], [300.0]) == (10.0, 1e4)
    low, high = range_of([(None, None)], [], [])
    assert low < high


def test_an_integrator_falls_by_20_db_a_decade():
    hertz, decibels, degrees = arrays(stage(INTEGRATOR))
    assert np.polyfit(np.log10(hertz), decibels, 1)[0] == pytest.approx(-20, abs=1e-9)
    assert degrees == pytest.approx(np.full(len(degrees), degrees[0]))


def test_nothing_is_drawn_of_a_response_that_is_zero():
    assert curve_of(ExactResponse((0,), (1,)), (1.0, 10.0), 3.0) == ()
