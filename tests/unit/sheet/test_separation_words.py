"""The errors of the separation in words."""

import pytest

from derive.normalise.separation import SeparationAt
from derive.sheet.sections.separation import _decibels, _degrees


@pytest.mark.parametrize(
    ("error", "decibels", "degrees"),
    [(-1e-5, "+0.000 dB", "+0.00°"), (1e-5, "+0.000 dB", "+0.00°"), (-0.25, "−0.250 dB", "−0.25°")],
)
def test_no_error_of_the_separation_reads_minus_nothing(error, decibels, degrees):
    at = SeparationAt(1e3, error, error)
    assert (_decibels(at), _degrees(at)) == (decibels, degrees)
