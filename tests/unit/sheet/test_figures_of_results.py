"""Shares, errors, frequencies and complex numbers in words."""

from __future__ import annotations

import math

import pytest

from derive.quantities.dimension import RATIO, TIME
from derive.sheet.figures import complex_figure, hertz, percent, signed_percent


@pytest.mark.parametrize(
    ("share", "words"),
    [
        (0.7531, "75 %"),
        (0.066, "6.6 %"),
        (0.0075, "0.75 %"),
        (1.0, "100 %"),
        (0.9996, "100 %"),
        (-0.154, "−15 %"),
        (1.154, "115 %"),
        (2e-6, "< 0.01 %"),
        (-2e-6, "< 0.01 %"),
        (0.0, "0 %"),
        (None, "–"),
        (math.inf, "–"),
    ],
)
def test_a_share_is_worded_in_two_figures(share, words):
    assert percent(share) == words


@pytest.mark.parametrize(
    ("error", "words"),
    [
        (-0.150120, "−15 %"),
        (0.172535, "+17.3 %"),
        (38.7, "+3870 %"),
        (1e-12, "0 %"),
        (-3e-5, "−0.003 %"),
        (math.nan, "not finite"),
    ],
)
def test_an_error_carries_its_sign(error, words):
    assert signed_percent(error) == words


def test_frequencies_and_complex_numbers_carry_their_units():
    assert hertz(790512.0) == "790.5 kHz"
    assert complex_figure(complex(-3e6, 4e6), RATIO / TIME) == "−3 Mrad/s + j 4 Mrad/s"
    assert complex_figure(complex(-3e6, -4e6), RATIO / TIME) == "−3 Mrad/s − j 4 Mrad/s"
    assert complex_figure(complex(0, -4e6), RATIO / TIME) == "−j 4 Mrad/s"
    assert complex_figure(complex(2.5, 0), RATIO) == "2.5"
