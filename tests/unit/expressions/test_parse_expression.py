"""What the user's language means, by trees written out by hand."""

from __future__ import annotations

import random
import subprocess
import sys
from fractions import Fraction

import pytest

from derive.errors import InputError
from derive.expressions.parse import parse_expression
from derive.expressions.tree import (
    Expression,
    Name,
    Negative,
    Number,
    Parallel,
    Power,
    Product,
    Quotient,
    Root,
    Sum,
)

A, B, C, D, X = (Name(letter) for letter in "abcdx")


def n(value: int | str) -> Number:
    return Number(Fraction(value))


@pytest.mark.parametrize(
    ("text", "tree"),
    [
        ("a - b", Sum((A, Negative(B)))),
        ("a - (b + c)", Sum((A, Negative(Sum((B, C)))))),
        ("a + (b - c) + d", Sum((A, B, Negative(C), D))),
        ("a*(b*c)", Product((A, B, C))),
        ("a*b/c", Quotient(Product((A, B)), C)),
        ("a/b*c", Product((Quotient(A, B), C))),
        ("a/b/c", Quotient(A, Product((B, C)))),
        ("a/(b/c)", Quotient(A, Quotient(B, C))),
        ("a*(b/c)", Product((A, Quotient(B, C)))),
        ("-a*b", Negative(Product((A, B)))),
        ("-a/b + c", Sum((Negative(Quotient(A, B)), C))),
        ("(-a)*b", Product((Negative(A), B))),
        ("a*-b", Product((A, Negative(B)))),
        ("a - -b", Sum((A, B))),
        ("--a", A),
        ("+a", A),
        ("-x^2", Negative(Power(X, 2))),
        ("(-x)^2", Power(Negative(X), 2)),
        ("x**2", Power(X, 2)),
        ("x^-2", Power(X, -2)),
        ("x^(-2)", Power(X, -2)),
        ("x^((+3))", Power(X, 3)),
        ("x^2.0", Power(X, 2)),
        ("(x^2)^3", Power(Power(X, 2), 3)),
        ("2*x^2", Product((n(2), Power(X, 2)))),
        ("a || b * c", Product((Parallel((A, B)), C))),
        ("c * a || b", Product((C, Parallel((A, B))))),
        ("c / a || b", Quotient(C, Parallel((A, B)))),
        ("-a || b", Negative(Parallel((A, B)))),
        ("a || -b", Parallel((A, Negative(B)))),
        ("a || b || c", Parallel((A, B, C))),
        ("a || (b || c)", Parallel((A, B, C))),
        ("a || b^2", Parallel((A, Power(B, 2)))),
        ("a + b || c", Sum((A, Parallel((B, C))))),
        ("sqrt(a + b)", Root(Sum((A, B)))),
        ("sqrt(a)^2", Power(Root(A), 2)),
        ("x**(1/2)", Root(X)),
        ("sqrt_x", Name("sqrt_x")),
        ("1.5e3", n(1500)),
        ("2.50", n("5/2")),
        (".5", n("1/2")),
        ("1E-15", n("1/1000000000000000")),
        ("0.1 + 0.2", Sum((n("1/10"), n("1/5")))),
        (" R_E\n*\ts ", Product((Name("R_E"), Name("s")))),
    ],
)
def test_an_expression_is_read_as_its_tree(text: str, tree: Expression) -> None:
    assert parse_expression(text) == tree


@pytest.mark.parametrize(
    ("text", "column", "says"),
    [
        ("R_E * / 2", 6, 'expected "(", "+", "-", "sqrt(", a name, a number'),
        ("2 R_E", 2, 'write "*" between factors'),
        ("a(b + c)", 1, "the only function is sqrt(x)"),
        ("par(x, y)", 3, "the only function is sqrt(x)"),
        ("2(b + c)", 1, 'write "*" between factors'),
        ("4k7 + a", 1, "a value code such as 4k7 is written out"),
        ("a | b", 2, 'write "||"'),
        ("[a + b]", 0, 'write "("'),
        ("(a + b", 6, "close the parenthesis"),
        ("a + b)", 5, "take this parenthesis away"),
        ("a +  ", 3, "ends too early"),
        ("()", 1, "a name, a number"),
        ("sqrt x", 5, "sqrt takes its argument in parentheses"),
        ("sqrt + 1", 5, "sqrt takes its argument in parentheses"),
        ("x^n", 2, "an exponent must be a whole number"),
        ("x^2^3", 2, "an exponent must be a whole number"),
        ("x^(1/3)", 2, "an exponent must be a whole number"),
        ("x^1.5", 2, "an exponent must be a whole number"),
        ("x^65", 2, "this exponent is too large"),
        ("a = b", 2, "one side of the equation"),
        ("_a", 0, "begin a name with a letter"),
        ("1e999", 0, "this number is too long"),
        ("9" * 500, 0, "this number is too long"),
        ("a\x1b[31m", 1, "has no meaning"),
        ("a;b", 1, "has no meaning"),
        ("x.__class__", 1, "has no meaning"),
        ("(" * 201, 200, "more than 200 deep"),
    ],
)
def test_a_mistake_is_shown_by_a_caret_under_its_place(text: str, column: int, says: str) -> None:
    with pytest.raises(InputError) as caught:
        parse_expression(text, where="stage.toml:7")
    message = str(caught.value)
    assert message.startswith("stage.toml:7: ")
    assert says in message
    _, shown, caret, *_ = message.split("\n")
    assert caret.strip() == "^"
    place = caret.index("^")
    wanted = text[column] if column < len(text) else " "
    assert shown.ljust(place + 1)[place] == (wanted if wanted.isprintable() else "?")
    if len(text) < 60:
        assert place == 4 + column
    assert all(line.isprintable() for line in message.split("\n"))


def test_a_long_expression_is_shown_about_the_mistake_only() -> None:
    text = " + ".join(["a"] * 500) + " $ " + " + ".join(["b"] * 500)
    with pytest.raises(InputError) as caught:
        parse_expression(text)
    _, shown, caret, *_ = str(caught.value).split("\n")
    assert len(shown) < 90
    assert shown[caret.index("^")] == "$"


@pytest.mark.parametrize("text", ["", "  ", "\n"])
def test_an_empty_expression_is_called_missing(text: str) -> None:
    with pytest.raises(InputError, match="missing"):
        parse_expression(text)


@pytest.mark.parametrize(
    "text",
    [
        "a" * 100_001,
        "(" * 50_000,
        "1/(1 + " * 150 + "a" + ")" * 150,
        "a/b*" * 300 + "c",
        "(2^64)^64",
        "x^" * 20_000 + "2",
        "sqrt(" * 5_000,
    ],
)
def test_what_is_too_large_or_too_deep_is_refused(text: str) -> None:
    with pytest.raises(InputError):
        parse_expression(text)


def test_two_hundred_parentheses_and_many_signs_are_read() -> None:
    assert parse_expression("(" * 200 + "a" + ")" * 200) == A
    assert parse_expression("-" * 1001 + "a") == Negative(A)


def test_a_sum_of_twenty_thousand_terms_is_flat() -> None:
    read = parse_expression("+".join(["a"] * 20_000))
    assert isinstance(read, Sum)
    assert len(read.terms) == 20_000


def test_random_text_gives_an_expression_or_an_input_error() -> None:
    pieces = [*"ab_01.()()+-*/^|=,;[]{}'\"\\\n\t \x00é∥²", "||", "**", "sqrt", "sqrt(", "1e", "R_E"]
    pieces += ["__import__('os')", "lambda", "\ud800", "1e9999", "^-", "^(1/2)", "|| -", "#"]
    chance = random.Random(20240611)
    read = refused = 0
    for _ in range(5_000):
        text = "".join(chance.choices(pieces, k=chance.randint(0, 9)))
        try:
            parse_expression(text, where="f:1")
            read += 1
        except InputError:
            refused += 1
    assert read > 100
    assert refused > 1000


def test_importing_the_reader_does_not_import_lark() -> None:
    code = "import sys, derive.expressions.parse; sys.exit('lark' in sys.modules)"
    assert subprocess.run([sys.executable, "-c", code], check=False).returncode == 0
