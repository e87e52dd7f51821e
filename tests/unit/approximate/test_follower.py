"""A follower that drives a cable: what dropping R_B, β ≫ 1 and a far pole cost, against formulas by hand.

The stage is that of the case line_buffer at its bias: I_C = 2.07 mA, so that g_m is 80 mS.
"""

from __future__ import annotations

import math

import numpy as np
import pytest
from assumed import registers_of, solutions_of
from follower_stage import ASSUMED, STAGE

from derive.check.roads import assumptions as road
from derive.expressions.text import to_text
from derive.readable.measure import leaves
from derive.sheet.final import explicit

R_S, R_1, R_2, R_E, R_ISO = 3300.0, 68e3, 82e3, 1800.0, 47.0
G_M, R_PI, C_PI, C_MU, C_CAB = 80e-3, 2250.0, 48e-12, 3e-12, 3e-9
R_B = R_1 * R_2 / (R_1 + R_2)


def matrix(r_s=R_S, r_b=R_B, c_mu=C_MU):
    """Give the nodal matrices (constant, rising) of base, emitter and cable, and the drive's column."""
    g = np.zeros((3, 3))
    c = np.zeros((3, 3))
    g[0, 0] = 1 / r_s + (0 if math.isinf(r_b) else 1 / r_b) + 1 / R_PI
    g[0, 1] = -1 / R_PI
    g[1, 0] = -1 / R_PI - G_M
    g[1, 1] = 1 / R_PI + G_M + 1 / R_E + 1 / R_ISO
    g[1, 2] = g[2, 1] = -1 / R_ISO
    g[2, 2] = 1 / R_ISO
    c[0, 0] = C_PI + c_mu
    c[0, 1] = c[1, 0] = -C_PI
    c[1, 1] = C_PI
    c[2, 2] = C_CAB
    return g, c, np.array([1 / r_s, 0, 0])


def gain(hertz=0.0, **changed):
    g, c, drive = matrix(**changed)
    return np.linalg.solve(g + 2j * math.pi * hertz * c, drive)[2]


def poles(**changed):
    g, c, _ = matrix(**changed)
    found = 1 / np.linalg.eigvals(-np.linalg.solve(g, c))
    return sorted((pole.real for pole in found if abs(pole) < 1e20), key=abs)


@pytest.fixture(scope="module")
def solutions():
    return {solution.band.band: solution for solution in solutions_of(STAGE + ASSUMED)}


def test_dropping_the_bias_resistance_is_priced_in_gain_and_poles(solutions):
    entry = solutions["high"].register.entries[0]
    assert entry.reduced.says == "R_B removed"
    assert entry.together.gain == pytest.approx(gain(r_b=math.inf).real / gain().real - 1, rel=1e-9)
    exact, without = poles(), poles(r_b=math.inf)
    assert [root.error for root in entry.together.poles] == pytest.approx(
        [one / other - 1 for one, other in zip(without, exact, strict=True)], rel=1e-6
    )


def test_the_bias_resistance_is_compared_with_what_the_circuit_shows_to_it(solutions):
    entry = solutions["mid"].register.entries[0]
    shown = 1 / (1 / R_S + 1 / (R_PI + (1 + G_M * R_PI) * R_E))
    assert to_text(entry.larger) == "R_B"
    assert to_text(entry.smaller) == "R_S || (r_pi + (1 + beta)*R_E)"
    assert entry.ratio == pytest.approx(shown / R_B, rel=1e-12)
    # Larger R_S with smaller divider is the worst corner.
    worst = 1 / (1 / (R_S * 1.05) + 1 / (R_PI + (1 + G_M * R_PI) * R_E * 1.01))
    assert entry.worst.ratio == pytest.approx(worst / (R_B * 0.99), rel=1e-9)


def test_beta_much_greater_than_one_strikes_one_beside_beta(solutions):
    entry = solutions["mid"].register.entries[1]
    struck = [(term.of, to_text(term.term), to_text(term.against)) for term in entry.reduced.struck]
    assert struck == [
        ("numerator", "R_E", "g_m*r_pi*R_E"),
        ("denominator", "R_E", "g_m*r_pi*R_E"),
    ]
    beta = G_M * R_PI
    short = beta * R_E / (R_S + R_PI + beta * R_E)
    assert entry.together.gain == pytest.approx(short / gain().real - 1, rel=1e-9)
    long = (beta + 1) * R_E * R_B
    exact = long / (R_B * (R_S + R_PI + (beta + 1) * R_E) + R_S * (R_PI + (beta + 1) * R_E))
    alone = beta * R_E * R_B / (R_B * (R_S + R_PI + beta * R_E) + R_S * (R_PI + beta * R_E))
    assert exact == pytest.approx(gain().real, rel=1e-12)
    assert entry.alone.gain == pytest.approx(alone / exact - 1, rel=1e-9)
    assert entry.ratio == pytest.approx(1 / beta)


def test_a_far_pole_is_dropped_and_its_price_is_within_the_pass_band(solutions):
    register = solutions["high"].register
    entry = register.entries[2]
    assert len(entry.reduced.form.denominator) == 3
    assert len(entry.together.lost_poles) == 1
    edge = register.range_hz[1]
    error = gain(edge, c_mu=0) / gain(edge)
    at_edge = next(each for each in entry.together.at if each.hertz == edge)
    own = entry.alone.at[-1]
    assert at_edge.name == "upper −3 dB frequency"
    assert own.magnitude_db == pytest.approx(20 * math.log10(abs(error)), rel=1e-6)
    assert own.phase_deg == pytest.approx(math.degrees(np.angle(error)), rel=1e-6)
    assert abs(gain(edge)) == pytest.approx(gain().real / math.sqrt(2), rel=1e-6)


def test_the_final_approximate_form_fits_one_line(solutions):
    for solution in solutions.values():
        read = solution.register.entries[-1].reduced.readable
        if solution.band.band == "mid":
            assert to_text(read.gain) == "beta*R_E/(R_S + r_pi + beta*R_E)"
            assert leaves(explicit(read, 0)) <= 10


def test_an_assumption_on_what_a_band_has_not_is_idle_there(solutions):
    assert solutions["mid"].register.idle == (3,)
    assert solutions["high"].register.idle == ()


def test_the_exact_result_stays_as_it_is(solutions):
    plain = {solution.band.band: solution for solution in solutions_of(STAGE)}
    for band, solution in plain.items():
        assert solution.form == solutions[band].form
        assert solution.register is None


def test_the_road_from_the_circuit_agrees(solutions):
    for solution in solutions.values():
        verdict = road.judge(solution)
        assert verdict.passed is True, verdict.measured


def test_an_assumption_may_be_made_for_one_find_or_one_band():
    chosen = ASSUMED.replace('that = "beta >> 1"', 'that = "beta >> 1"\nband = "mid"')
    by_band = [[entry.number for entry in register.entries] for register in registers_of(STAGE + chosen)]
    assert by_band == [[1, 2], [1, 3]]
