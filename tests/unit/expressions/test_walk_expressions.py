"""Names, substitution and values, against values worked by hand."""

from __future__ import annotations

from fractions import Fraction

import numpy as np
import pytest

from derive.errors import DeriveError
from derive.expressions.parse import parse_expression
from derive.expressions.text import to_text
from derive.expressions.tree import Elided, Equation, Name, Product, Sum
from derive.expressions.walk import evaluate, evaluate_modulo, names_of, substitute

ONES = {"a": Fraction(1), "b": Fraction(2), "z": Fraction(0)}


@pytest.mark.parametrize(
    ("text", "value"),
    [
        ("a + b*b - 1/2", Fraction(9, 2)),
        ("6 || 3", Fraction(2)),
        ("6 || 3 || 2", Fraction(1)),
        ("100k", None),
        ("b^-3", Fraction(1, 8)),
        ("sqrt(9/4)", Fraction(3, 2)),
        ("-b^2", Fraction(-4)),
        ("2 - 3 - 4", Fraction(-5)),
        ("16/4/2", Fraction(2)),
        ("z^0", Fraction(1)),
    ],
)
def test_exact_values_are_those_of_arithmetic(text: str, value: Fraction | None) -> None:
    if value is None:
        with pytest.raises(DeriveError):
            parse_expression(text)
        return
    assert evaluate(parse_expression(text), ONES, Fraction) == value


def test_a_divider_of_complex_impedances_is_minus_three_decibels_at_its_corner() -> None:
    # One resistor into one capacitor: |H| = 1/sqrt(2) where omega R C = 1 (common practice).
    tree = parse_expression("1/(1 + s*R*C)")
    value = evaluate(tree, {"s": 1j * 1e6, "R": 1e3 + 0j, "C": 1e-9 + 0j}, complex)
    assert abs(value) == pytest.approx(0.5**0.5)
    assert value.imag == pytest.approx(-0.5)


def test_arrays_are_valued_point_by_point_and_left_alone() -> None:
    s = 1j * np.array([1.0, 2.0, 4.0])
    before = s.copy()
    found = evaluate(parse_expression("s + 1 + s || 2"), {"s": s}, lambda q: np.complex128(float(q)))
    assert found == pytest.approx(before + 1 + 2 * before / (2 + before))
    assert (s == before).all()


def test_division_by_zero_comes_as_it_is() -> None:
    for text in ("1/z", "z^-1", "z || 1", "1/(1 - a)"):
        with pytest.raises(ZeroDivisionError):
            evaluate(parse_expression(text), ONES, Fraction)
        with pytest.raises(ZeroDivisionError):
            evaluate_modulo(parse_expression(text), {"a": 1, "z": 0}, 101)


def test_values_modulo_seven_are_those_of_the_table() -> None:
    # 3·5 = 15 = 1 (mod 7): 1/3 is 5; 1/3 + 1/6 = 5 + 6 = 4, and 1/4 is 2: 3 ∥ 6 is 2, as it is.
    for text, value in [("1/3", 5), ("3 || 6", 2), ("-1", 6), ("3^-1", 5), ("0.5", 4), ("a - b", 5)]:
        assert evaluate_modulo(parse_expression(text), {"a": 8, "b": 3}, 7) == value


def test_what_has_no_value_is_refused_in_words() -> None:
    with pytest.raises(DeriveError, match='no value for "q"'):
        evaluate(Name("q"), ONES, Fraction)
    with pytest.raises(DeriveError, match='no value for "q"'):
        evaluate_modulo(Name("q"), {}, 7)
    elided = Sum((Name("a"), Elided(3, "ledger")))
    with pytest.raises(DeriveError, match="elided"):
        evaluate(elided, ONES, Fraction)
    with pytest.raises(DeriveError, match="elided"):
        evaluate_modulo(elided, {"a": 1}, 7)
    for text in ("sqrt(2)", "sqrt(-4)", "sqrt(2/9)"):
        with pytest.raises(DeriveError, match="not rational"):
            evaluate(parse_expression(text), ONES, Fraction)
    with pytest.raises(DeriveError, match="modulo"):
        evaluate_modulo(parse_expression("sqrt(4)"), {}, 7)


def test_a_field_may_bring_its_own_root() -> None:
    assert evaluate(parse_expression("sqrt(2)"), {}, float) == pytest.approx(1.41421356)
    assert evaluate(parse_expression("sqrt(2)"), {}, Fraction, root=lambda _: Fraction(7, 5)) == (
        Fraction(7, 5)
    )


def test_twenty_thousand_terms_are_summed() -> None:
    tree = Sum(tuple(Product((Name("a"), Name("b"))) for _ in range(20_000)))
    assert evaluate(tree, ONES, Fraction) == 40_000
    assert evaluate_modulo(tree, {"a": 1, "b": 2}, 10_007) == 40_000 % 10_007


def test_names_come_once_in_the_order_of_first_appearance() -> None:
    tree = parse_expression("z*(b + a)/b || sqrt(c)^2 - a")
    assert names_of(tree) == ("z", "b", "a", "c")
    assert names_of(Equation(Name("v"), tree)) == ("v", "z", "b", "a", "c")
    assert names_of(parse_expression("1 + 2")) == ()


def test_substitution_is_made_everywhere_and_at_once() -> None:
    tree = parse_expression("-a/(b + sqrt(a))^2 || 3*a")
    swapped = substitute(tree, {"a": parse_expression("b + 1"), "b": Name("a")})
    assert swapped == parse_expression("-(b + 1)/(a + sqrt(b + 1))^2 || 3*(b + 1)")
    assert to_text(tree) == to_text(parse_expression("-a/(b + sqrt(a))^2 || 3*a"))


def test_substitution_without_its_names_gives_the_tree_itself() -> None:
    tree = parse_expression("a + b")
    assert substitute(tree, {"c": Name("a")}) is tree
