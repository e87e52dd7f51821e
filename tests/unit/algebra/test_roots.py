"""Roots against polynomials made from known roots, and against mpmath at fifty digits."""

import random
from fractions import Fraction

import mpmath
import pytest

from derive.algebra.roots import roots, shared_roots


def expanded(known):
    """Give the coefficients, by rising power, of a polynomial with these exact rational roots."""
    total = [Fraction(1)]
    for root in known:
        shifted = [Fraction(0), *total]
        total = [above - root * below for above, below in zip(shifted, [*total, 0], strict=True)]
    return total


def multiplied(one, other):
    total = [Fraction(0)] * (len(one) + len(other) - 1)
    for i, a in enumerate(one):
        for j, b in enumerate(other):
            total[i + j] += a * b
    return total


def at_fifty_digits(coefficients):
    mpmath.mp.dps = 50
    falling = [mpmath.mpf(c.numerator) / c.denominator for c in reversed(coefficients)]
    return mpmath.polyroots(falling, maxsteps=2000, extraprec=2000)


def assert_holds(found, true, count=1):
    """Some root found holds the true one within its radius, in both coordinates."""
    near = [
        root
        for root in found
        if abs(mpmath.mpf(root.real) - true.real) <= root.radius
        and abs(mpmath.mpf(root.imaginary) - true.imag) <= root.radius
    ]
    assert len(near) == 1, (true, found)
    assert near[0].multiplicity == count


@pytest.mark.parametrize("seed", range(10))
def test_every_root_is_within_its_radius_of_mpmaths(seed):
    source = random.Random(seed)
    coefficients = [
        Fraction(source.randrange(-999, 1000) or 1, source.randrange(1, 99))
        for _ in range(source.randrange(2, 10))
    ]
    found = roots(coefficients)
    true = at_fifty_digits(coefficients)
    assert sum(root.multiplicity for root in found) == len(coefficients) - 1
    for root in true:
        assert_holds(found, mpmath.mpc(root))
    assert all(root.radius <= 1e-14 * max(abs(root.real), abs(root.imaginary)) for root in found)


def test_roots_over_fifteen_decades_keep_their_relative_accuracy():
    known = [Fraction(-(10**power)) * Fraction(7, 3) for power in range(-3, 13)]
    found = roots(expanded(known))
    assert len(found) == len(known)
    for root, exact in zip(found, known, strict=True):
        assert abs(Fraction(root.real) - exact) <= Fraction(root.radius)
        assert abs(Fraction(root.real) - exact) < abs(exact) * Fraction(1, 10**15)
        assert root.imaginary == 0


def test_a_radius_is_not_a_mere_promise():
    # A third is no float: the radius has to be more than nothing.
    (root,) = roots([Fraction(1), Fraction(-3)])
    assert root.real == 1 / 3
    assert 0 < root.radius < 1e-15
    assert abs(Fraction(root.real) - Fraction(1, 3)) <= Fraction(root.radius)


def test_multiple_roots_are_counted_not_smeared():
    known = [Fraction(-2)] * 3 + [Fraction(1, 3)] * 2 + [Fraction(5)]
    found = roots(expanded(known))
    assert [(round(root.real, 12), root.multiplicity) for root in found] == [
        (round(1 / 3, 12), 2),
        (-2.0, 3),
        (5.0, 1),
    ]
    for exact in set(known):
        assert_holds(
            found, mpmath.mpc(mpmath.mpf(exact.numerator) / exact.denominator), known.count(exact)
        )


def test_nearly_equal_roots_stay_apart():
    gap = Fraction(1, 10**12)
    found = roots(expanded([Fraction(-1), Fraction(-1) - gap]))
    assert [root.multiplicity for root in found] == [1, 1]
    assert found[0].real != found[1].real
    assert max(root.radius for root in found) < float(gap) / 100


def test_roots_at_zero_are_exact_and_counted():
    found = roots(expanded([Fraction(0)] * 4 + [Fraction(-10)]))
    assert [(root.real, root.imaginary, root.radius, root.multiplicity) for root in found] == [
        (0.0, 0.0, 0.0, 4),
        (-10.0, 0.0, 0.0, 1),
    ]


def test_a_pair_comes_as_two_conjugates_the_negative_imaginary_part_first():
    # s² + 2s + 5 = 0 at −1 ± 2j.
    below, above = roots([Fraction(5), Fraction(2), Fraction(1)])
    assert (below.real, below.imaginary) == (-1.0, -2.0)
    assert (above.real, above.imaginary) == (-1.0, 2.0)


def test_a_pair_on_the_axis_has_a_real_part_of_exactly_zero():
    below, above = roots([Fraction(2), Fraction(0), Fraction(1)])
    assert (below.real, above.real) == (0.0, 0.0)
    assert above.imaginary == pytest.approx(2**0.5, rel=1e-15)


def test_double_pairs_are_counted():
    quadratic = [Fraction(10), Fraction(2), Fraction(1)]
    found = roots(multiplied(quadratic, quadratic))
    assert [(root.real, root.imaginary, root.multiplicity) for root in found] == [
        (-1.0, -3.0, 2),
        (-1.0, 3.0, 2),
    ]


def test_constants_have_no_roots_and_leading_zeros_make_none():
    assert roots([Fraction(7)]) == ()
    assert roots([Fraction(7), Fraction(0)]) == ()
    assert [root.real for root in roots([Fraction(-6), Fraction(2), Fraction(0)])] == [3.0]


def test_roots_stand_by_rising_magnitude():
    found = roots(expanded([Fraction(100), Fraction(-1), Fraction(10), Fraction(-1000)]))
    assert [root.real for root in found] == [-1.0, 10.0, 100.0, -1000.0]


def test_shared_roots_are_those_of_both_with_the_lesser_multiplicity():
    one = expanded([Fraction(-1)] * 2 + [Fraction(-3), Fraction(1, 7)])
    other = expanded([Fraction(-1)] * 3 + [Fraction(1, 7), Fraction(8)])
    found = shared_roots(one, other)
    assert [(round(root.real, 14), root.multiplicity) for root in found] == [
        (round(1 / 7, 14), 1),
        (-1.0, 2),
    ]
    nearly = expanded([Fraction(-1) - Fraction(1, 10**30)])
    assert shared_roots(one, nearly) == ()
