"""The figures of stages against closed forms: gain, edges, gain-bandwidth product."""

import math
from fractions import Fraction

import pytest
from compared_stages import (
    BANDED,
    HIGH_PASS,
    INTEGRATOR,
    INVERTING,
    LOW_PASS,
    NOTCH,
    OP_AMP,
    OPEN,
    RESONATOR,
    TRANSIMPEDANCE,
    compared,
    stage,
)

TAU = 2 * math.pi


def test_low_pass_has_its_corner_and_its_gain_at_zero_frequency():
    found = stage(LOW_PASS)
    assert (found.gain.exact, found.at_hertz, found.low_hz) == (1, 0.0, None)
    assert found.high_hz == pytest.approx(1 / (TAU * 1e3 * 10e-9), rel=1e-12)
    assert found.gain_bandwidth_hz == pytest.approx(found.high_hz)


def test_high_pass_has_its_corner_and_its_gain_far_above():
    found = stage(HIGH_PASS)
    assert (found.gain.exact, found.at_hertz, found.high_hz) == (1, math.inf, None)
    assert found.low_hz == pytest.approx(1 / (TAU * 1e3 * 100e-9), rel=1e-12)
    assert found.gain_bandwidth_hz is None


def test_resonance_lies_between_its_edges():
    found = stage(RESONATOR)
    # f_0 ± R/(4πL) by the geometric mean: f_2 − f_1 = R/(2πL) and f_1·f_2 = f_0².
    middle = 1 / (TAU * math.sqrt(10e-3 * 10e-9))
    assert found.high_hz - found.low_hz == pytest.approx(100 / (TAU * 10e-3), rel=1e-9)
    assert found.at_hertz == pytest.approx(middle, rel=1e-9)
    assert found.gain.magnitude == pytest.approx(1, rel=1e-9)
    assert found.gain.degrees == pytest.approx(0, abs=1e-6)


def test_gain_bandwidth_product_of_a_one_pole_op_amp_is_its_unity_gain_frequency():
    found = stage(OP_AMP)
    assert found.gain.exact == 100
    assert found.high_hz == pytest.approx(1e4, rel=1e-9)
    assert found.gain_bandwidth_hz == pytest.approx(1e6, rel=1e-9)


def test_bands_give_the_gain_and_each_its_own_edge():
    found = stage(BANDED)
    assert found.bands == ("low", "mid", "high")
    assert (found.band, found.gain.exact) == ("mid", Fraction(9, 10))
    assert found.low_hz == pytest.approx(1 / (TAU * 10e3 * 1e-6), rel=1e-12)
    assert found.high_hz == pytest.approx(1 / (TAU * 900 * 1e-9), rel=1e-12)
    assert found.gain_bandwidth_hz == pytest.approx(0.9 * found.high_hz, rel=1e-12)


def test_gain_comes_from_the_high_band_where_that_is_all_there_is():
    found = stage('bands = ["high"]\n' + BANDED)
    assert (found.band, found.gain.exact, found.low_hz) == ("high", Fraction(9, 10), None)
    low = stage('bands = ["low"]\n' + BANDED)
    assert (low.band, low.at_hertz, low.gain.exact, low.high_hz) == (
        "low",
        math.inf,
        Fraction(9, 10),
        None,
    )


def test_an_inverting_gain_keeps_its_sign():
    found = stage(INVERTING)
    assert (found.gain.exact, found.gain.magnitude, found.gain.degrees) == (-5, 5.0, 180.0)
    assert (found.low_hz, found.high_hz) == (None, None)


def test_an_integrator_has_no_gain_at_mid_band_and_says_so():
    found = stage(INTEGRATOR)
    assert found.gain.exact is None
    assert math.isinf(found.gain.magnitude)
    assert "there is no band in which the response is constant" in found.remarks


def test_a_notch_says_that_it_crosses_the_line_twice():
    found = stage(NOTCH)
    assert found.gain.exact == 1
    assert any("2 times" in words for words in found.remarks)


def test_values_left_open_leave_no_figures():
    found = stage(OPEN)
    assert (found.gain, found.high_hz, found.input.level, found.output.level) == (None, None, None, None)
    assert found.curve == ()
    assert any("left open" in words for words in found.remarks)


def test_what_is_no_ratio_has_no_gain_bandwidth_product():
    text = TRANSIMPEDANCE.replace('R_2 = { resistor = "20k"', 'C_2 = { capacitor = "1n"')
    found = stage(text)
    assert found.gain.exact == 5000
    assert found.high_hz == pytest.approx(1 / (TAU * 5e3 * 1e-9))
    assert found.gain_bandwidth_hz is None


def test_an_impedance_may_be_compared_by_its_name():
    text = LOW_PASS + '[find.Z]\nimpedance = "out"\n'
    found = stage(text, find="Z")
    assert found.gain.exact == 1000
    assert (found.input.level, found.output.level, found.gain_bandwidth_hz) == (None, None, None)


def test_stages_stand_in_the_order_in_which_they_were_named():
    names = [found.name for found in compared(HIGH_PASS, LOW_PASS, BANDED).stages]
    assert names == ["high-pass", "low-pass", "coupled"]


def test_every_figure_is_checked():
    found = stage(BANDED)
    of = [name for name, _ in found.results]
    assert of == ["H, low band", "H, mid band", "H, high band", "input impedance", "output impedance"]
    assert all(any(v.passed for v in result.verdicts) for _, result in found.results)
    assert found.passed
