"""What is printed means what the tree means: judged by separate evaluators."""

from __future__ import annotations

import ast
import operator
import re
from fractions import Fraction

import pytest
from hypothesis import HealthCheck, assume, given, settings
from hypothesis import strategies as st

from derive.errors import DeriveError
from derive.expressions.ledger_text import to_ledger
from derive.expressions.parse import parse_expression
from derive.expressions.speech import to_speech
from derive.expressions.text import to_text
from derive.expressions.tree import (
    Elided,
    Equation,
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
from derive.expressions.typst_maths import to_typst
from derive.expressions.unicode_text import to_unicode
from derive.expressions.walk import evaluate, evaluate_modulo, names_of

VALUES = {
    "R_E": Fraction(7, 3),
    "r_pi": Fraction(11),
    "C_mu": Fraction(-5, 13),
    "s": Fraction(17, 19),
    "beta": Fraction(101),
}
PRIME = 2**61 - 1
BINARY = {
    ast.Add: operator.add,
    ast.Sub: operator.sub,
    ast.Mult: operator.mul,
    ast.Div: operator.truediv,
    ast.Pow: operator.pow,
}


def python_value(text: str) -> Fraction:
    """Value a text by Python's own grammar and precedence, without running it."""

    def value(node: ast.AST) -> Fraction:
        if isinstance(node, ast.Expression):
            return value(node.body)
        if isinstance(node, ast.Name):
            return VALUES[node.id]
        if isinstance(node, ast.Constant):
            assert type(node.value) is int
            return Fraction(node.value)
        if isinstance(node, ast.UnaryOp):
            assert isinstance(node.op, ast.USub)
            return -value(node.operand)
        assert isinstance(node, ast.BinOp)
        left, right = value(node.left), value(node.right)
        if isinstance(node.op, ast.Pow):
            assert right.denominator == 1
            return left ** int(right)
        return BINARY[type(node.op)](left, right)

    return value(ast.parse(text, mode="eval"))


def trees() -> st.SearchStrategy[Expression]:
    numbers = st.one_of(
        st.integers(-9, 99).map(Fraction),
        st.fractions(min_value=-5, max_value=5, max_denominator=9),
    ).map(Number)
    leaves = st.one_of(st.sampled_from(sorted(VALUES)).map(Name), numbers)

    def grow(inner: st.SearchStrategy[Expression]) -> st.SearchStrategy[Expression]:
        many = st.lists(inner, min_size=1, max_size=4).map(tuple)
        return st.one_of(
            many.map(Sum),
            many.map(Product),
            many.map(Parallel),
            st.builds(Quotient, inner, inner),
            st.builds(Power, inner, st.integers(-3, 3)),
            inner.map(Negative),
        )

    return st.recursive(leaves, grow, max_leaves=12)


def exact(tree: Expression) -> Fraction | None:
    try:
        return evaluate(tree, VALUES, Fraction)
    except ZeroDivisionError:
        return None


SETTINGS = settings(
    max_examples=250,
    deadline=None,
    derandomize=True,
    suppress_health_check=[HealthCheck.too_slow, HealthCheck.filter_too_much],
)


@SETTINGS
@given(trees())
def test_printed_text_reads_back_to_the_same_value(tree: Expression) -> None:
    value = exact(tree)
    assume(value is not None)
    assert exact(parse_expression(to_text(tree))) == value


@SETTINGS
@given(trees())
def test_text_read_once_prints_and_reads_as_the_same_tree(tree: Expression) -> None:
    read = parse_expression(to_text(tree))
    assert parse_expression(to_text(read)) == read


@SETTINGS
@given(trees())
def test_ledger_text_means_the_same_to_python_and_to_our_reader(tree: Expression) -> None:
    value = exact(tree)
    assume(value is not None)
    text = to_ledger(tree)
    assert re.fullmatch(r"[A-Za-z0-9_ +\-*/()]*", text)
    assert python_value(text) == value
    assert exact(parse_expression(text)) == value


@SETTINGS
@given(trees())
def test_value_modulo_a_prime_is_the_image_of_the_exact_value(tree: Expression) -> None:
    value = exact(tree)
    assume(value is not None)
    images = {name: q.numerator * pow(q.denominator, -1, PRIME) % PRIME for name, q in VALUES.items()}
    expected = value.numerator * pow(value.denominator, -1, PRIME) % PRIME
    assert evaluate_modulo(tree, images, PRIME) == expected


@SETTINGS
@given(trees())
def test_every_printer_balances_its_parentheses_and_keeps_every_name(tree: Expression) -> None:
    for text in (to_text(tree), to_ledger(tree), to_unicode(tree), to_typst(tree)):
        assert text.count("(") == text.count(")")
    assert set(re.findall(r"[A-Za-z]\w*", to_ledger(tree))) == set(names_of(tree))
    said = to_speech(tree)
    assert said.count("open parenthesis") == said.count("close parenthesis")
    assert said.count("the fraction") == said.count("end fraction")


# text as read; the user's language, the ledger, the terminal
PRECEDENCE = [
    ("-a*b", "-a*b", "-a*b", "−a·b"),
    ("(-a)*b", "(-a)*b", "(-a)*b", "(−a)·b"),
    ("-x^2", "-x^2", "-x**2", "−x²"),
    ("(-x)^2", "(-x)^2", "(-x)**2", "(−x)²"),
    ("x^(-12)", "x^(-12)", "x**(-12)", "x⁻¹²"),
    ("(x^2)^3", "(x^2)^3", "(x**2)**3", "(x²)³"),
    ("a-(b-c)", "a - (b - c)", "a - (b - c)", "a − (b − c)"),
    ("a/(b*c)", "a/(b*c)", "a/(b*c)", "a/(b·c)"),
    ("a/b*c", "a/b*c", "a/b*c", "a/b·c"),
    ("a/(b/c)", "a/(b/c)", "a/(b/c)", "a/(b/c)"),
    ("(a/b)^2", "(a/b)^2", "(a/b)**2", "(a/b)²"),
    ("((a+b))*c", "(a + b)*c", "(a + b)*c", "(a + b)·c"),
    ("a||b", "a || b", "1/(1/a + 1/b)", "a ∥ b"),
    ("c*a||b", "c*(a || b)", "c*(1/(1/a + 1/b))", "c·(a ∥ b)"),
    ("a||(b+c)", "a || (b + c)", "1/(1/a + 1/(b + c))", "a ∥ (b + c)"),
    ("a||(b*c)", "a || (b*c)", "1/(1/a + 1/(b*c))", "a ∥ (b·c)"),
    ("a+b||c", "a + (b || c)", "a + 1/(1/b + 1/c)", "a + (b ∥ c)"),
    ("sqrt(x)", "sqrt(x)", "x**(1/2)", "√x"),
    ("sqrt(x+1)^2", "sqrt(x + 1)^2", "((x + 1)**(1/2))**2", "(√(x + 1))²"),
    ("0.5*x", "1/2*x", "1/2*x", "1/2·x"),
    ("x*0.5", "x*(1/2)", "x*(1/2)", "x·(1/2)"),
    ("r_pi*beta1", "r_pi*beta1", "r_pi*beta1", "r_π·β1"),
]


@pytest.mark.parametrize(("read", "text", "ledger", "terminal"), PRECEDENCE)
def test_parentheses_stand_where_they_are_needed(
    read: str, text: str, ledger: str, terminal: str
) -> None:
    tree = parse_expression(read)
    assert to_text(tree) == text
    assert to_ledger(tree) == ledger
    assert to_unicode(tree) == terminal


def test_equations_are_printed_with_both_sides() -> None:
    equation = Equation(Name("v_out"), Negative(Product((Name("g_m"), Name("R_C")))))
    assert to_text(equation) == "v_out = -g_m*R_C"
    assert to_ledger(equation) == "v_out = -g_m*R_C"
    assert to_unicode(equation) == "v_out = −g_m·R_C"
    assert to_typst(equation) == 'v_(upright("out")) = -g_(m) R_(C)'
    assert to_speech(equation) == "v sub out equals minus g sub m times R sub C"


def test_a_negative_number_in_front_is_written_as_a_minus() -> None:
    two = Number(Fraction(-2))
    tree = Sum((Name("a"), Product((two, Name("b"))), Quotient(two, Name("c"))))
    assert to_text(tree) == "a - 2*b - 2/c"
    assert to_ledger(Power(two, 2)) == "(-2)**2"


def test_elided_terms_are_counted_in_print_and_refused_in_the_ledger() -> None:
    tree = Sum((Name("a"), Elided(10886, "ledger")))
    assert to_text(tree) == "a + ... (10,886 more terms: ledger)"
    assert to_unicode(tree) == "a + … (10,886 more terms: ledger)"
    assert to_unicode(Elided(1, "ledger")) == "… (1 more term: ledger)"
    with pytest.raises(DeriveError, match="ledger"):
        to_ledger(tree)


@pytest.mark.parametrize("text", ["1/(1 + " * 99 + "a" + ")" * 99, "sqrt(" * 199 + "a" + ")" * 199])
def test_the_deepest_tree_that_can_be_read_can_be_printed_and_valued(text: str) -> None:
    tree = parse_expression(text)
    assert parse_expression(to_text(tree)) == tree
    assert names_of(tree) == ("a",)
    for printer in (to_ledger, to_unicode, to_typst, to_speech):
        assert printer(tree)
    assert evaluate(tree, {"a": 1.0 + 0j}, complex) is not None


def test_ten_thousand_terms_are_all_in_the_ledger() -> None:
    tree = Sum(tuple(Product((Name(f"R_{i}"), Name("s"))) for i in range(10_000)))
    text = to_ledger(tree)
    assert text.count(" + ") == 9_999
    assert text.endswith("R_9999*s")


def test_a_root_of_a_root_keeps_its_order_in_the_ledger() -> None:
    assert to_ledger(Root(Root(Name("x")))) == "(x**(1/2))**(1/2)"
