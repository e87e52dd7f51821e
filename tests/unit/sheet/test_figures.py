from __future__ import annotations

import pytest

from derive.bias.operating_point import NewtonCheck
from derive.sheet.figures import newton_difference, times


@pytest.mark.parametrize(
    ("ratio", "words"),
    [(0.184, "0.18"), (99.4, "99"), (99.51, "100"), (486.2, "486"), (0.0, "0"), (27000.0, "2.7 × 10⁴")],
)
def test_ratio_is_worded_without_an_exponent_of_the_machine(ratio, words):
    assert times(ratio) == words


@pytest.mark.parametrize(
    ("difference", "words"),
    [(-1e-9, "+0.00 %"), (1e-9, "+0.00 %"), (-0.0007, "−0.07 %"), (0.0045, "+0.45 %")],
)
def test_no_difference_reads_minus_nothing(difference, words):
    assert newton_difference(NewtonCheck("Q1", 1e-3, difference, True, "")) == words
