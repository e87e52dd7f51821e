"""What x >> y strikes: terms with a partner that is larger by x/y in the same coefficient, and no others."""

from __future__ import annotations

from fractions import Fraction

import pytest
from assumed import registers_of

from derive.expressions.text import to_text
from derive.expressions.walk import evaluate

LADDER = """[sheet]
title = "Ladder"
[drives]
V_s = { voltage = ["in", "gnd"] }
[parts]
R_1 = { resistor = "1k", between = ["in", "a"] }
C_1 = { capacitor = "1n", between = ["a", "gnd"] }
R_2 = { resistor = "100k", between = ["a", "out"] }
C_2 = { capacitor = "10p", between = ["out", "gnd"] }
[find.H]
voltage = "out"
per = "V_s"
[budget]
gain = "90 %"
magnitude = "90 dB"
phase = "180 deg"
"""


def made(*statements, text=LADDER):
    lines = "".join(f'[[assume]]\nthat = "{statement}"\n' for statement in statements)
    (register,) = registers_of(text + lines)
    return register.entries


def coefficients(entry):
    return [to_text(value) for value in entry.reduced.form.denominator]


def test_the_term_beside_a_larger_one_is_struck_and_the_lonely_one_stays():
    # b_1 = R_1·C_1 + R_1·C_2 + R_2·C_2: R_1·C_2 has R_2·C_2 beside it, R_1·C_1 has no R_2·C_1.
    (entry,) = made("R_2 >> R_1")
    assert coefficients(entry) == ["1", "R_1*C_1 + R_2*C_2", "R_1*R_2*C_1*C_2"]
    assert [(to_text(term.term), to_text(term.against)) for term in entry.reduced.struck] == [
        ("R_1*C_2", "R_2*C_2")
    ]


def test_the_other_sign_says_the_same():
    assert coefficients(made("R_1 << R_2")[0]) == coefficients(made("R_2 >> R_1")[0])


def test_a_product_is_compared_with_a_product():
    (entry,) = made("R_1*C_1 >> R_2*C_2")
    assert coefficients(entry) == ["1", "R_1*C_1 + R_1*C_2", "R_1*R_2*C_1*C_2"]


def test_a_larger_sum_must_stand_there_whole():
    (entry,) = made("C_1 + C_2 >> R_2*C_2/R_1")
    assert coefficients(entry) == ["1", "R_1*C_1 + R_1*C_2", "R_1*R_2*C_1*C_2"]


def test_every_term_of_a_smaller_sum_is_struck():
    (entry,) = made("R_2*C_2 >> R_1*C_1 + R_1*C_2")
    assert coefficients(entry) == ["1", "R_2*C_2", "R_1*R_2*C_1*C_2"]


def test_a_later_assumption_stands_on_the_earlier_ones():
    first, second = made("R_2 >> R_1", "R_2*C_2 >> R_1*C_1")
    assert coefficients(second) == ["1", "R_2*C_2", "R_1*R_2*C_1*C_2"]
    assert first.together.poles != second.together.poles


def test_left_with_struck_terms_is_what_was_there_before():
    (entry,) = made("R_2 >> R_1")
    reduced, names = entry.reduced, {"s": Fraction(3), "R_1": 2, "R_2": 5, "C_1": 7, "C_2": 11}
    point = [int(names[name]) for name in reduced.ring.names]
    bottom = int(reduced.left[1](*point))
    for term in reduced.struck:
        bottom += evaluate(term.term, names, Fraction) * 3**term.power
    assert bottom == 1 + 3 * (2 * 7 + 2 * 11 + 5 * 11) + 9 * 2 * 5 * 7 * 11


def test_what_is_struck_is_shown_struck():
    (entry,) = made("R_2 >> R_1")
    (shown,) = entry.reduced.shown
    assert (shown.of, shown.power) == ("denominator", 1)
    assert to_text(shown.expression) == "R_1*C_1 + R_2*C_2 + [struck: R_1*C_2]"


@pytest.mark.parametrize(
    ("statement", "says", "left"),
    [
        ("R_1 -> 0", "R_1 shorted: nodes in and a become one", ["1", "R_2*C_2"]),
        ("C_1 -> 0", "C_1 removed", ["1", "R_1*C_2 + R_2*C_2"]),
        (
            "R_1 + R_2 -> 0",
            "R_1 shorted: nodes in and a become one; R_2 shorted: nodes a and out become one",
            ["1"],
        ),
        ("R_1*C_1 = 4*R_2*C_2", "", []),
        ("R_1 = R_2", "R_2 put for R_1", ["1", "R_2*C_1 + 2*R_2*C_2", "R_2^2*C_1*C_2"]),
        (
            "C_2 = C_1/100",
            "C_1/100 put for C_2",
            ["1", "(101*R_1*C_1 + R_2*C_1)/100", "R_1*R_2*C_1^2/100"],
        ),
    ],
)
def test_limits_and_ties_are_carried_out_and_said(statement, says, left):
    if not left:
        with pytest.raises(ValueError, match="neither side"):
            made(statement)
        return
    (entry,) = made(statement)
    assert entry.reduced.says == says
    assert coefficients(entry) == left


def test_infinite_gain_leaves_the_ideal_amplifier():
    text = LADDER.replace(
        "[find.H]", 'U1 = { opamp = true, output = "o", inputs = ["out", "o"], A_0 = "100000" }\n[find.H]'
    ).replace('voltage = "out"', 'voltage = "o"')
    (entry,) = made("A_0 -> inf", text=text)
    assert to_text(entry.reduced.form.gain) == "1"
    # A follower's gain is A/(1 + A).
    assert entry.together.gain == pytest.approx(1e-5)
    assert entry.reduced.says == "A_0 taken as infinite"
