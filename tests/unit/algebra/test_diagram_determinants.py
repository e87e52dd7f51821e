"""Diagrams against determinants worked by SymPy, NumPy and FLINT, and against known numbers of trees."""

import json
import math
import random
from fractions import Fraction

import numpy as np
import pytest
import sympy
from flint import fmpq, fmpq_mat, nmod, nmod_mat

from derive.algebra.diagram_build import build
from derive.algebra.diagram_forks import Fork
from derive.algebra.diagram_terms import Term, bundle
from derive.algebra.modular import PRIME
from derive.errors import TooLargeError


def random_pair(source, size):
    """Two different vertices, of which one may be the reference."""
    one, other = source.sample([None, *range(size)], 2)
    return one, other


def random_terms(seed, size, count):
    """Terms of which about half have the same edge in both graphs, a third the degree 1."""
    source = random.Random(seed)
    terms = []
    for number in range(count):
        rows = random_pair(source, size)
        columns = rows if source.random() < 0.5 else random_pair(source, size)
        terms.append(Term(f"y{number}", rows, columns, int(source.random() < 0.35)))
    return terms


def dense(terms, size, value):
    """Add up the pieces in the plainest way."""
    rows = [[0] * size for _ in range(size)]
    for term in terms:
        for a, row_sign in zip(term.rows, (1, -1), strict=True):
            for c, column_sign in zip(term.columns, (1, -1), strict=True):
                if a is not None and c is not None:
                    rows[a][c] += row_sign * column_sign * value(term)
    return rows


def incidence(pair, size):
    return [(pair[0] == k) - (pair[1] == k) for k in range(size)]


SIZES = [(1, 3), (2, 6), (3, 8), (4, 10), (5, 13), (6, 15)]


@pytest.mark.parametrize("seed", range(6))
@pytest.mark.parametrize(("size", "count"), SIZES)
def test_the_value_is_the_determinant_of_the_summed_up_matrix(size, count, seed):
    terms = random_terms(seed, size, count)
    source = random.Random(f"values {seed}")
    values = {term.name: Fraction(source.randrange(-30, 31), source.randrange(1, 9)) for term in terms}
    x = Fraction(source.randrange(-5, 6), 3)
    rows = dense(terms, size, lambda term: values[term.name] * x**term.degree)
    expected = fmpq_mat(
        size, size, [fmpq(v.numerator, v.denominator) for row in rows for v in map(Fraction, row)]
    )
    (found,) = build(terms, size).values(values, x, Fraction(1))
    assert fmpq(found.numerator, found.denominator) == expected.det()


def test_the_random_determinants_have_either_sign():
    signs = set()
    for size, count in SIZES:
        for seed in range(6):
            terms = random_terms(seed, size, count)
            rows = dense(terms, size, lambda term: 1 + int(term.name[1:]))
            signs.add(int(np.sign(round(np.linalg.det(np.array(rows, float)), 3))))
    assert signs == {-1, 1}


@pytest.mark.parametrize("seed", range(4))
def test_counts_are_those_of_sympys_expanded_determinant_power_by_power(seed):
    terms = random_terms(seed, 4, 9)
    x = sympy.Symbol("x")
    matrix = sympy.Matrix(dense(terms, 4, lambda term: sympy.Symbol(term.name) * x**term.degree))
    expanded = sympy.Poly(
        sympy.expand(matrix.det(method="berkowitz")), x, *map(sympy.Symbol, (t.name for t in terms))
    )
    by_power: dict[int, int] = {}
    for exponents, coefficient in expanded.terms():
        if coefficient:
            assert abs(coefficient) == 1
            by_power[exponents[0]] = by_power.get(exponents[0], 0) + 1
    diagram = build(terms, 4)
    (found,) = diagram.counts_by_power()
    assert {power: count for power, count in enumerate(found) if count} == by_power
    assert diagram.counts() == (sum(by_power.values()),)


def test_evaluation_works_in_a_prime_field_and_over_arrays():
    terms = random_terms(11, 5, 14)
    diagram = build(terms, 5)
    source = random.Random(3)
    residues = {term.name: source.randrange(PRIME) for term in terms}
    (found,) = diagram.values(
        {k: nmod(v, PRIME) for k, v in residues.items()}, nmod(7, PRIME), nmod(1, PRIME)
    )
    rows = dense(terms, 5, lambda term: residues[term.name] * 7**term.degree)
    assert int(found) == int(nmod_mat(5, 5, [v % PRIME for row in rows for v in row], PRIME).det())
    assert int(found) != 0
    numbers = {term.name: source.uniform(0.5, 2) for term in terms}
    x = 1j * np.logspace(-2, 2, 50)
    (many,) = diagram.values(numbers, x, np.ones(50, complex))
    for point, value in zip(x, many, strict=True):
        matrix = np.array(dense(terms, 5, lambda term, p=point: numbers[term.name] * p**term.degree))
        assert value == pytest.approx(np.linalg.det(matrix), rel=1e-9)


@pytest.mark.parametrize("seed", range(5))
def test_exact_coefficients_are_those_that_interpolation_finds(seed):
    terms = random_terms(seed + 40, 5, 14)
    source = random.Random(seed)
    values = {term.name: Fraction(source.randrange(1, 99), source.randrange(1, 99)) for term in terms}
    (found,) = build(terms, 5).coefficients(values)
    for point in range(7):
        rows = dense(terms, 5, lambda term, p=point: values[term.name] * p**term.degree)
        entries = [fmpq(v.numerator, v.denominator) for row in rows for v in map(Fraction, row)]
        value = sum((c * point**k for k, c in enumerate(found)), Fraction(0))
        assert fmpq(value.numerator, value.denominator) == fmpq_mat(5, 5, entries).det()


def test_exact_coefficients_stay_exact_with_long_denominators_and_large_values():
    terms = [
        Term("g", (0, None), (0, None)),
        Term("c", (0, None), (0, None), 1),
        Term("d", (0, 1), (0, 1), 1),
    ]
    terms.append(Term("h", (1, None), (1, None)))
    g, h = Fraction(10**40, 3), Fraction(-1, 7**50)
    c, d = Fraction(2, 3**60), Fraction(5, 11**70)
    (found,) = build(terms, 2).coefficients({"g": g, "c": c, "d": d, "h": h})
    # (g + c·x + d·x)·(h + d·x) − (d·x)²
    assert found == (g * h, g * d + c * h + d * h, c * d)


@pytest.mark.parametrize("seed", range(8))
def test_pairs_taken_in_advance_give_the_coefficient_of_further_generators(seed):
    """Bordering: the coefficient of u·v in det(A + u·r·cᵀ + v·p·qᵀ) is that of [[A, r, p], [c, 0], [q, 0]]."""
    terms = random_terms(seed + 80, 5, 13)
    source = random.Random(seed)
    values = {term.name: Fraction(source.randrange(1, 20)) for term in terms}
    pairs = [(random_pair(source, 5), random_pair(source, 5)) for _ in range(2)]
    diagram = build(terms, 5, [(), pairs[:1], pairs])
    found = diagram.values(values, Fraction(1), Fraction(1))
    for count, value in enumerate(found):
        rows = [list(row) for row in dense(terms, 5, lambda term: values[term.name])]
        for row_edge, _ in pairs[:count]:
            for row, entry in zip(rows, incidence(row_edge, 5), strict=True):
                row.append(entry)
        for _, column_edge in pairs[:count]:
            rows.append([*incidence(column_edge, 5), *[0] * count])
        side = 5 + count
        matrix = fmpq_mat(side, side, [fmpq(int(v)) for row in rows for v in row])
        assert fmpq(value.numerator, value.denominator) == (-1) ** count * matrix.det()


def complete(size):
    """A complete graph of size + 1 vertices, one of them the reference."""
    ends = [*range(size), None]
    edges = [(ends[i], ends[j]) for i in range(size) for j in range(i + 1, size + 1)]
    return [Term(f"y{k}", edge, edge) for k, edge in enumerate(edges)]


@pytest.mark.parametrize("size", range(1, 8))
def test_a_complete_graph_has_as_many_trees_as_cayley_says(size):
    # n^(n-2) spanning trees on n vertices: Cayley (1889).
    assert build(complete(size), size).counts() == ((size + 1) ** (size - 1),)


def test_other_graphs_have_their_known_numbers_of_trees():
    # Wheel of n spokes: L(2n) − 2 with Lucas numbers. K(a, b): a^(b−1)·b^(a−1). Both from memory.
    spokes = [(k, None) for k in range(5)] + [(k, (k + 1) % 5) for k in range(5)]
    wheel = [Term(f"y{k}", edge, edge) for k, edge in enumerate(spokes)]
    assert build(wheel, 5).counts() == (121,)
    ends = [*range(6), None]
    edges = [(ends[i], ends[3 + j]) for i in range(3) for j in range(4)]
    bipartite = [Term(f"y{k}", edge, edge) for k, edge in enumerate(edges)]
    assert build(bipartite, 6).counts() == (3**3 * 4**2,)
    # The matrix-tree theorem itself, for a graph without a name.
    source = random.Random(5)
    edges = [random_pair(source, 9) for _ in range(20)]
    terms = [Term(f"y{k}", edge, edge) for k, edge in enumerate(edges)]
    laplacian = dense(terms, 9, lambda term: 1)
    assert build(terms, 9).counts() == (round(np.linalg.det(np.array(laplacian, float))),)


def ladder(sections):
    """Series branches from a grounded end, each followed by a branch of degree 1 to the reference."""
    terms = []
    for k in range(sections):
        series = (k - 1 if k else None, k)
        terms += [Term(f"g{k}", series, series), Term(f"c{k}", (k, None), (k, None), 1)]
    return terms


def fibonacci(number):
    one, two = 0, 1
    for _ in range(number):
        one, two = two, one + two
    return one


@pytest.mark.parametrize("sections", [1, 2, 3, 6, 10, 40, 300])
def test_a_ladder_has_as_many_products_as_fibonacci_says(sections):
    # F(2n+1), of which C(n+k, 2k) at the power k: Morgan-Voyce (1959), from memory.
    diagram = build(ladder(sections), sections)
    assert diagram.counts() == (fibonacci(2 * sections + 1),)
    expected = tuple(math.comb(sections + k, 2 * k) for k in range(sections + 1))
    assert diagram.counts_by_power() == (expected,)


def test_an_unconnected_vertex_makes_the_determinant_zero():
    terms = [Term("a", (0, None), (0, None)), Term("b", (0, 1), (0, 1))]
    assert build(terms, 2).counts() == (1,)
    for lost in (terms[:1], [Term("a", (0, None), (0, None)), Term("b", (0, 1), (0, None))], []):
        diagram = build(lost, 2)
        assert diagram.counts() == (0,)
        assert diagram.values({"a": 5, "b": 7}) == (0,)
        assert diagram.coefficients({"a": Fraction(5), "b": Fraction(7)}) == ((),)
    assert build([], 0).counts() == (1,)
    # Two vertices joined only with each other: no product reaches the reference.
    assert build([Term("a", (0, 1), (0, 1)), Term("b", (1, 0), (1, 0))], 2).counts() == (0,)


def test_terms_in_one_place_act_as_one_and_keep_their_directions():
    terms = [
        Term("a", (0, None), (0, None)),
        Term("b", (None, 0), (0, None)),
        Term("z", (0, 0), (0, None)),
    ]
    (one,) = bundle(terms)
    assert [(entry.name, entry.sign) for entry in one.entries] == [("a", 1), ("b", -1)]
    assert build(terms, 1).values({"a": 9, "b": 4, "z": 1}) == (5,)
    with pytest.raises(ValueError, match="negative degree"):
        bundle([Term("a", (0, None), (0, None), -1)])


def test_a_changed_sign_in_a_diagram_changes_its_value():
    terms = random_terms(2, 5, 13)
    diagram = build(terms, 5)
    values = {term.name: Fraction(2 + 3 * k * k) for k, term in enumerate(terms)}
    (right,) = diagram.values(values)
    changed = 0
    for number, fork in enumerate(diagram.forks):
        if fork.left:
            forks = list(diagram.forks)
            forks[number] = Fork(fork.bundle, fork.taken, fork.left, -fork.sign)
            wrong = type(diagram)(diagram.terms, diagram.bundles, tuple(forks), diagram.roots)
            assert wrong.values(values) != (right,)
            changed += 1
    assert changed > 5


def test_a_dense_matrix_is_refused_by_the_number_of_its_states():
    with pytest.raises(TooLargeError, match="more than 2,000 states"):
        build(complete(20), 20, limit=2_000)
    assert build(complete(4), 4, limit=2_000).counts() == (125,)


def test_the_same_terms_give_the_same_diagram():
    terms = random_terms(9, 6, 18)
    one, other = build(terms, 6), build(list(terms), 6)
    assert json.dumps([one.forks, one.roots]) == json.dumps([other.forks, other.roots])
    assert one.bundles == other.bundles
