"""Common factors, coprimality and exact values against SymPy and against plain fractions."""

from fractions import Fraction

import pytest
import sympy
from hypothesis import given, settings
from hypothesis import strategies as st
from sympy_bridge import from_terms, in_lowest_terms, to_sympy

from derive.algebra import ratio
from derive.algebra.common_factor import bounds, remove_common_content, remove_common_factor
from derive.algebra.coprime import coprime
from derive.algebra.ratio import coefficients, exact_value, lowest_terms
from derive.algebra.ring import ring
from derive.algebra.sensitivity import idle_names
from derive.errors import SingularError

NAMES = ("s", "a", "b")
R = ring(NAMES)
TERMS = st.dictionaries(
    st.tuples(*[st.integers(0, 2)] * 3), st.integers(-6, 6).filter(bool), min_size=1, max_size=4
)
POLYNOMIALS = TERMS.map(lambda terms: from_terms(R, terms))


@settings(max_examples=80, deadline=None, derandomize=True)
@given(POLYNOMIALS, POLYNOMIALS, POLYNOMIALS)
def test_lowest_terms_keep_the_ratio_and_share_nothing(one, other, shared):
    numerator, denominator = lowest_terms(R, one * shared, other * shared)
    assert numerator * other == denominator * one
    assert in_lowest_terms(to_sympy(R, numerator), to_sympy(R, denominator))
    assert denominator.leading_coefficient() > 0


@settings(max_examples=40, deadline=None, derandomize=True)
@given(POLYNOMIALS, POLYNOMIALS, POLYNOMIALS)
def test_lowest_terms_are_the_same_with_the_quick_test_and_without(one, other, shared):
    whole = lowest_terms(R, one * shared, other * shared)
    kept = ratio.SMALL
    ratio.SMALL = 0
    try:
        assert lowest_terms(R, one * shared, other * shared) == whole
    finally:
        ratio.SMALL = kept


def test_a_numerator_of_zero_is_zero_over_one():
    assert lowest_terms(R, R.zero, R.generator("a")) == (R.zero, R.one)


@settings(max_examples=80, deadline=None, derandomize=True)
@given(POLYNOMIALS, POLYNOMIALS)
def test_polynomials_called_coprime_have_no_common_factor_in_sympy(one, other):
    divisor = sympy.gcd(to_sympy(R, one), to_sympy(R, other))
    assert coprime(R, one, other) == (not divisor.free_symbols)


@settings(max_examples=80, deadline=None, derandomize=True)
@given(POLYNOMIALS, POLYNOMIALS, POLYNOMIALS)
def test_bounds_are_divided_by_every_common_divisor(one, other, shared):
    first, second = bounds(one * shared, other * shared)
    divisor = sympy.gcd(to_sympy(R, one * shared), to_sympy(R, other * shared))
    primitive = sympy.Poly(divisor, *map(sympy.Symbol, NAMES)).primitive()[1].as_expr()
    for bound in (first, second):
        assert bound != 0
        assert sympy.rem(to_sympy(R, bound), primitive, *map(sympy.Symbol, NAMES)) == 0


@settings(max_examples=60, deadline=None, derandomize=True)
@given(POLYNOMIALS, POLYNOMIALS, st.lists(st.integers(-5, 5), min_size=1, max_size=4))
def test_content_in_one_generator_goes_and_nothing_else(one, other, powers):
    s = R.generator("s")
    factor = sum((value * s**power for power, value in enumerate(powers)), R.zero) or R.one
    numerator, denominator = remove_common_content(R, one * factor, other * factor, "s")
    assert numerator * other == denominator * one
    symbols = sympy.symbols("a b")
    contents = [
        sympy.Poly(to_sympy(R, polynomial), *symbols).content() for polynomial in (numerator, denominator)
    ]
    assert sympy.gcd(*contents) in (1, -1)


def test_a_factor_in_two_generators_is_no_content_in_one():
    s, a, b = (R.generator(name) for name in NAMES)
    numerator, denominator = (s + a) * (1 + b), (s + a) * (2 + b)
    assert remove_common_content(R, numerator, denominator, "s") == (numerator, denominator)
    assert remove_common_factor(numerator, denominator) == (1 + b, 2 + b)


def test_a_generator_is_idle_where_the_solution_does_not_depend_on_it():
    r = ring(["s", "a", "b", "c"])
    s, a, b, c = (r.generator(name) for name in r.names)
    # x = a/b whatever c is; the second unknown is the one sought.
    rows = [{0: c + s, 1: s * c, 2: c}, {1: b, 2: a}]
    assert idle_names(r, rows, ["a", "b", "c", "s"]) == ["c", "s"]
    assert idle_names(r, rows, ["a", "b"]) == []
    # x = (a + c²)/(b + c²): c acts, though squared and on both sides alike.
    assert idle_names(r, [{0: b + c**2, 1: a + c**2}], ["c", "s"]) == ["s"]
    with pytest.raises(SingularError):
        idle_names(r, [{0: a, 1: b, 2: c}, {0: a * s, 1: b * s}], ["a"])


@settings(max_examples=60, deadline=None, derandomize=True)
@given(POLYNOMIALS)
def test_coefficients_of_a_generator_add_up_to_the_polynomial(polynomial):
    found = coefficients(R, polynomial, "s")
    assert list(found) == sorted(found)
    assert sum((part * R.generator("s") ** power for power, part in found.items()), R.zero) == polynomial
    assert all(part != 0 and part.degrees()[0] <= 0 for part in found.values())


FRACTIONS = st.fractions(min_value=-(10**6), max_value=10**6, max_denominator=10**6)


@settings(max_examples=60, deadline=None, derandomize=True)
@given(TERMS, FRACTIONS, FRACTIONS, FRACTIONS)
def test_an_exact_value_is_that_of_plain_fractions(terms, s, a, b):
    point = (s, a, b)
    expected = sum(
        (
            Fraction(value) * point[0] ** powers[0] * point[1] ** powers[1] * point[2] ** powers[2]
            for powers, value in terms.items()
        ),
        Fraction(0),
    )
    values = dict(zip(NAMES, point, strict=True))
    assert exact_value(R, from_terms(R, terms), values, {}) == expected


def test_even_powers_of_a_root_are_exact_and_odd_ones_use_the_value_given():
    s, a, b = (R.generator(name) for name in NAMES)
    rough = Fraction("1.414")
    values = {"s": Fraction(3), "a": rough, "b": Fraction(1, 7)}
    squares = {"a": Fraction(2)}
    assert exact_value(R, s - a**2, values, squares) == 1
    assert exact_value(R, b * a**4, values, squares) == Fraction(4, 7)
    assert exact_value(R, a**3, values, squares) == 2 * rough
    assert exact_value(R, a**2, values, {}) == rough**2
    assert exact_value(R, a**2 - 2, {}, squares) == 0
