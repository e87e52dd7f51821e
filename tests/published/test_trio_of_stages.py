"""One transistor in three configurations: common practice about gain and bandwidth, from the results.

The cases share transistor, bias, source and load. That bandwidth rises as gain falls from the common
emitter over the common base to the follower, and that the follower's poles lie far above those of the
others, is common practice; the ratios asserted are set by hand from the textbook forms of each stage.
"""

from __future__ import annotations

import math
import tomllib
from functools import cache
from itertools import pairwise
from pathlib import Path

import numpy as np
import pytest

import derive

CASES = Path(__file__).parents[2] / "cases"
NAMES = ("trio_common_emitter", "trio_common_base", "trio_follower")
THERMAL_VOLTAGE = 1.380649e-23 * 300.15 / 1.602176634e-19
SHARED = ("R_S", "R_1", "R_2", "Q1", "R_E", "R_L", "C_1", "C_2")


@cache
def outcome_of(name):
    return derive.derive(derive.read(CASES / name / "topology.toml"), other_engine=False).outcome


def solution_of(name, find="A_v", band="high"):
    (found,) = [
        result.solution
        for result in outcome_of(name).results
        if result.solution.band.band == band and result.solution.derivation.system.find.name == find
    ]
    return found


def gain(name):
    return abs(float(solution_of(name).numbers.gain))


def poles(name):
    return [complex(pole.real, pole.imaginary) for pole in solution_of(name).numbers.poles]


def bandwidth_hz(name):
    """Give the lowest frequency at which the response is 3 dB down, by bisection of its own polynomials."""
    numbers = solution_of(name).numbers
    top, bottom = (
        np.polynomial.Polynomial([float(a / part[0]) for a in part])
        for part in (numbers.top, numbers.bottom)
    )

    def down(hertz):
        s = 2j * math.pi * hertz
        return abs(top(s) / bottom(s)) < math.sqrt(0.5)

    low, high = 1e3, 1e11
    assert down(high)
    assert not down(low)
    for _ in range(200):
        middle = math.sqrt(low * high)
        low, high = (low, middle) if down(middle) else (middle, high)
    return low


def collector_current(name):
    (device,) = outcome_of(name).point.devices
    return float(device.current)


def parts_of(name):
    return tomllib.loads((CASES / name / "topology.toml").read_text(encoding="utf-8"))


def test_the_three_share_transistor_source_load_and_bias_network():
    first, *others = (parts_of(name) for name in NAMES)
    for other in others:
        assert other["models"] == first["models"]
        assert other["supplies"] == first["supplies"]
        for part in SHARED:
            mine, theirs = first["parts"][part], other["parts"][part]
            kinds = ("resistor", "capacitor", "bipolar")
            assert [mine.get(kind) for kind in kinds] == [theirs.get(kind) for kind in kinds], part


# V_B − V_BE = I_C·(R_E·(1 + 1/β) + (R_1 ∥ R_2)/β), solved by hand for the constant V_BE of 0.65 V.
def test_collector_currents_are_equal_and_solve_the_bias_equation():
    thevenin, resistance = 12 * 22 / 104, 82e3 * 22e3 / 104e3
    by_hand = (thevenin - 0.65) / (1.8e3 * (1 + 1 / 180) + resistance / 180)
    for name in NAMES:
        assert collector_current(name) == pytest.approx(by_hand, rel=1e-9)
        assert collector_current(name) == pytest.approx(collector_current(NAMES[0]), rel=0.01)
        assert 0.9e-3 < collector_current(name) < 1.1e-3


def test_every_transistor_is_forward_active():
    for name in NAMES:
        assert outcome_of(name).point.passed


def test_bandwidth_rises_as_gain_falls():
    gains = [gain(name) for name in NAMES]
    bandwidths = [bandwidth_hz(name) for name in NAMES]
    assert gains == sorted(gains, reverse=True)
    assert bandwidths == sorted(bandwidths)
    # Not by a hair: each step is more than a factor of two.
    assert all(two < one / 2 for one, two in pairwise(gains))
    assert all(two > 2 * one for one, two in pairwise(bandwidths))


def test_poles_of_the_follower_lie_far_above_those_of_the_others():
    lowest = {name: min(map(abs, poles(name))) for name in NAMES}
    follower = lowest.pop("trio_follower")
    assert all(follower > 10 * other for other in lowest.values())


# g_m = I_C/V_T, r_e = α/g_m, C_π = g_m/(2π·f_T) − C_μ; then the textbook's gains and time constants.
def test_gains_and_corners_are_those_of_the_textbook_forms_in_numbers():
    g_m = collector_current(NAMES[0]) / THERMAL_VOLTAGE
    r_pi, r_e = 180 / g_m, 180 / 181 / g_m
    c_pi, c_mu = g_m / (2 * math.pi * 250e6) - 3e-12, 3e-12
    r_t = 1 / (1 / 4700 + 1 / 10e3)
    r_in = 1 / (1 / 75 + 1 / 82e3 + 1 / 22e3 + 1 / r_pi)
    assert gain("trio_common_emitter") == pytest.approx(r_in / 75 * g_m * r_t, rel=1e-9)
    b_1 = c_pi * r_in + c_mu * (r_in * (1 + g_m * r_t) + r_t)
    assert sum(-1 / p.real for p in poles("trio_common_emitter")) == pytest.approx(b_1, rel=1e-9)
    r_in = 1 / (1 / 75 + 1 / 1800 + 1 / r_e)
    assert gain("trio_common_base") == pytest.approx(r_in / 75 * g_m * r_t, rel=1e-9)
    corners = sorted([1 / (r_in * c_pi), 1 / (r_t * c_mu)])
    assert [abs(p) for p in poles("trio_common_base")] == pytest.approx(corners, rel=1e-9)
    assert 0.95 < gain("trio_follower") < 1


def test_only_the_common_emitter_multiplies_its_c_mu():
    bridging = {name: [view.symbol for view in solution_of(name).miller] for name in NAMES}
    assert bridging == {
        "trio_common_emitter": ["C_mu"],
        "trio_common_base": [],
        "trio_follower": ["C_pi"],
    }


def test_approximation_at_the_follower_is_refused():
    (view,) = solution_of("trio_follower").miller
    assert view.usable is False
    assert any("near +1" in reason for reason in view.reasons)


@pytest.mark.parametrize("name", NAMES)
def test_no_check_on_the_three_fails(name):
    assert outcome_of(name).passed
