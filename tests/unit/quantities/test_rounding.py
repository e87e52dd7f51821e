"""Irrational numbers: 2π and square roots to 40 digits."""

from decimal import Decimal, localcontext
from fractions import Fraction

import pytest

from derive.quantities.rounding import TWO_PI, square_root


def test_two_pi_is_that_of_the_tables():
    # From memory: 6.283185307179586476925287.
    assert abs(TWO_PI - Fraction("6.283185307179586476925287")) < Fraction(1, 10**24)


def test_a_rational_root_is_exact():
    assert square_root(Fraction(9, 16)) == Fraction(3, 4)
    assert square_root(Fraction(0)) == 0


@pytest.mark.parametrize("text", ["2", "0.5", "1e-13", "1e-12", "3e-30", "7e25", "123456789e-40", "1/3"])
def test_a_root_has_forty_digits(text):
    value = Fraction(text)
    with localcontext() as context:
        context.prec = 60
        known = (Decimal(value.numerator) / Decimal(value.denominator)).sqrt()
        context.prec = 40
        rounded = Fraction(+known)
    assert square_root(value) == rounded


def test_a_negative_number_has_none():
    with pytest.raises(ValueError, match="no square root"):
        square_root(Fraction(-1))
