"""Maths as engineers type it, with Ω and ∥ and fragments of LaTeX, means what its plain spelling means."""

from __future__ import annotations

from fractions import Fraction

import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from derive.errors import InputError
from derive.expressions.build import Placed
from derive.expressions.parse import parse_expression, parse_placed
from derive.expressions.spell import spell
from derive.expressions.spelled import Refusal
from derive.expressions.text import to_text
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
from derive.expressions.unicode_text import to_unicode

UNICODE = [
    ("β·R_E", "beta*R_E"),
    ("(v_b − v_out)·(g_m + 1/r_π + s·C_π)", "(v_b - v_out)*(g_m + 1/r_pi + s*C_pi)"),
    ("R_1 ∥ R_2", "R_1 || R_2"),
    ("R_1 ‖ R_2", "R_1 || R_2"),
    ("R_1//R_2", "R_1 || R_2"),
    ("a × b ÷ c", "a*b/c"),
    ("a – b", "a - b"),
    ("x²", "x^2"),
    ("x⁻¹²", "x^-12"),
    ("1 + ω²/ω_0²", "1 + omega^2/omega_0^2"),
    ("√(a + b)", "sqrt(a + b)"),
    ("2·√R_E·c", "2*sqrt(R_E)*c"),
    ("√ 2", "sqrt(2)"),
    ("C_µ + C_μ", "C_mu + C_mu"),  # the micro sign and the letter
    ("rπ + Cμ", "rpi + Cmu"),
    ("r_π1", "r_pi1"),
    ("R₁ + R₁₂ + g_m₁ + vₑ", "R_1 + R_12 + g_m1 + v_e"),
    ("βᵢ", "beta_i"),
    ("𝑅_𝐸·𝛽", "R_E*beta"),  # copied from a typeset page
    ("a\u00a0+\u2009b", "a + b"),
    ("4.7 kΩ + 600Ω + 2.2 MΩ", "4700 + 600 + 2200000"),
    ("1e3 Ω", "1000"),
    ("470 mΩ", "0.47"),
    ("Ω_1·2", "Omega_1*2"),
]

LATEX = [
    (r"\frac{v_{out}}{R_{E}}", "v_out/R_E"),
    (r"\dfrac{a}{b}", "a/b"),
    (r"\frac12 c", "1/2*c"),
    (r"\frac{a}{b}\frac{c}{d}", "(a/b)*(c/d)"),
    (r"\frac{\frac{a}{b}}{c}", "(a/b)/c"),
    (r"g_{m} R_{E}", "g_m*R_E"),
    (r"g_mR_E\,x", "g_m*R_E*x"),
    (r"1 + sC_\pi/g_m", "1 + s*C_pi/g_m"),
    (r"\beta R_E + 2\pi f", "beta*R_E + 2*pi*f"),
    (r"R_C \parallel R_L", "R_C || R_L"),
    (r"R_C \| R_L", "R_C || R_L"),
    (r"g_m (R_C \parallel R_L)", "g_m*(R_C || R_L)"),
    (r"g_m \cdot R_C \parallel R_L", "g_m*(R_C || R_L)"),
    (r"a \times b \div c", "a*b/c"),
    (r"\left(1 + \beta\right) R_E", "(1 + beta)*R_E"),
    (r"\left[ a + b \right]^{2} c", "(a + b)^2*c"),
    (r"\bigl(a\bigr)\Big(b\Big)", "a*b"),
    (r"\left\{ a \right\}", "a"),
    (r"\left. a \right.", "a"),
    (r"\sqrt{1 + R_{E}^{2}}", "sqrt(1 + R_E^2)"),
    (r"\sqrt 2", "sqrt(2)"),
    (r"x^{-1} y", "x^(-1)*y"),
    (r"\gamma^2b", "gamma^2*b"),
    (r"r_{\pi 1}\,g_{m,tail}", "r_pi1*g_m_tail"),
    (r"R_{\mathrm{in}} + R_\text{out}", "R_in + R_out"),
    (r"\mathrm{A}_v", "A_v"),
    (r"i_{R_E}", "i_R_E"),
    (r"\omega_{u}^{2}", "omega_u^2"),
    (r"\varepsilon + \varphi", "epsilon + phi"),
    (r"{a + b}\,c", "(a + b)*c"),
    (r"600\,\Omega + 4.7\,k\Omega", "600 + 4700"),
    (r"a \quad + \; b", "a + b"),
    (r"β \cdot R_{E}²", "beta*R_E^2"),
]


@pytest.mark.parametrize(("typed", "plain"), UNICODE + LATEX)
def test_what_is_typed_means_its_plain_spelling(typed: str, plain: str) -> None:
    assert parse_expression(typed) == parse_expression(plain)


@pytest.mark.parametrize(
    ("typed", "column", "says"),
    [
        ("βR_E", 1, 'write "*" between factors'),
        ("2β", 1, 'write "*" between factors'),
        ("R_Eβ", 3, 'write "*" between factors'),
        ("x²3", 2, 'write "*" between factors'),
        ("a√b", 1, 'write "*" between factors'),
        ("g_m R_E", 4, 'write "*" between factors'),
        # In LaTeX only where there is one reading.
        (r"1/R_E C_\pi", 6, 'write "*" between factors'),
        (r"g_m R_C \parallel R_\pi", 8, "open to doubt"),
        (r"R_C \parallel R_L g_{m}", 18, 'write "*" between factors'),
        (r"A_v(s) \cdot a", 3, "the only function is sqrt(x)"),
        (r"4k7 \cdot a", 1, "a value code such as 4k7 is written out"),
        (r"\beta 2", 6, 'write "*" between factors'),
        # LaTeX that is broken, or that has no meaning here.
        (r"\frac{a}{b", 10, "a brace is not closed"),
        (r"\frac{a}", 8, "lacks what it stands over"),
        (r"a}", 1, "closes nothing"),
        (r"\sqrt[3]{x}", 5, "only square roots"),
        (r"\int x", 0, r"\int has no meaning here"),
        (r"R_{}", 2, "a subscript of letters and digits is wanted"),
        (r"R_{a+b}", 4, "letters and digits only"),
        (r"\left a", 6, "a parenthesis is wanted"),
        ("a\\", 1, "a backslash stands alone"),
        (r"\frac{" * 70, 365, "nested more than 60 deep"),
    ],
)
def test_what_could_be_misread_is_refused_at_its_place(typed: str, column: int, says: str) -> None:
    with pytest.raises(Refusal) as caught:
        parse_placed(typed)
    assert says in f"{caught.value.what}; {caught.value.cure}"
    assert caught.value.position == column
    with pytest.raises(InputError, match="cannot be read"):
        parse_expression(typed)


def test_the_message_quotes_what_was_typed_and_the_caret_stands_under_it() -> None:
    with pytest.raises(InputError) as caught:
        parse_expression(r"\frac{a}{b} + \cdot c")
    _, shown, caret, *_ = str(caught.value).split("\n")
    assert shown[caret.index("^") :].startswith(r"\cdot")
    assert r'"\cdot" cannot stand here' in str(caught.value)


def test_plain_text_is_not_touched() -> None:
    for text in ("a*b^2 + sqrt(c)", "2 R_E", "a | b", "", "[a]", "x.__class__"):
        assert spell(text).text == text
        assert spell(text).starts is None


def latex(tree: Expression) -> str:
    """Write a tree in LaTeX as a person would, with factors side by side."""
    if isinstance(tree, Name):
        base, _, low = tree.text.partition("_")
        base = f"\\{base}" if base == "beta" else base
        low = {"pi": r"\pi", "mu": r"\mu"}.get(low, low)
        return f"{base}_{{{low}}}" if low else base
    if isinstance(tree, Number):
        return str(tree.value) if tree.value >= 0 else f"({tree.value})"
    if isinstance(tree, Sum):
        return r"\left(" + " + ".join(map(latex, tree.terms)) + r"\right)"
    if isinstance(tree, Product):
        first, *rest = map(latex, tree.factors)
        return " ".join([first, *(f"({f})" if f[0].isdigit() else f for f in rest)])
    if isinstance(tree, Quotient):
        return rf"\dfrac{{{latex(tree.numerator)}}}{{{latex(tree.denominator)}}}"
    if isinstance(tree, Power):
        return f"{{{latex(tree.base)}}}^{{{tree.exponent}}}"
    if isinstance(tree, Negative):
        return rf"\left( - {latex(tree.operand)}\right)"
    if isinstance(tree, Parallel):
        return "(" + r" \parallel ".join(f"({latex(b)})" for b in tree.branches) + ")"
    assert isinstance(tree, Root)
    return rf"\sqrt{{{latex(tree.radicand)}}}"


def trees() -> st.SearchStrategy[Expression]:
    names = st.sampled_from(["R_E", "r_pi", "C_mu", "s", "beta", "v_out"]).map(Name)
    numbers = st.integers(0, 20).map(lambda n: Number(Fraction(n)))

    def grow(inner: st.SearchStrategy[Expression]) -> st.SearchStrategy[Expression]:
        many = st.lists(inner, min_size=2, max_size=3).map(tuple)
        return st.one_of(
            many.map(Sum),
            many.map(Product),
            many.map(Parallel),
            st.builds(Quotient, inner, inner),
            st.builds(Power, inner, st.integers(-3, 3)),
            inner.map(Negative),
            inner.map(Root),
        )

    return st.recursive(names | numbers, grow, max_leaves=9)


SETTINGS = settings(
    max_examples=150,
    deadline=None,
    derandomize=True,
    suppress_health_check=[HealthCheck.too_slow],
)


@SETTINGS
@given(trees())
def test_what_the_terminal_prints_can_be_typed_in_again(tree: Expression) -> None:
    assert parse_expression(to_unicode(tree)) == parse_expression(to_text(tree))


@SETTINGS
@given(trees())
def test_latex_with_factors_side_by_side_reads_as_its_tree(tree: Expression) -> None:
    # Parentheses that the writer puts in are gone again: both are read, so both are flat.
    typed = latex(tree)
    if "\\" not in typed and "{" not in typed:
        typed = f"{{{typed}}}"
    assert parse_expression(to_text(parse_expression(typed))) == parse_expression(to_text(tree))


def placed(each: Placed) -> list[Placed]:
    return [each, *(inner for part in each.parts for inner in placed(part))]


@SETTINGS
@given(trees(), st.sampled_from([to_text, to_unicode, latex]))
def test_every_part_stands_where_its_place_says(tree: Expression, write: object) -> None:
    typed = write(tree)  # type: ignore[operator]
    if write is latex:
        typed = f"{{{typed}}}"
    whole = parse_placed(typed)
    assert whole.node == parse_expression(typed)
    for part in placed(whole):
        assert 0 <= part.start < part.end <= len(typed)
        # Cut out and read by itself, what stands there is that part; braces keep it LaTeX.
        cut = typed[part.start : part.end]
        if isinstance(part.node, Product) and "/" in cut:
            continue  # a/b/c has the divisors b·c with a bar between
        assert parse_expression(f"{{{cut}}}" if write is latex else cut) == part.node
