"""The written-out products and the definitions of a diagram, against FLINT's minors and plain arithmetic."""

import math
import random
from fractions import Fraction

import numpy as np
import pytest
from test_diagram_determinants import complete, ladder, random_pair, random_terms

from derive.algebra.diagram_build import build
from derive.algebra.diagram_definitions import definitions
from derive.algebra.diagram_expand import polynomials, products
from derive.algebra.diagram_terms import Term
from derive.algebra.minors import Minors
from derive.algebra.ring import ring
from derive.errors import TooLargeError


def minor(terms, size, r):
    """The determinant by memoised minors, which know nothing of trees."""
    rows = [{} for _ in range(size)]
    for term in terms:
        entry = r.generator(term.name) * r.generator("s") ** term.degree
        for a, row_sign in zip(term.rows, (1, -1), strict=True):
            for c, column_sign in zip(term.columns, (1, -1), strict=True):
                if a is not None and c is not None:
                    rows[a][c] = rows[a].get(c, r.zero) + row_sign * column_sign * entry
    rows = [{c: entry for c, entry in row.items() if entry} for row in rows]
    return Minors(r, rows).minor((1 << size) - 1, (1 << size) - 1)


def ring_of(terms):
    return ring(["s", *dict.fromkeys(term.name for term in terms)])


@pytest.mark.parametrize("seed", range(10))
def test_every_product_is_a_term_of_the_minor_and_none_comes_twice(seed):
    size = 4 + seed % 4
    terms = random_terms(seed + 200, size, 3 * size)
    r = ring_of(terms)
    (found,) = products(build(terms, size))
    rebuilt = {}
    for sign, numbers in found:
        powers = [0] * len(r.names)
        powers[0] = sum(terms[k].degree for k in numbers)
        for k in numbers:
            powers[r.names.index(terms[k].name)] += 1
        assert len(numbers) == size
        assert tuple(powers) not in rebuilt
        rebuilt[tuple(powers)] = sign
    expected = {tuple(map(int, k)): int(v) for k, v in minor(terms, size, r).to_dict().items()}
    assert rebuilt == expected


@pytest.mark.parametrize("seed", range(10))
def test_the_polynomial_is_the_minor(seed):
    size = 4 + seed % 4
    terms = random_terms(seed + 300, size, 3 * size)
    r = ring_of(terms)
    assert polynomials(build(terms, size), r) == (minor(terms, size, r),)


def test_tied_names_add_up_in_the_polynomial():
    terms = [Term("a", (0, None), (0, None)), Term("a", (0, 1), (0, 1)), Term("a", (1, None), (1, None))]
    r = ring_of(terms)
    (found,) = polynomials(build(terms, 2), r)
    assert found == 3 * r.generator("a") ** 2


def test_some_of_the_compared_determinants_are_long_and_have_both_signs():
    terms = random_terms(203, 7, 21)
    (found,) = products(build(terms, 7))
    assert len(found.signs) > 100
    assert set(found.signs.tolist()) == {-1, 1}


def test_more_than_64_terms_take_more_than_one_word():
    terms = [Term(f"y{k}", (0, None), (0, None)) for k in range(150)]
    terms += [Term(f"z{k}", (1, None), (1, None)) for k in range(3)]
    (found,) = products(build(terms, 2))
    assert found.masks.shape == (450, 3)
    assert {numbers for _, numbers in found} == {(k, 150 + j) for k in range(150) for j in range(3)}
    assert found.masks.dtype == np.uint64


def test_too_many_products_are_refused_before_any_is_formed():
    diagram = build(ladder(60), 60)
    with pytest.raises(TooLargeError, match="more than 1,000 terms"):
        products(diagram, limit=1_000)
    with pytest.raises(TooLargeError, match="more than 1,000 terms"):
        polynomials(diagram, ring(["s"]), limit=1_000)
    assert len(products(build(ladder(3), 3), limit=13)[0].signs) == 13
    with pytest.raises(TooLargeError):
        products(build(ladder(3), 3), limit=12)


def value_of(value, known):
    return sum((sign * math.prod(known[name] for name in names) for sign, names in value), Fraction(0))


@pytest.mark.parametrize("seed", range(8))
def test_definitions_worked_one_after_the_other_give_the_exact_coefficients(seed):
    size = 5 + seed % 3
    source = random.Random(seed)
    terms = random_terms(seed + 400, size, 3 * size)
    pairs = [(random_pair(source, size), random_pair(source, size))]
    diagram = build(terms, size, [(), pairs])
    values = {term.name: Fraction(source.randrange(1, 30), source.randrange(1, 9)) for term in terms}
    nested = definitions(diagram, "x")
    known = dict(values)
    for item in nested.definitions:
        assert item.name not in known
        known[item.name] = value_of(item.value, known)
    found = [[value_of(value, known) for value in sums] for sums in nested.coefficients]
    for coefficients in found:
        while coefficients and not coefficients[-1]:
            coefficients.pop()
    assert [tuple(coefficients) for coefficients in found] == list(diagram.coefficients(values))
    whole = definitions(diagram, "x", "s")
    known = {**values, "s": Fraction(7, 3)}
    for item in whole.definitions:
        known[item.name] = value_of(item.value, known)
    at_point = tuple(value_of(sums[0], known) if sums else 0 for sums in whole.coefficients)
    assert at_point == diagram.values(values, Fraction(7, 3), Fraction(1))
    assert len(whole.definitions) <= len(nested.definitions)


def test_a_definition_is_used_more_than_once_or_cannot_be_written_in_place():
    nested = definitions(build(complete(6), 6), "x")
    uses = {item.name: [] for item in nested.definitions}
    sums = [item.value for item in nested.definitions] + [v for c in nested.coefficients for v in c]
    for value in sums:
        for _, names in value:
            for name in names:
                if name in uses:
                    uses[name].append(len(names))
    by_name = {item.name: item.value for item in nested.definitions}
    for name, places in uses.items():
        assert len(places) > 1 or (places[0] > 1 and len(by_name[name]) > 1)


def test_a_name_that_a_term_has_is_not_defined_again():
    terms = [Term(f"x{k}", t.rows, t.columns) for k, t in enumerate(complete(4))]
    with pytest.raises(ValueError, match="the name of a term"):
        definitions(build(terms, 4), "x")
    assert definitions(build(terms, 4), "d").definitions


def test_small_determinants_need_no_definitions():
    terms = [Term("a", (0, None), (0, None)), Term("b", (0, None), (0, None), 1)]
    nested = definitions(build(terms, 1), "x")
    assert nested.definitions == ()
    assert nested.coefficients == ((((1, ("a",)),), ((1, ("b",)),)),)
    assert definitions(build([], 1), "x").coefficients == ((),)


def test_a_product_that_stands_in_several_places_is_defined_once():
    single = []
    for seed in range(400, 408):
        size = 5 + seed % 3
        nested = definitions(build(random_terms(seed, size, 3 * size), size), "x")
        single += [item for item in nested.definitions if len(item.value) == 1]
    assert single
    assert all(len(item.value[0][1]) > 1 for item in single)
