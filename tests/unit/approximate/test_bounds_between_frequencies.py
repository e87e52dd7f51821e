"""The worst error over a range is found wherever it lies, against a search of very many frequencies."""

from __future__ import annotations

import math
from fractions import Fraction

import numpy as np
import pytest

from derive.approximate.errors import match
from derive.approximate.stationary import LARGEST_DEGREE, difference
from derive.normalise.form import CertifiedRoot, NominalNumbers


def numbers(top, bottom):
    exact = [tuple(Fraction(value) for value in side) for side in (top, bottom)]
    return NominalNumbers(exact[0][0] / exact[1][0], *exact, (), (), ())


def searched(reduced, exact, low, high):
    s = 2j * math.pi * np.geomspace(low, high, 400_001)
    error = np.polyval(reduced[0][::-1], s) / np.polyval(reduced[1][::-1], s)
    error *= np.polyval(exact[1][::-1], s) / np.polyval(exact[0][::-1], s)
    return np.max(np.abs(20 * np.log10(np.abs(error)))), np.max(np.abs(np.degrees(np.angle(error))))


# A resonance of Q = 200 moved by 0.1 %: its error stands in a band of 1 % of a decade.
SHARP = ([1.0], [1.0, 1 / (200 * 1e6), 1e-12])
MOVED = ([1.0], [1.0, 1.001 / (200 * 1e6), 1.002001e-12])
CASES = [
    (([1.0], [1.0, 1e-3]), ([1.0], [1.0, 1.1e-3, 1e-8]), 1.0, 1e6),
    (MOVED, SHARP, 1e2, 1e8),
    (([1.0, 1e-4], [1.0, 1e-3, 1e-7]), ([1.0, -1e-4, 1e-9], [1.0, 2e-3, 1e-7]), 1.0, 1e6),
    (([2.0], [1.0, 1e-2]), ([1.0, 1e-4], [1.0, 1e-2, 3e-5, 1e-9]), 0.1, 1e5),
]


@pytest.mark.parametrize(("reduced", "exact", "low", "high"), CASES)
def test_the_worst_error_agrees_with_a_long_search(reduced, exact, low, high):
    found = difference(numbers(*reduced), numbers(*exact), 0)
    assert not found.sampled
    magnitude, phase = found.worst((low, high))
    wanted = searched(reduced, exact, low, high)
    assert abs(magnitude) == pytest.approx(wanted[0], rel=1e-4, abs=1e-9)
    assert abs(phase) == pytest.approx(wanted[1], rel=1e-4, abs=1e-6)
    # No frequency of the search may lie above what is printed.
    assert abs(magnitude) >= wanted[0] * (1 - 1e-9) - 1e-9


def test_a_range_of_one_frequency_has_that_error():
    found = difference(numbers([2], [1, 1]), numbers([1], [1, 1]), 0)
    assert found.worst((5.0, 5.0))[0] == pytest.approx(20 * math.log10(2))


def test_very_long_responses_are_sampled_and_say_so():
    many = [math.comb(50, k) * 1e-3**k for k in range(51)]
    found = difference(numbers([1], many), numbers([1], [1, 0.024]), 0)
    assert found.sampled
    assert LARGEST_DEGREE < 60


def test_roots_are_matched_to_the_nearest_and_each_is_used_once():
    def root(real, imaginary=0.0):
        return CertifiedRoot(real, imaginary, 0.0, 1)

    found, lost = match([root(-11.0), root(-90.0)], [root(-10.0), root(-100.0), root(-1e6)])
    assert [(each.exact, round(each.error, 9)) for each in found] == [(-10, 0.1), (-100, -0.1)]
    assert lost == (-1e6,)
    (pair, conjugate), none = match([root(-1, -2), root(-1, 2)], [root(-1.1, -2), root(-1.1, 2)])
    assert none == ()
    assert pair.exact == complex(-1.1, -2)
    assert conjugate.error == pytest.approx(abs(complex(-1, 2)) / abs(complex(-1.1, 2)) - 1)


def test_a_root_that_leaves_the_left_half_plane_shows_by_its_error():
    found, _ = match([CertifiedRoot(5.0, 0.0, 0.0, 1)], [CertifiedRoot(-5.0, 0.0, 0.0, 1)])
    assert found[0].error == pytest.approx(-2)
