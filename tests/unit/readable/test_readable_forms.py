"""Ratios of circuits as engineers write them: parallel parts, Miller factors, β and r_e, dividers."""

from __future__ import annotations

import pytest
from road import equal

from derive.algebra.ring import ring
from derive.expressions.parse import parse_expression
from derive.expressions.text import to_text
from derive.quantities.dimension import CAPACITANCE, CONDUCTANCE, INDUCTANCE, RATIO, RESISTANCE
from derive.readable.prove import expanded, ratio_of, same_ratio
from derive.readable.readable import _worked, definitions_used, read_expression
from derive.readable.vocabulary import Junction, Vocabulary

KINDS = {
    "R": RESISTANCE,
    "r": RESISTANCE,
    "C": CAPACITANCE,
    "L": INDUCTANCE,
    "g": CONDUCTANCE,
    "A": RATIO,
}
NAMES = (
    *("A_0", "A_1", "g_m", "g_mb", "R_S", "R_B", "R_1", "R_2", "R_3", "r_pi", "r_o", "R_E", "R_C", "R_L"),
    *("L_1", "L_2", "C_pi", "C_mu", "C_1", "C_2", "C_L"),
)
WORDS = (
    ("beta", parse_expression("g_m*r_pi")),
    ("r_e", parse_expression("r_pi/(1 + beta)")),
    ("alpha", parse_expression("beta/(1 + beta)")),
)
RING = ring(("s", *NAMES))


def vocabulary(*, transistor=True, output_side=("R_L", "R_C")):
    """Give what the names mean, with a transistor's words or without."""
    order = (
        sorted((*NAMES, "beta", "alpha", "r_e"), key=_place) if transistor else sorted(NAMES, key=_place)
    )
    dimensions = {name: KINDS[name[0]] for name in NAMES}
    dimensions |= {"beta": RATIO, "alpha": RATIO, "r_e": RESISTANCE} if transistor else {}
    return Vocabulary(
        tuple(order),
        dimensions,
        dict.fromkeys(order),
        WORDS if transistor else (),
        (Junction("g_m", "r_pi", "beta", "r_e", "alpha"),) if transistor else (),
        {"g_m": frozenset(output_side)},
        frozenset({"A_0"}),
    )


def _place(name):
    ranks = {"b": 1, "a": 1, "A": 1, "g": 2, "R": 3, "r": 3, "L": 4, "C": 5}
    return ranks[name[0]], [*NAMES, "beta", "alpha", "r_e"].index(name)


def read(text, **more):
    """Write an expanded ratio for reading."""
    return to_text(read_expression(parse_expression(text), RING, vocabulary(**more)))


# What textbooks print, from memory; that each is equal to what it came from is asserted below.
FORMS = {
    # Series and parallel parts, peeled off one by one.
    "R_1*R_2/(R_1 + R_2)": "R_1 || R_2",
    "R_1*R_2*R_3/(R_1*R_2 + R_1*R_3 + R_2*R_3)": "R_1 || R_2 || R_3",
    "(R_1*R_2 + R_1*R_3 + R_2*R_3)/(R_1 + R_2)": "R_3 + (R_1 || R_2)",
    "(R_1*R_3 + R_2*R_3)/(R_1 + R_2 + R_3)": "R_3 || (R_1 + R_2)",
    "L_1*L_2/(L_1 + L_2)": "L_1 || L_2",
    # Capacitances in series are no ∥ of impedances.
    "C_1*C_2/(C_1 + C_2)": "C_1*C_2/(C_1 + C_2)",
    # What an emitter resistance looks like from the base, and the base's from the emitter.
    "r_pi + R_E + g_m*r_pi*R_E": "r_pi + (1 + beta)*R_E",
    "(R_S*r_pi + R_S*R_E + g_m*R_S*r_pi*R_E)/(R_S + r_pi + R_E + g_m*r_pi*R_E)": (
        "R_S || (r_pi + (1 + beta)*R_E)"
    ),
    "(R_S*r_pi + r_pi*R_E)/(R_S + r_pi + R_E + g_m*r_pi*R_E)": "r_pi || ((R_S + R_E)/(1 + g_m*R_E))",
    "R_E*r_pi/(R_E + r_pi + g_m*r_pi*R_E)": "R_E || r_e",
    "g_m*r_pi*R_C/(r_pi + R_E + g_m*r_pi*R_E)": "alpha*R_C/(R_E + r_e)",
    # The Miller factor stays visible, with the load in its bracket.
    "(R_S*r_pi + R_S*R_L + r_pi*R_L + g_m*R_S*r_pi*R_L)/(R_S + r_pi)": (
        "(R_S || r_pi)*(1 + g_m*R_L) + R_L"
    ),
    # Divider times stage; a gain near one; ratios of like quantities.
    "-g_m*r_pi*R_L*R_B/(R_S*R_B + R_S*r_pi + R_B*r_pi)": ("-(R_B || r_pi)/(R_S + (R_B || r_pi))*g_m*R_L"),
    "(R_1 + R_2)/R_1": "1 + R_2/R_1",
    "(R_E + g_m*r_pi*R_E)/(R_S + r_pi + R_E + g_m*r_pi*R_E)": "1/(1 + (R_S + r_pi)/((1 + beta)*R_E))",
    # An op amp's gain: the ideal one over one plus what A_0 leaves of it, unless that is longer.
    "-A_0*R_2/(R_1 + R_2 + A_0*R_1)": "-A_0*R_2/(R_2 + (1 + A_0)*R_1)",
    "(A_0*R_1 + A_0*R_2)/(R_1 + R_2 + A_0*R_1)": "(1 + R_2/R_1)/(1 + (1 + R_2/R_1)/A_0)",
    # Time constants, one a part.
    "(R_S*r_pi*C_pi + R_S*r_pi*C_mu + R_S*R_L*C_mu + r_pi*R_L*C_mu + g_m*R_S*r_pi*R_L*C_mu)/(R_S + r_pi)": (
        "C_pi*(R_S || r_pi) + C_mu*((R_S || r_pi)*(1 + g_m*R_L) + R_L)"
    ),
    "R_1*C_1 + R_1*C_2 + R_2*C_2": "R_1*C_1 + C_2*(R_1 + R_2)",
    # Corner frequencies in g_m/C.
    "(1 + g_m*r_pi)/(r_pi*C_pi)": "(1 + 1/beta)*g_m/C_pi",
    # Numbers and powers.
    "(2*R_1*R_2 + R_2^2)/(4*R_1)": "R_2*(2 + R_2/R_1)/4",
    "g_m + g_mb": "g_m + g_mb",
    "0": "0",
    "1": "1",
}


@pytest.mark.parametrize("raw", FORMS)
def test_form_is_what_an_engineer_writes(raw):
    assert read(raw) == FORMS[raw]


@pytest.mark.parametrize("raw", FORMS)
def test_form_says_the_same(raw):
    words = {name: value for name, value in WORDS}
    form = expanded(parse_expression(read(raw)), tuple(words.items()))
    assert equal(form, raw)


def test_definitions_come_with_those_they_need():
    found = definitions_used((parse_expression("R_E || r_e"),), vocabulary())
    assert [name for name, _ in found] == ["beta", "r_e"]
    assert definitions_used((parse_expression("R_E"),), vocabulary()) == ()


def test_without_a_transistor_no_word_of_one_is_used():
    assert read("r_pi + R_E + g_m*r_pi*R_E", transistor=False) == "r_pi*(1 + g_m*R_E) + R_E"


def test_load_in_the_bracket_follows_the_circuit():
    raw = "R_1 + R_2 + g_m*R_1*R_2"
    assert read(raw, output_side=("R_1",)) == "R_2*(1 + g_m*R_1) + R_1"
    assert read(raw, output_side=("R_2",)) == "R_1*(1 + g_m*R_2) + R_2"


def test_same_input_gives_the_same_form_each_time():
    raw = "(R_S*r_pi*C_pi + R_S*R_L*C_mu + g_m*R_S*r_pi*R_L*C_mu)/(R_S + r_pi)"
    assert len({read(raw) for _ in range(3)}) == 1


def test_time_constant_of_the_same_names_is_written_with_r_e():
    assert read("r_pi*C_pi/(1 + g_m*r_pi)") == "r_e*C_pi"


# What must not be taken for equal: the raw form, and one like it.
WRONG = {
    "R_1*R_2/(R_1 + R_2)": "R_1 || R_3",
    "r_pi + R_E + g_m*r_pi*R_E": "r_pi + beta*R_E",
    "R_E*r_pi/(R_E + r_pi + g_m*r_pi*R_E)": "R_E || r_pi",
    "R_1 + R_2": "-R_1 - R_2",
    "R_1": "1/(R_2 - R_2)",
}


@pytest.mark.parametrize("raw", WRONG)
@pytest.mark.parametrize("long", [False, True])
def test_proof_fails_on_a_form_that_says_something_else(raw, long, monkeypatch):
    if long:
        monkeypatch.setattr("derive.readable.prove.EXACT_LEAVES", 0)
    numerator, denominator = ratio_of(parse_expression(raw), RING)
    right, wrong = parse_expression(read(raw)), parse_expression(WRONG[raw])
    assert same_ratio(right, WORDS, RING, numerator, denominator)
    assert not same_ratio(wrong, WORDS, RING, numerator, denominator)


def test_form_that_its_proof_refuses_is_not_used(monkeypatch):
    monkeypatch.setattr("derive.readable.readable.same_ratio", lambda *ratio: False)
    monkeypatch.setattr("derive.readable.readable._worked", _worked.__wrapped__)
    assert read("R_1*R_2/(R_1 + R_2)") == "R_1*R_2/(R_1 + R_2)"
