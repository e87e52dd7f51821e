"""Minors against SymPy's determinants over polynomial domains."""

import random

import pytest
import sympy
from sympy_bridge import matrix_of, to_sympy

from derive.algebra.minors import Minors, refuse_large
from derive.algebra.ring import ring
from derive.errors import TooLargeError

NAMES = ("a", "b", "c", "d", "s")


def random_rows(source, size, columns, filled=0.7):
    r = ring(NAMES)
    rows = []
    for _ in range(size):
        row = {}
        for column in range(columns):
            if source.random() < filled:
                entry = r.zero
                for _ in range(source.randrange(1, 4)):
                    powers = {name: source.randrange(2) for name in NAMES}
                    entry += source.choice((-3, -1, 1, 2)) * r.monomial(powers)
                if entry != 0:
                    row[column] = entry
        rows.append(row)
    return r, rows


@pytest.mark.parametrize("seed", range(8))
def test_a_minor_over_any_rows_and_columns_is_sympys_determinant(seed):
    source = random.Random(seed)
    size = 2 + seed % 2
    r, rows = random_rows(source, size, size + 1)
    minors = Minors(r, rows)
    for _ in range(4):
        count = source.randrange(1, size + 1)
        chosen = sorted(source.sample(range(size), count))
        columns = sorted(source.sample(range(size + 1), count))
        found = minors.minor(sum(1 << k for k in chosen), sum(1 << k for k in columns))
        matrix = matrix_of(r, [rows[k] for k in chosen], columns)
        expected = matrix.to_DM(extension=True).charpoly_berk()[-1] * (-1) ** count
        expected = matrix.to_DM().domain.to_sympy(expected)
        assert sympy.expand(to_sympy(r, found) - expected) == 0


def test_a_bordered_minor_has_the_further_row_below_the_others():
    r = ring(["a", "b", "c", "d"])
    a, b, c, d = (r.generator(name) for name in "abcd")
    minors = Minors(r, [{0: a, 1: b}])
    assert minors.bordered(0b1, {0: c, 1: d}, 0b11) == a * d - b * c
    assert minors.bordered(0, {0: c, 1: d}, 0b10) == d


def test_the_minor_of_nothing_is_one_and_that_of_an_empty_row_zero():
    r = ring(["a"])
    minors = Minors(r, [{}, {0: r.generator("a")}])
    assert minors.minor(0, 0) == 1
    assert minors.minor(0b1, 0b1) == 0
    assert minors.minor(0b11, 0b11) == 0


def test_a_matrix_too_large_is_refused_before_it_is_expanded():
    names = [f"x{row}_{column}" for row in range(12) for column in range(12)]
    r = ring(names)
    rows = [{column: r.generator(f"x{row}_{column}") for column in range(12)} for row in range(12)]
    minors = Minors(r, rows, limit=500)
    with pytest.raises(TooLargeError, match="more than 500 terms"):
        minors.minor((1 << 12) - 1, (1 << 12) - 1)
    # 12! is 479 million terms; what was formed on the way stayed near the limit.
    assert max(len(minor) for minor in minors.memo.values()) <= 1_000


def test_one_product_too_large_is_refused_before_it_is_formed():
    names = [f"x{k}" for k in range(80)]
    r = ring(names)
    long = sum((r.generator(name) for name in names[:40]), r.zero)
    other = sum((r.generator(name) for name in names[40:]), r.zero)
    with pytest.raises(TooLargeError):
        Minors(r, [{0: long}, {1: other}], limit=399).minor(0b11, 0b11)
    assert len(Minors(r, [{0: long}, {1: other}], limit=400).minor(0b11, 0b11)) == 1_600


def complete(size):
    """A network in which every pair is joined, and each to ground: its determinant counts trees."""
    names = [f"y{i}_{j}" for i in range(size) for j in range(i + 1, size + 1)]
    r = ring(names)
    rows = [{k: r.zero for k in range(size)} for _ in range(size)]
    for i in range(size):
        for j in range(i + 1, size + 1):
            y = r.generator(f"y{i}_{j}")
            rows[i][i] += y
            if j < size:
                rows[j][j] += y
                rows[i][j] -= y
                rows[j][i] -= y
    return r, rows


def test_a_determinant_surely_too_long_is_refused_without_forming_a_minor():
    # Cayley's formula: a complete graph of n points has n^(n-2) spanning trees, 6^4 for five and ground.
    r, rows = complete(5)
    assert len(Minors(r, rows).minor(0b11111, 0b11111)) == 6**4
    refuse_large(rows, limit=130)
    with pytest.raises(TooLargeError, match="more than 129 terms"):
        refuse_large(rows, limit=129)
    # A number in all of a row lengthens nothing.
    refuse_large([{column: entry * 60 for column, entry in row.items()} for row in rows], limit=130)
