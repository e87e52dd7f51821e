"""The step response against scipy's, against closed forms, and where there is none."""

import math
from fractions import Fraction

import numpy as np
import pytest
from scipy import signal

from derive.normalise.exact_response import ExactResponse
from derive.response.step import curve_of_step, rise_of, step_response


def response(top, bottom):
    return ExactResponse(tuple(map(Fraction, top)), tuple(map(Fraction, bottom)))


def random_response(seed):
    """Give a stable response of up to five poles, real and in pairs, some of them twice."""
    chance = np.random.default_rng(seed)
    bottom = np.polynomial.Polynomial([1])
    for _ in range(chance.integers(1, 3)):
        corner = 10 ** chance.uniform(1, 4)
        factor = np.polynomial.Polynomial([1, float(Fraction(1 / corner).limit_denominator(10**6))])
        bottom = bottom * factor ** int(chance.integers(1, 3))
    if chance.random() < 0.6:
        corner, quality = 10 ** chance.uniform(1, 4), chance.uniform(0.6, 6)
        bottom = bottom * np.polynomial.Polynomial([1, 1 / (quality * corner), 1 / corner**2])
    degree = len(bottom.coef) - 1
    top = [float(c) for c in chance.uniform(-1, 1, chance.integers(1, degree + 2))]
    scaled = [c * b for c, b in zip(top, bottom.coef, strict=False)]
    return response([Fraction(c) for c in scaled], [Fraction(float(c)) for c in bottom.coef])


@pytest.mark.parametrize("seed", range(12))
def test_a_step_response_agrees_with_that_of_another_library(seed):
    found = random_response(seed)
    step = step_response(found)
    slowest = min(abs(pole.real) for pole in step.poles)
    times = np.linspace(0, 5 / slowest, 300)
    system = signal.lti([float(c) for c in found.top[::-1]], [float(c) for c in found.bottom[::-1]])
    _, expected = signal.step(system, T=times)
    ours = [step(t) for t in times]
    assert np.max(np.abs(ours - expected)) < 2e-5 * max(1e-6, np.max(np.abs(expected)))


def test_one_pole_rises_in_two_point_two_time_constants():
    step = step_response(response([1], [1, Fraction(1, 1000)]))
    assert step(1e-3) == pytest.approx(1 - math.exp(-1), rel=1e-12)
    rise = rise_of(step, 1.0, 6e-3)
    # ln 9 time constants: textbook standard.
    assert rise.seconds == pytest.approx(1e-3 * math.log(9), rel=1e-9)
    assert rise.overshoot == 0


def test_a_pole_of_threefold_kind_follows_its_closed_form():
    step = step_response(response([1], [1, 3, 3, 1]))
    for t in (0.3, 1.0, 4.0):
        assert step(t) == pytest.approx(1 - math.exp(-t) * (1 + t + t * t / 2), rel=1e-12)


def test_a_pair_of_poles_overshoots_by_the_textbook_amount():
    damping = Fraction(3, 10)
    step = step_response(response([1], [1, 2 * damping, 1]))
    rise = rise_of(step, 1.0, 40.0)
    expected = math.exp(-math.pi * 0.3 / math.sqrt(1 - 0.09))
    assert rise.overshoot == pytest.approx(expected, rel=5e-3)


def test_a_negative_end_has_a_rise_too():
    step = step_response(response([-5], [1, 1]))
    assert rise_of(step, -5.0, 6.0).seconds == pytest.approx(math.log(9), rel=1e-9)


def test_what_is_there_at_once_has_no_rise():
    step = step_response(response([1, 1], [1, 2]))
    assert step(0.0) == pytest.approx(0.5)
    step = step_response(response([1, Fraction(19, 10)], [1, 2]))
    assert rise_of(step, 1.0, 12.0) is None


def test_a_response_that_grows_with_frequency_has_no_step_response():
    assert step_response(response([0, 0, 1], [1, 1])) is None


def test_an_integrator_ramps_and_does_not_rise_to_an_end():
    step = step_response(response([1], [0, 1]))
    assert step(3.0) == pytest.approx(3.0)
    assert rise_of(step, 0.0, 1.0) is None


def test_poles_far_apart_keep_their_figures():
    # 1/((1 + s)(1 + 1e-9·s)): after the fast one the slow one alone.
    step = step_response(response([1], [1, 1 + Fraction(1, 10**9), Fraction(1, 10**9)]))
    assert step(1e-6) == pytest.approx(1e-6, rel=2e-3)
    assert step(2.0) == pytest.approx(1 - math.exp(-2.0), rel=1e-8)


def test_a_curve_has_points_enough_for_every_swing():
    step = step_response(response([1], [1, Fraction(1, 50), 1]))
    curve = curve_of_step("H", step, 400.0)
    values = [value for _, value in curve.points]
    turns = sum((a - b) * (b - c) < 0 for a, b, c in zip(values, values[1:], values[2:], strict=False))
    assert turns >= 2 * 400 / (2 * math.pi) - 4
