"""Half-power frequencies: both edges, none or several, against formulas and dense sweeps."""

from fractions import Fraction

import numpy as np
import pytest
from estimated import CURRENT_DRIVE, PER_CURRENT, SERIES_RLC, TWIN_T, said_of, sections
from flint import fmpq_poly

from derive.estimates.bandwidth import crossings
from derive.estimates.response import Response

TWO_PI = 2 * np.pi


def sweep_crossings(response, reference, low, high, points=400_001):
    """Give where |response| crosses reference/√2 on a dense logarithmic sweep, by interpolation."""
    hertz = np.geomspace(low, high, points)
    gap = np.abs(response(2j * np.pi * hertz)) - reference / np.sqrt(2)
    places = np.nonzero(np.sign(gap[1:]) != np.sign(gap[:-1]))[0]
    shares = gap[places] / (gap[places] - gap[places + 1])
    return hertz[places] * (hertz[places + 1] / hertz[places]) ** shares


def test_a_low_pass_has_an_upper_edge_alone():
    band = said_of(sections(1)).bandwidth
    assert band.crossings_hz == (band.high_hz,)
    assert band.high_hz == pytest.approx(1e6 / TWO_PI, rel=1e-15)
    assert (band.low_hz, band.reference, band.remark) == (None, 1.0, "")
    assert band.reference_says == "gain at zero frequency; −3 dB stands for 1/√2 of it"


def test_a_high_pass_has_a_lower_edge_alone():
    parts = """
    C_1 = { capacitor = "1 nF", between = ["in", "out"] }
    R_1 = { resistor = "1k", between = ["out", "gnd"] }
    """
    band = said_of(parts).bandwidth
    assert (band.low_hz, band.high_hz) == (pytest.approx(1e6 / TWO_PI, rel=1e-15), None)
    assert band.reference_says.startswith("gain far above all corners")
    low = said_of(parts, band="low").bandwidth
    assert low.reference_says.startswith("mid-band gain far above all corners")


def test_a_band_pass_has_both_edges_around_its_peak():
    # Series RLC, output across R: edges at f_0·(√(1 + 1/4Q²) ∓ 1/2Q), the peak exactly 1 (textbook).
    parts = """
    L_1 = { inductor = "1 mH", between = ["in", "a"] }
    C_1 = { capacitor = "1 nF", between = ["a", "out"] }
    R_1 = { resistor = "100 ohm", between = ["out", "gnd"] }
    """
    band = said_of(parts).bandwidth
    q = 10
    edges = [1e6 / TWO_PI * (np.sqrt(1 + 1 / (4 * q * q)) + side / (2 * q)) for side in (-1, 1)]
    assert band.crossings_hz == pytest.approx(edges, rel=1e-14)
    assert (band.low_hz, band.high_hz) == band.crossings_hz
    assert band.reference == pytest.approx(1, rel=1e-15)
    assert band.reference_says.startswith("gain at its peak")


def test_a_notch_has_the_edges_of_what_it_rejects():
    band = said_of(TWIN_T).bandwidth
    # Twin-T without feedback: f_0·(√5 ∓ 2), f_0 = 1/(2πRC), Q = 1/4 (textbook).
    f_0 = 1e4 / TWO_PI
    assert band.crossings_hz == pytest.approx([f_0 * (5**0.5 - 2), f_0 * (5**0.5 + 2)], rel=1e-12)
    assert (band.low_hz, band.high_hz) == (None, band.crossings_hz[0])
    assert band.remark.startswith("it crosses the line 2 times")


def test_peaking_is_told_and_counts_from_zero_frequency_still():
    band = said_of(SERIES_RLC % "500 ohm").bandwidth
    # Peak of a quadratic: Q/√(1 − 1/4Q²) at ω_0·√(1 − 1/2Q²) (textbook).
    peak = 20 * np.log10(2 / np.sqrt(1 - 1 / 16))
    assert f"it peaks {peak:.3g} dB above the reference" in band.remark
    assert "at 149 kHz" in band.remark
    assert band.reference == 1


def test_ripple_of_more_than_3_db_gives_every_crossing():
    # Two resonators in a chain: a band with a deep valley.
    parts = """
    R_1 = { resistor = "1k", between = ["in", "a"] }
    L_1 = { inductor = "1 mH", between = ["a", "gnd"] }
    C_1 = { capacitor = "1 nF", between = ["a", "gnd"] }
    C_2 = { capacitor = "1 nF", between = ["a", "out"] }
    L_2 = { inductor = "1 mH", between = ["out", "gnd"] }
    C_3 = { capacitor = "1 nF", between = ["out", "gnd"] }
    R_2 = { resistor = "1k", between = ["out", "gnd"] }
    """
    band = said_of(parts).bandwidth

    def response(s):
        own = 1e-3 + 1 / (s * 1e-3) + s * 1e-9
        middle = s * 1e-9
        return 1e-3 * middle / ((own + middle) ** 2 - middle**2)

    grid = np.abs(response(2j * np.pi * np.geomspace(1e4, 1e6, 2_000_001)))
    assert band.reference == pytest.approx(grid.max(), rel=1e-9)
    assert band.crossings_hz == pytest.approx(
        sweep_crossings(response, band.reference, 1e3, 1e7), rel=1e-6
    )
    parts = parts.replace("1k", "20k")
    band = said_of(parts).bandwidth
    assert len(band.crossings_hz) == 4
    assert "it crosses the line 4 times" in band.remark
    assert band.low_hz in band.crossings_hz
    assert band.high_hz == band.crossings_hz[band.crossings_hz.index(band.low_hz) + 1]


def test_a_shelf_is_counted_from_its_upper_end_if_a_zero_makes_it_rise():
    # Lead network: zero at 1/(R_1·C_1), pole at 1/((R_1 ∥ R_2)·C_1), gain from R_2/(R_1 + R_2) to 1.
    parts = """
    R_1 = { resistor = "9k", between = ["in", "out"] }
    C_1 = { capacitor = "1 nF", between = ["in", "out"] }
    R_2 = { resistor = "1k", between = ["out", "gnd"] }
    """
    band = said_of(parts).bandwidth
    pole, zero = 1 / (900 * 1e-9), 1 / 9e-6
    # |H|² = (ω² + z²)/(ω² + p²) = 1/2.
    assert band.low_hz == pytest.approx(np.sqrt(pole**2 - 2 * zero**2) / TWO_PI, rel=1e-12)
    assert band.reference == 1
    # The high band counts from zero frequency whatever the response does.
    high = said_of(parts, band="high").bandwidth
    assert high.reference == pytest.approx(0.1)
    assert high.crossings_hz == ()
    assert high.remark.startswith("it never falls by 3 dB")


def test_a_shelf_of_less_than_3_db_has_no_crossing():
    parts = """
    R_1 = { resistor = "1k", between = ["in", "out"] }
    R_2 = { resistor = "9k", between = ["out", "a"] }
    C_1 = { capacitor = "1 nF", between = ["a", "gnd"] }
    """
    band = said_of(parts).bandwidth
    assert (band.crossings_hz, band.low_hz, band.high_hz) == ((), None, None)
    assert band.remark == "it never falls by 3 dB"


def test_an_all_pass_and_a_constant_have_no_bandwidth():
    divider = 'R_1 = { resistor = "1k", between = ["in", "out"] }\nR_2 = { resistor = "1k", between = ["out", "gnd"] }'
    said = said_of(divider)
    assert said.bandwidth is None
    assert said.remark == "no bandwidth: the magnitude is the same at all frequencies"
    all_pass = """
    R_a = { resistor = "1k", between = ["in", "m"] }
    R_b = { resistor = "1k", between = ["m", "out"] }
    R_1 = { resistor = "1k", between = ["in", "p"] }
    C_1 = { capacitor = "1 nF", between = ["p", "gnd"] }
    U1 = { ideal_opamp = true, output = "out", inputs = ["p", "m"] }
    """
    said = said_of(all_pass)
    assert said.bandwidth is None
    assert [one.says for one in said.closed_forms] == ["left half-plane pole", "right half-plane zero"]


def test_an_integrator_has_no_level_to_fall_from():
    parts = """
    R_1 = { resistor = "1k", between = ["in", "m"] }
    C_1 = { capacitor = "1 nF", between = ["m", "out"] }
    U1 = { ideal_opamp = true, output = "out", inputs = ["gnd", "m"] }
    """
    said = said_of(parts)
    assert said.bandwidth is None
    assert "grows without limit" in said.remark


def test_a_response_that_is_infinite_at_zero_frequency_is_counted_from_above():
    # PI controller: 1 + 1/(s·R·C) beyond its zero.
    parts = """
    R_1 = { resistor = "1k", between = ["in", "m"] }
    R_2 = { resistor = "1k", between = ["m", "a"] }
    C_1 = { capacitor = "1 nF", between = ["a", "out"] }
    U1 = { ideal_opamp = true, output = "out", inputs = ["gnd", "m"] }
    """
    band = said_of(parts).bandwidth
    assert band.reference == 1
    assert band.crossings_hz == ()


def test_an_unstable_and_an_undamped_peak_have_no_bandwidth():
    parts = (
        sections(1)
        + '\ng_1 = { transconductance = "2 mS", flows = ["gnd", "out"], senses = ["out", "gnd"] }'
    )
    assert "right half-plane" in said_of(parts).remark
    tank = """
    L_1 = { inductor = "1 mH", between = ["out", "gnd"] }
    C_1 = { capacitor = "1 nF", between = ["out", "gnd"] }
    """
    said = said_of(tank, drives=CURRENT_DRIVE, find=PER_CURRENT)
    assert said.bandwidth is None
    assert "imaginary axis" in said.remark


def test_an_impedance_is_watched_in_both_directions():
    # R in series with L rises by √2 at R/L; R across C falls by √2 at 1/(RC).
    rising = """
    R_1 = { resistor = "1k", between = ["out", "a"] }
    L_1 = { inductor = "1 mH", between = ["a", "gnd"] }
    """
    falling = """
    R_1 = { resistor = "1k", between = ["out", "gnd"] }
    C_1 = { capacitor = "1 nF", between = ["out", "gnd"] }
    """
    for parts in (rising, falling):
        said = said_of(parts, find='impedance = "out"', drives=CURRENT_DRIVE)
        band = said.bandwidth
        assert band.high_hz == pytest.approx(1e6 / TWO_PI, rel=1e-15)
        assert band.reference == pytest.approx(1000)
        assert band.reference_says == "impedance at zero frequency; 3 dB stands for 1/√2 or √2 times it"
        # Rules about gains say nothing of impedances.
        assert said.estimates == ()


def test_a_line_that_is_only_touched_is_not_crossed():
    one = fmpq_poly([1])
    # (3 − 4x + 2x²)/2 is 1/2 at the double root x = 1 alone, and 1 at two simple ones.
    touching = Response(one, one, fmpq_poly([3, -4, 2]), fmpq_poly([2]))
    assert crossings(touching, Fraction(1), [Fraction(1, 2)]) == []
    assert len(crossings(touching, Fraction(1), [Fraction(1)])) == 2


def test_the_mid_band_of_a_stage_without_corners_has_none():
    divider = 'R_1 = { resistor = "1k", between = ["in", "out"] }\nR_2 = { resistor = "1k", between = ["out", "gnd"] }'
    assert said_of(divider, band="mid").bandwidth is None


LEAKING = """
R_S = { resistor = "1k", between = ["in", "x"] }
C_1 = { capacitor = "1 uF", between = ["x", "b"] }
r_pi = { resistor = "2k5", between = ["b", "gnd"] }
C_pi = { capacitor = "12 pF", between = ["b", "gnd"] }
C_mu = { capacitor = "2 pF", between = ["b", "out"] }
g_m = { transconductance = "40 mS", flows = ["out", "gnd"], senses = ["b", "gnd"] }
R_L = { resistor = "4k7", between = ["out", "gnd"] }
"""


def test_a_pass_band_high_above_what_leaks_past_it_is_the_reference():
    # The transistor's C_mu and C_pi pass 1/7 of the base voltage's share on for s → ∞: no pass band of the stage.
    band = said_of(LEAKING).bandwidth
    assert band.reference_says.startswith("gain at its peak")

    def response(s):
        y_in = 1 / (1e3 + 1 / (s * 1e-6))
        base = np.array(
            [[y_in + 1 / 2500 + s * 14e-12, -s * 2e-12], [0.04 - s * 2e-12, 1 / 4700 + s * 2e-12]]
        )
        return np.linalg.solve(base, np.array([y_in, 0]))[1]

    hertz = np.geomspace(1, 1e9, 40_001)
    size = np.abs([response(2j * np.pi * f) for f in hertz])
    assert band.reference == pytest.approx(size.max(), rel=1e-6)
    inside = hertz[size >= size.max() / np.sqrt(2)]
    assert (band.low_hz, band.high_hz) == pytest.approx((inside[0], inside[-1]), rel=2e-3)


def test_a_resonance_below_a_high_pass_is_no_pass_band():
    # Q = 3: the peak stands 9.6 dB above the gain far above all corners, from which the fall is counted.
    parts = """
    C_1 = { capacitor = "1 nF", between = ["in", "a"] }
    R_1 = { resistor = "333 ohm", between = ["a", "out"] }
    L_1 = { inductor = "1 mH", between = ["out", "gnd"] }
    """
    assert said_of(parts).bandwidth.reference_says.startswith("gain far above all corners")
