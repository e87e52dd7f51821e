"""Rings with inverted generators mean what substitution in SymPy says that they mean."""

import pytest
import sympy
from hypothesis import given, settings
from hypothesis import strategies as st
from sympy_bridge import from_terms, to_sympy

from derive.algebra.exchange import exchange
from derive.algebra.ring import common_monomial, ring, used_names

NAMES = ("s", "R", "C", "w")
TERMS = st.dictionaries(
    st.tuples(*[st.integers(0, 3)] * 4), st.integers(-9, 9).filter(bool), min_size=1, max_size=6
)


def test_an_inverted_generator_is_the_reciprocal_of_its_name():
    r = ring(["s", "R"], ["R"])
    assert to_sympy(r, r.generator("s") * r.generator("R")) == sympy.sympify("s") / sympy.Symbol("R")
    assert to_sympy(r.plain(), r.generator("R")) == sympy.Symbol("R")


def test_names_of_any_kind_are_taken_and_never_read():
    odd = ["__import__('os')", "x0", "x1", "", "λ"]
    r = ring(odd)
    assert to_sympy(r, r.generator("x0")) == sympy.Symbol("x0")
    assert r.generator("x0") != r.generator("x1")
    assert used_names(r, [r.generator("") * r.generator("λ")]) == ("", "λ")


def test_a_ring_without_names_still_holds_numbers():
    r = ring([])
    assert r.constant(7) - r.one == 6
    assert used_names(r, [r.constant(5), r.zero]) == ()
    assert exchange(r, [r.constant(5)]) == ([r.constant(5)], r.one)


@settings(max_examples=60, deadline=None, derandomize=True)
@given(st.lists(TERMS, min_size=1, max_size=3))
def test_exchange_equals_substitution_of_reciprocals_cleared_of_fractions(many):
    r = ring(NAMES, ["R", "w"])
    given_ = [from_terms(r, terms) for terms in many]
    turned, monomial = exchange(r, given_)
    multiplier = to_sympy(r.plain(), monomial)
    for before, after in zip(given_, turned, strict=True):
        written = to_sympy(r.plain(), after)
        assert sympy.expand(to_sympy(r, before) * multiplier - written) == 0
        assert sympy.denom(sympy.together(written)) == 1
    # The least such monomial: none of its names can be spared in all of the polynomials at once.
    for name in ("R", "w"):
        if multiplier.has(sympy.Symbol(name)):
            written = [to_sympy(r.plain(), after) for after in turned]
            assert any(expression.subs(sympy.Symbol(name), 0) != 0 for expression in written)


def test_exchange_leaves_what_has_no_reciprocals_alone():
    r = ring(NAMES, ["R"])
    polynomial = r.generator("s") * r.generator("C") + 3
    assert exchange(r, [polynomial, r.zero]) == ([polynomial, r.zero], r.one)


@settings(max_examples=40, deadline=None, derandomize=True)
@given(TERMS, TERMS)
def test_the_common_monomial_divides_all_and_is_the_greatest(one, other):
    r = ring(NAMES)
    a, b = from_terms(r, one), from_terms(r, other)
    content = to_sympy(r, common_monomial([a, r.zero, b]))
    left = [sympy.Poly(sympy.expand(to_sympy(r, p) / content), *map(sympy.Symbol, NAMES)) for p in (a, b)]
    numbers = [value for poly in left for value in poly.coeffs()]
    assert sympy.igcd(*numbers, 0) == 1
    for place in range(4):
        assert min(powers[place] for poly in left for powers in poly.monoms()) == 0


def test_an_unknown_name_is_refused():
    with pytest.raises(ValueError, match="not in"):
        ring(["a"]).generator("b")
