"""The printed numbers are held against the expressions, and each of them is made to fail."""

from dataclasses import replace
from fractions import Fraction as F

import pytest
from hand_solutions import solution_of

from derive.check.printed import wrong_number
from derive.check.roads import nominal
from derive.normalise.form import CertifiedRoot, NominalNumbers

EXACT = 1e-16


def root(real, imaginary=0.0, multiplicity=1):
    return CertifiedRoot(real, imaginary, EXACT, multiplicity)


# 3·(1 + s/5)/((1 + s/2)²·(1 + 2s/25 + s²/25)): a pole of order 2 at -2, a pair at -1 ± j·sqrt(24).
TOP = (F(1), F(1, 5))
BOTTOM = (F(1), F(27, 25), F(37, 100), F(3, 50), F(1, 100))
NUMBERS = NominalNumbers(
    gain=F(3),
    top=(F(15), F(3)),
    bottom=(F(5), F(27, 5), F(37, 20), F(3, 10), F(1, 20)),
    zeros=(root(-5.0),),
    poles=(root(-2.0, multiplicity=2), root(-1.0, 24**0.5), root(-1.0, -(24**0.5))),
    coincident=(),
)


def test_right_numbers_are_found_right():
    assert wrong_number(NUMBERS, F(3), TOP, BOTTOM) == ""


@pytest.mark.parametrize(
    ("change", "named"),
    [
        ({"gain": F(-3)}, "gain"),
        ({"gain": F(3) * F(1000001, 1000000)}, "gain"),
        ({"top": (F(15), F(-3))}, "a_1"),
        ({"bottom": (F(5), F(27, 5), F(37, 20), F(1, 20), F(3, 10))}, "b_3"),
        ({"top": (F(15),), "zeros": ()}, "a_1"),
        ({"zeros": (root(5.0),)}, "zeros"),
        ({"zeros": ()}, "zeros"),
        ({"poles": (root(-2.0), *NUMBERS.poles[1:])}, "poles"),
        ({"poles": (NUMBERS.poles[0], root(-1.0), root(-25.0))}, "poles"),
        ({"poles": (NUMBERS.poles[0], root(1.0, 24**0.5), root(1.0, -(24**0.5)))}, "poles"),
        ({"poles": (root(-2.000001, multiplicity=2), *NUMBERS.poles[1:])}, "poles"),
        ({"poles": (root(0.0), *NUMBERS.poles[1:])}, "poles"),
    ],
)
def test_a_wrong_number_is_named(change, named):
    assert wrong_number(replace(NUMBERS, **change), F(3), TOP, BOTTOM) == named


def test_a_response_without_a_finite_gain_prints_no_numbers_to_judge():
    assert wrong_number(replace(NUMBERS, gain=None), F(3), TOP, BOTTOM) == ""


def test_a_wrong_printed_pole_fails_the_check_at_nominal_values():
    solution = solution_of("low-pass")
    corner = solution.numbers.poles[0].real
    numbers = NominalNumbers(F(1), (F(1),), (F(1), 1 / F(-corner)), (), (root(corner),), ())
    assert nominal.judge(replace(solution, numbers=numbers)).passed is True
    wrong = replace(numbers, poles=(root(-corner),))
    verdict = nominal.judge(replace(solution, numbers=wrong))
    assert verdict.passed is False
    assert verdict.measured == "poles: not what the expressions give"
