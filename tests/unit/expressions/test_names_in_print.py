"""How names and maths look: Typst source, the terminal, speech; and Typst accepts all of it."""

from __future__ import annotations

from fractions import Fraction

import pytest
import typst

from derive.expressions.names import GREEK
from derive.expressions.parse import parse_expression
from derive.expressions.speech import name_to_speech, to_speech
from derive.expressions.tree import Elided, Name, Negative, Number, Product, Quotient, Sum
from derive.expressions.typst_maths import (
    factor_sources,
    name_to_typst,
    term_sources,
    text_to_typst,
    to_typst,
)
from derive.expressions.unicode_text import name_to_unicode

# name; Typst maths; terminal; speech
NAMES = [
    ("s", "s", "s", "s"),
    ("R_E", "R_(E)", "R_E", "R sub E"),
    ("r_pi", "r_(pi)", "r_π", "r sub pi"),
    ("C_pi1", "C_(pi 1)", "C_π1", "C sub pi 1"),
    ("V_out", 'V_(upright("out"))', "V_out", "V sub out"),
    ("R12", "R_(12)", "R12", "R sub 12"),
    ("g_m_tail", 'g_(m thin upright("tail"))', "g_m_tail", "g sub m tail"),
    ("GF", "G_(F)", "GF", "G sub F"),
    ("lambda", "lambda", "λ", "lambda"),
    ("pi_1", "pi_(1)", "π_1", "pi sub 1"),
    ("beta2", "beta_(2)", "β2", "beta sub 2"),
    ("Omega_T", "Omega_(T)", "Ω_T", "Omega sub T"),
    ("Rs", "R_(s)", "Rs", "R sub s"),
    ("Cpi", "C_(pi)", "Cπ", "C sub pi"),
    ("gm1", "g_(m 1)", "gm1", "g sub m 1"),
    ("rpi", "r_(pi)", "rπ", "r sub pi"),
    ("Rin", 'R_(upright("in"))', "Rin", "R sub in"),
    ("VCC", 'V_(upright("CC"))', "VCC", "V sub CC"),
    ("ABC", 'upright("ABC")', "ABC", "ABC"),
    ("gain", 'upright("gain")', "gain", "gain"),
    ("R_", 'upright("R_")', "R_", "R underscore"),
    ("R__1", 'upright("R__1")', "R__1", "R underscore underscore 1"),
    ("R_12a", "R_(12 a)", "R_12a", "R sub 12 a"),
]


@pytest.mark.parametrize(("name", "maths", "terminal", "said"), NAMES)
def test_a_name_is_set_the_way_engineers_write_it(
    name: str, maths: str, terminal: str, said: str
) -> None:
    assert name_to_typst(name) == maths
    assert name_to_unicode(name) == terminal
    assert name_to_speech(name) == said


EXPRESSIONS = [
    ("a*b/(c*d)", "frac(a b, c d)"),
    ("-a*b", "-a b"),
    ("-(a + b)", "-(a + b)"),
    ("a - (b - c)", "a - (b - c)"),
    ("2*3*x", "2 dot 3 x"),
    ("x*2", "x dot 2"),
    ("2*(1/3)*x", "2 dot frac(1, 3) x"),
    ("2*3^2", "2 dot 3^(2)"),
    ("0.5*x", "frac(1, 2) x"),
    ("gain*ABC*x", 'upright("gain") thin upright("ABC") thin x'),
    ("g_m*(R_C || R_L)", "g_(m) (R_(C) parallel R_(L))"),
    ("R_S + R_C || R_L", "R_(S) + (R_(C) parallel R_(L))"),
    ("r_pi || ((R_S + R_E)/beta)", "r_(pi) parallel frac(R_(S) + R_(E), beta)"),
    ("a || (b*c)", "a parallel (b c)"),
    ("a || (b + c)", "a parallel (b + c)"),
    ("R_E^2", "R_(E)^(2)"),
    ("(x^2)^3", "(x^(2))^(3)"),
    ("(a/b)^-1", "(frac(a, b))^(-1)"),
    ("sqrt(a + b)^2", "sqrt(a + b)^(2)"),
]


@pytest.mark.parametrize(("text", "maths"), EXPRESSIONS)
def test_an_expression_is_set_as_mathematics(text: str, maths: str) -> None:
    assert to_typst(parse_expression(text)) == maths


def test_terms_and_factors_come_apart_for_breaking_lines() -> None:
    tree = parse_expression("-a*b + c - (d || e)")
    assert term_sources(tree) == [("-", "a b"), ("+", "c"), ("-", "(d parallel e)")]
    assert term_sources(Negative(Name("a"))) == [("-", "a")]
    assert factor_sources(parse_expression("2*3*(a + b)")) == ["2", "dot 3", "(a + b)"]
    joined = "".join(f"{sign}{source}" for sign, source in term_sources(tree))
    assert joined.replace(" ", "") == to_typst(tree).replace(" ", "").replace("--", "-")


def test_elided_terms_are_set_as_dots_and_upright_words() -> None:
    tree = Sum((Name("a"), Elided(10886, 'file "b\\c"\n')))
    assert to_typst(tree) == ('a + dots.h thin "(10,886 more terms: file \\"b\\\\c\\" )"')


def test_plain_text_cannot_leave_its_typst_string() -> None:
    assert text_to_typst('a" + #sys') == '"a\\" + #sys"'
    assert text_to_typst("a\\") == '"a\\\\"'


@pytest.mark.parametrize(
    ("text", "said"),
    [
        ("(a + b)*c", "open parenthesis a plus b close parenthesis times c"),
        ("a + b*c", "a plus b times c"),
        ("a/(b + c)", "the fraction a over b plus c end fraction"),
        ("R_S || R_L", "R sub S in parallel with R sub L"),
        ("2*(a || b)", "2 times open parenthesis a in parallel with b close parenthesis"),
        ("a || (b*c)", "a in parallel with open parenthesis b times c close parenthesis"),
        ("-x^2 - y^-3", "minus x squared minus y to the power minus 3"),
        ("sqrt(x + 1)", "the square root of x plus 1 end root"),
        ("x^3*y^4", "x cubed times y to the power 4"),
    ],
)
def test_an_expression_is_said_in_one_way(text: str, said: str) -> None:
    assert to_speech(parse_expression(text)) == said


def test_elided_terms_and_rationals_are_said() -> None:
    half = Number(Fraction(1, 2))
    tree = Sum((Product((half, Name("a"))), Elided(3, "the ledger")))
    assert to_speech(tree) == (
        "the fraction 1 over 2 end fraction times a plus 3 more terms, written out at the ledger"
    )


# Words that mean something to Typst, and shapes that are easily torn apart wrongly.
HARD_NAMES = [
    "in", "as", "let", "set", "show", "if_else", "none", "auto", "true", "frac", "sqrt1",
    "upright", "dot_product", "dots", "h", "thin", "sum", "x1y2", "R_Sp", "tau_C_pi", "A_0",
    "w_u2", "E", "I", "N", "V_BE", "g_m1", "C_gs", "f_T", "not_a", "or_b", "and", "while",
    "import", "lr", "cal", "mat",
]  # fmt: skip


def test_typst_compiles_every_name_and_every_expression() -> None:
    names = [name for name, *_ in NAMES] + HARD_NAMES + sorted(GREEK)
    assert len(names) > 60
    sources = [name_to_typst(name) for name in names]
    sources += [f"{name_to_typst(name)}^(2)" for name in names]
    sources += [to_typst(parse_expression(text)) for text, _ in EXPRESSIONS]
    sources += [f"{name_to_typst(name)} {to_typst(Name('x'))} (a + b)" for name in names]
    sources.append(to_typst(Quotient(Elided(2, 'a, b; "c" \\ #d'), Name("x"))))
    document = "".join(f"${source}$\n\n" for source in sources)
    assert typst.compile(document.encode(), format="svg")


def test_typst_refuses_an_unknown_word_so_that_the_test_above_means_something() -> None:
    with pytest.raises(typst.TypstError):
        typst.compile(b"$gain$", format="svg")
