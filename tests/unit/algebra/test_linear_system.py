"""Solutions of linear systems against SymPy's, on every road that `solve` may take."""

import random

import pytest
import sympy
from sympy_bridge import in_lowest_terms, matrix_of, to_sympy

from derive.algebra import linear_system
from derive.algebra.linear_system import LinearSystem, raw_quotient, solve
from derive.algebra.ring import ring
from derive.errors import SingularError, TooLargeError


@pytest.fixture(params=["short road", "long road"])
def roads(request, monkeypatch):
    """Once as it is, and once with nothing counted as short, so that no general divisor is asked for."""
    if request.param == "long road":
        monkeypatch.setattr(linear_system, "GENERAL_LIMIT", 0)
        monkeypatch.setattr(linear_system, "SHORTENING_SIZE", 0)
    return request.param


@pytest.fixture
def spy(monkeypatch):
    """Notes which of the steps on the long road are taken."""
    taken = []
    for name in ("_fill", "remove_common_content", "coprime", "remove_common_factor", "bounds"):
        work = getattr(linear_system, name)

        def noted(*arguments, name=name, work=work):
            taken.append(name)
            return work(*arguments)

        monkeypatch.setattr(linear_system, name, noted)
    return taken


def system_of(names, rows, degree_variable="s"):
    """Make a system from rows of {column: text-free function of the generators}."""
    r = ring(names)
    generators = {name: r.generator(name) for name in names}
    made = tuple({column: make(**generators) * r.one for column, make in row.items()} for row in rows)
    return LinearSystem(r, made, degree_variable)


def assert_solved(system):
    """Hold a solution against SymPy's, and its terms against SymPy's greatest common divisor."""
    found = solve(system)
    size = system.size
    columns = list(range(size - 1))
    below = matrix_of(system.ring, system.rows, [*columns, size - 1]).det(method="berkowitz")
    above = matrix_of(system.ring, system.rows, [*columns, size]).det(method="berkowitz")
    numerator = to_sympy(system.ring, found.numerator)
    denominator = to_sympy(system.ring, found.denominator)
    assert sympy.expand(numerator * below - denominator * above) == 0
    assert in_lowest_terms(numerator, denominator)
    assert found.denominator.leading_coefficient() > 0
    return found


def random_system(seed, size, *, powers=1):
    """Every entry a small sum of generators, some times s, as circuits give them, but unsymmetrical."""
    source = random.Random(seed)
    names = ["s", *(f"y{k}" for k in range(2 * size + 2))]
    r = ring(names)
    rows = []
    for row in range(size):
        entries = {}
        for column in range(size + 1):
            if column != row and source.random() < 0.45:
                continue
            entry = r.zero
            for _ in range(source.randrange(1, 3)):
                factor = r.generator(source.choice(names[1:])) ** source.randrange(1, powers + 1)
                entry += source.choice((-1, 1)) * factor * r.generator("s") ** source.randrange(2)
            if entry != 0:
                entries[column] = entry
        rows.append(entries)
    return LinearSystem(r, tuple(rows), "s")


@pytest.mark.parametrize("seed", range(8))
@pytest.mark.parametrize("powers", [1, 2])
def test_random_systems_are_solved_as_sympy_solves_them(seed, powers, roads):
    system = random_system(seed, 2 + seed % (4 - powers), powers=powers)
    below = raw_quotient(system.ring, system.rows)[1]
    if below == 0:
        with pytest.raises(SingularError, match="no unique solution"):
            solve(system)
    else:
        assert_solved(system)


def test_generators_that_change_nothing_leave_no_factor(roads, spy):
    # (a + b·s)·x = (a + b·s)·c, coupled so that the factor stands in no single row.
    system = system_of(
        ["s", "a", "b", "c", "d"],
        [
            {0: lambda a, b, s, **_: a + b * s, 1: lambda a, **_: a, 2: lambda c, a, **_: c * a},
            {1: lambda c, d, **_: c + d, 2: lambda d, **_: d},
            {},
        ],
    )
    rows = (system.rows[0], system.rows[1])
    found = assert_solved(LinearSystem(system.ring, rows, "s"))
    assert {str(found.numerator), str(found.denominator)} == {"x4", "x3 + x4"}
    if roads == "long road":
        assert found.numerator == system.ring.generator("d")


def triangular(factor):
    """The last unknown alone in its row; another row brings a factor into both determinants."""
    return system_of(
        ["s", "a", "b", "c", "d", "e"],
        [
            {0: factor, 1: lambda e, **_: e},
            {1: lambda c, d, s, **_: c + d * s, 2: lambda c, e, s, **_: c * s + e},
        ],
    )


def test_the_long_road_fills_idle_generators_and_takes_out_what_is_left(monkeypatch, spy):
    monkeypatch.setattr(linear_system, "GENERAL_LIMIT", 0)
    found = assert_solved(triangular(lambda a, b, s, **_: a + b * s + a * b * s**2))
    assert len(found.numerator) == len(found.denominator) == 2
    assert spy == ["bounds", "_fill", "remove_common_content", "coprime"]


def test_the_short_road_takes_one_general_divisor(spy):
    found = assert_solved(triangular(lambda a, b, s, **_: a + b * s + a * b * s**2))
    assert len(found.numerator) == len(found.denominator) == 2
    assert spy == ["bounds"]


def test_a_factor_in_the_degree_variable_alone_goes(roads, spy):
    found = assert_solved(triangular(lambda s, **_: (1 + 2 * s + s**3) * (s - 4)))
    assert max(found.numerator.degrees()) == 1
    assert ("remove_common_content" in spy) == (roads == "long road")
    assert "_fill" not in spy


def test_where_the_filling_is_a_root_of_the_factor_a_general_divisor_helps(monkeypatch, spy):
    monkeypatch.setattr(linear_system, "GENERAL_LIMIT", 0)
    first, second = linear_system.FILLING[0], linear_system.FILLING[1] + 1
    found = assert_solved(triangular(lambda a, b, **_: second * a - first * b))
    assert len(found.numerator) == len(found.denominator) == 2
    assert spy == ["bounds", "_fill", "remove_common_factor"]


def test_powers_of_generators_are_judged_on_a_random_line(monkeypatch, spy):
    monkeypatch.setattr(linear_system, "GENERAL_LIMIT", 0)
    system = system_of(
        ["s", "a", "b"],
        [
            {0: lambda a, b, **_: a**2 + b, 1: lambda s, a, **_: s + a**2, 2: lambda b, **_: b**2 + 2},
            {0: lambda a, b, **_: a + b**2, 1: lambda s, b, **_: s - b**2, 2: lambda a, **_: a**2},
        ],
    )
    assert_solved(system)
    assert spy == ["bounds", "coprime"]


def test_a_factor_with_powers_goes_too(monkeypatch, roads):
    found = assert_solved(triangular(lambda a, b, s, **_: (a**2 + b * s) * (a + b)))
    assert len(found.numerator) == len(found.denominator) == 2


def test_an_answer_of_zero_is_zero_over_one(roads):
    system = system_of(
        ["s", "a", "b"],
        [
            {0: lambda a, **_: a, 1: lambda b, **_: b, 2: lambda b, **_: b},
            {1: lambda a, s, **_: a + s},
        ],
    )
    found = solve(system)
    assert found.numerator == 0
    assert found.denominator == 1


def test_a_determinant_that_vanishes_for_all_values_is_refused(roads):
    system = system_of(
        ["s", "a", "b"],
        [
            {0: lambda a, **_: a, 1: lambda b, **_: b, 2: lambda s, **_: s},
            {0: lambda a, s, **_: a * s, 1: lambda b, s, **_: b * s, 2: lambda a, **_: a},
        ],
    )
    with pytest.raises(SingularError):
        solve(system)


def test_numbers_in_common_go_and_the_sign_stands_above(roads):
    system = system_of(
        ["s", "a", "b"], [{0: lambda a, s, **_: -6 * a - 4 * s, 1: lambda b, s, **_: 10 * b + 2 * s}]
    )
    found = assert_solved(system)
    assert str(found.denominator) == "2*x0 + 3*x1"
    assert str(found.numerator) == "-x0 - 5*x2"


@pytest.mark.parametrize("size", [4, 5, 6])
def test_a_chain_of_sections_has_as_many_terms_as_trees(size, roads):
    # A ladder's determinant counts its spanning trees: 1 + y_k·(...) gives the Fibonacci numbers.
    names = ["s", *(f"g{k}" for k in range(size)), *(f"c{k}" for k in range(size))]
    r = ring(names)
    s = r.generator("s")
    rows = []
    for k in range(size):
        row = {k: r.generator(f"g{k}") + s * r.generator(f"c{k}")}
        if k:
            row[k - 1] = -r.generator(f"g{k}")
        if k + 1 < size:
            row[k] += r.generator(f"g{k + 1}")
            row[k + 1] = -r.generator(f"g{k + 1}")
        rows.append(row)
    rows[0][size] = r.generator("g0")
    found = solve(LinearSystem(r, tuple(rows), "s"))
    fibonacci = [1, 1]
    while len(fibonacci) < 2 * size + 1:
        fibonacci.append(fibonacci[-1] + fibonacci[-2])
    assert len(found.denominator) == fibonacci[2 * size]
    assert len(found.numerator) == 1


def test_a_system_too_large_to_expand_is_refused():
    size = 14
    names = [f"x{k}" for k in range(size * (size + 1))]
    r = ring(names)
    rows = tuple(
        {column: r.generator(names[row * (size + 1) + column]) for column in range(size + 1)}
        for row in range(size)
    )
    with pytest.raises(TooLargeError, match="more than 400,000 terms"):
        solve(LinearSystem(r, rows, "s"))
