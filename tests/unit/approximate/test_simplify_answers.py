"""Textbook approximations come out by themselves, and their prices are true. Formulas are from memory."""

from __future__ import annotations

from fractions import Fraction

import numpy as np
import pytest
from simplify_circuits import circuit_from, poles_of, solved

from derive.approximate.questions import FOUR_QUESTIONS, Question
from derive.approximate.simplify import simplify, simplify_all
from derive.errors import InputError
from derive.expressions.parse import parse_expression
from derive.expressions.walk import evaluate
from derive.topology.topology import Budget

GAIN, DOMINANT, UNITY, SECOND = FOUR_QUESTIONS

COMMON_EMITTER = [
    ("R_S", 600.0, "in", "b"),
    ("r_pi", 2500.0, "b", "gnd"),
    ("g_m", 0.04, "out", "gnd", "b", "gnd"),
    ("r_o", 2e6, "out", "gnd"),
    ("R_C", 4700.0, "out", "gnd"),
]
FOLLOWER = [
    ("R_S", 600.0, "in", "b"),
    ("R_B", 1e6, "b", "gnd"),
    ("r_pi", 4500.0, "b", "out"),
    ("g_m", 0.04, "gnd", "out", "b", "out"),
    ("R_E", 4700.0, "out", "gnd"),
]
# An operational amplifier of two stages: the second one has its compensation C_c across it.
TWO_STAGES = [
    ("R_S", 1.0, "in", "g"),
    ("C_in", 1e-15, "g", "gnd"),
    ("g_m1", 1e-3, "gnd", "x", "g", "gnd"),
    ("R_1", 1e6, "x", "gnd"),
    ("C_1", 2e-13, "x", "gnd"),
    ("g_m2", 5e-3, "out", "gnd", "x", "gnd"),
    ("R_2", 2e5, "out", "gnd"),
    ("C_L", 5e-12, "out", "gnd"),
    ("C_c", 8e-12, "x", "out"),
]


def asked(parts, question, budget=None):
    circuit = circuit_from(parts)
    return simplify(circuit, circuit.topology.finds[0], question, budget or Budget())


def values_of(parts):
    return {part[0]: Fraction(repr(part[1])) for part in parts}


def same(form, text, parts):
    """Whether a form has the value of a formula at the nominal values and at others."""
    expected = parse_expression(text)
    for scale in (Fraction(1), Fraction(7, 5)):
        values = {
            name: value * scale**place for place, (name, value) in enumerate(values_of(parts).items())
        }
        one, other = (evaluate(tree, values, Fraction) for tree in (form, expected))
        if one != other:
            return False
    return True


def with_words(found):
    """Give the form with what its words (β, r_e) stand for put in their place."""
    from derive.expressions.walk import substitute

    known = {}
    for name, value in found.definitions:
        known[name] = substitute(value, known)
    return substitute(found.form, known)


def test_common_emitter_with_a_large_r_o_has_the_gain_of_the_books():
    found = asked(COMMON_EMITTER, GAIN)
    assert found.status == "found"
    assert same(with_words(found), "-g_m*R_C*r_pi/(R_S + r_pi)", COMMON_EMITTER)
    assert [made.assumption.that for made in found.assumptions] == ["r_o -> inf"]
    true = solved(COMMON_EMITTER, [0])[0].real
    assert found.original == pytest.approx(true, rel=1e-9)
    assert found.price.relative == pytest.approx(found.value / true - 1, abs=1e-9)
    assert 0 < found.price.relative < 0.02


def test_follower_is_about_one():
    found = asked(FOLLOWER, GAIN, Budget(gain=Fraction(5, 100)))
    assert same(with_words(found), "1", FOLLOWER)
    true = solved(FOLLOWER, [0])[0].real
    assert found.price.relative == pytest.approx(1 / true - 1, abs=1e-12)
    said = {made.assumption.that for made in found.assumptions}
    assert "R_B -> inf" in said


def test_two_stage_amplifier_has_the_gain_and_the_three_corners_of_the_books():
    for question, formula in (
        (GAIN, "-g_m1*g_m2*R_1*R_2"),
        (DOMINANT, "-1/(g_m2*R_1*R_2*C_c)"),
        (UNITY, "g_m1/C_c"),
    ):
        found = asked(TWO_STAGES, question)
        assert found.status in ("found", "exact"), found.reason
        assert same(with_words(found), formula, TWO_STAGES), (question.kind, found.form)
        assert found.price.used <= 1


def test_second_pole_of_the_two_stage_amplifier_is_that_of_its_load():
    found = asked(TWO_STAGES, SECOND)
    # g_m2/C_L, or with the small C_1: g_m2·C_c/(C_1·C_c + C_1·C_L + C_c·C_L).
    full = "-g_m2*C_c/(C_1*C_c + C_1*C_L + C_c*C_L)"
    short = "-g_m2/C_L"
    values = values_of(TWO_STAGES)
    size = evaluate(parse_expression(full), values, Fraction)
    assert found.value == pytest.approx(float(size), rel=0.1)
    assert same(with_words(found), short, TWO_STAGES)


def test_values_and_prices_of_poles_are_those_of_eigenvalues():
    poles = poles_of(TWO_STAGES)
    for question, pole in ((DOMINANT, poles[0]), (SECOND, poles[1])):
        found = asked(TWO_STAGES, question)
        assert found.original == pytest.approx(pole.real, rel=1e-6)
        assert found.price.relative == pytest.approx(found.value / pole.real - 1, abs=1e-6)


def test_unity_gain_frequency_is_where_the_size_is_one():
    found = asked(TWO_STAGES, UNITY)
    assert abs(solved(TWO_STAGES, [1j * found.original])[0]) == pytest.approx(1, abs=1e-9)
    assert found.price.relative == pytest.approx(found.value / found.original - 1)


def test_response_in_a_band_is_off_by_what_is_said_and_where():
    found = asked(TWO_STAGES, Question("response in a band", (1e3, 1e7)))
    hertz = np.geomspace(1e3, 1e7, 1500)
    s = 2j * np.pi * hertz
    values = {part[0]: part[1] for part in TWO_STAGES}
    short = np.array([evaluate(with_words(found), {**values, "s": at}, float) for at in s])
    ratio = short / solved(TWO_STAGES, s)
    decibels, degrees = 20 * np.log10(abs(ratio)), np.angle(ratio, deg=True)
    assert max(abs(decibels)) <= 0.5 + 1e-3
    assert max(abs(degrees)) <= 5 + 1e-2
    assert abs(found.price.magnitude_db) == pytest.approx(max(abs(decibels)), abs=2e-3)
    assert abs(found.price.phase_deg) == pytest.approx(max(abs(degrees)), abs=2e-2)
    place = np.argmin(abs(hertz - found.price.magnitude_at_hz))
    assert decibels[place] == pytest.approx(found.price.magnitude_db, abs=5e-3)
    assert "401 frequencies" in found.sampling or "frequencies from" in found.sampling


def test_a_pair_of_poles_is_given_by_its_distance_from_the_origin():
    parts = [
        ("R_1", 1e3, "in", "a"),
        ("R_2", 1e3, "a", "b"),
        ("C_1", 1e-6, "a", "out"),
        ("C_2", 1e-9, "b", "gnd"),
        ("g_m", 10.0, "gnd", "out", "b", "out"),
        ("R_L", 1e5, "out", "gnd"),
    ]
    found = asked(parts, DOMINANT)
    # Sallen and Key's circuit: ω_0 = 1/√(R_1·R_2·C_1·C_2).
    assert found.left == "omega_1"
    assert found.root == 2
    assert found.value == pytest.approx(1 / np.sqrt(1e3 * 1e3 * 1e-6 * 1e-9), rel=0.05)
    assert found.original == pytest.approx(abs(poles_of(parts)[0]), rel=1e-6)


def test_where_nothing_may_be_dropped_the_form_is_exact_and_says_so():
    parts = [("R_1", 1e3, "in", "out"), ("R_2", 2e3, "out", "gnd")]
    found = asked(parts, GAIN)
    assert found.status == "exact"
    assert found.assumptions == ()
    assert "nothing may be dropped" in found.reason
    assert same(with_words(found), "R_2/(R_1 + R_2)", parts)
    assert found.price.relative == 0


def test_a_tighter_budget_keeps_what_a_wide_one_drops():
    tight = asked(COMMON_EMITTER, GAIN, Budget(gain=Fraction(1, 10**5)))
    assert tight.status == "exact"
    assert "r_o" in tight.ring.names


@pytest.mark.parametrize(
    ("question", "why"),
    [(DOMINANT, "no pole"), (SECOND, "one pole"), (UNITY, "nowhere falls through one")],
)
def test_what_a_circuit_has_not_is_refused_with_the_reason(question, why):
    parts = [("R_1", 1e3, "in", "out"), ("R_2", 2e3, "out", "gnd")]
    found = asked(parts, question)
    assert found.status == "refused"
    assert found.form is None
    assert why in found.reason


def test_a_band_without_a_range_is_refused():
    with pytest.raises(InputError, match="range"):
        asked(COMMON_EMITTER, Question("response in a band"))


def test_an_open_value_is_refused():
    from derive.devices.linearise import linearise
    from derive.reading.read import parse

    text = (
        "[sheet]\ntitle='T'\n[drives]\nV_s = { voltage = ['in', 'gnd'] }\n[parts]\n"
        "R_1 = { resistor = '?', between = ['in', 'out'] }\n"
        "R_2 = { resistor = '1k', between = ['out', 'gnd'] }\n[find.A]\nvoltage = 'out'\nper = 'V_s'\n"
    )
    circuit = linearise(parse(text, "test.toml"))
    with pytest.raises(InputError, match="left open"):
        simplify(
            circuit, circuit.topology.finds[0], Question("response in a band", (1.0, 10.0)), Budget()
        )


def test_two_close_poles_of_separate_nodes_are_told_apart():
    parts = [
        ("R_1", 1e3, "in", "a"),
        ("C_1", 1e-9, "a", "gnd"),
        ("g_m", 1e-3, "gnd", "out", "a", "gnd"),
        ("R_2", 1.3e3, "out", "gnd"),
        ("C_2", 1e-9, "out", "gnd"),
    ]
    found = asked(parts, Question("dominant pole", None, Fraction(1, 100)))
    assert found.value == pytest.approx(-1 / (1.3e3 * 1e-9), rel=0.01)
    assert same(with_words(found), "-1/(R_2*C_2)", parts)


def test_close_poles_that_hang_together_have_no_form_within_the_budget_but_one_beyond_it():
    parts = [
        ("R_1", 1e3, "in", "a"),
        ("C_1", 1e-9, "a", "gnd"),
        ("R_2", 1e3, "a", "out"),
        ("C_2", 1e-9, "out", "gnd"),
    ]
    found = asked(parts, Question("second pole", None, Fraction(1, 20)))
    assert found.status == "refused"
    assert "no ratio of two coefficients comes within the budget" in found.reason
    beyond = found.beyond
    assert beyond is not None
    assert not beyond.within
    pole = poles_of(parts)[1].real
    assert beyond.price.relative == pytest.approx(beyond.value / pole - 1, abs=1e-9)
    assert abs(beyond.price.relative) > 1 / 20


def test_matched_parts_go_by_one_name_where_that_is_shorter():
    parts = [
        ("R_a", 1e3, "in", "out"),
        ("R_b", 1e3, "in", "out"),
        ("g_m1", 2e-3, "out", "gnd", "out", "gnd"),
        ("g_m2", 2e-3, "out", "gnd", "out", "gnd"),
        ("g_m3", 2e-3, "out", "gnd", "out", "gnd"),
    ]
    found = asked(parts, GAIN)
    said = [made.assumption.that for made in found.assumptions]
    assert "g_m2 = g_m1" in said
    assert "g_m3 = g_m1" in said
    assert "R_b = R_a" not in said


def test_all_questions_together_are_the_same_as_one_by_one():
    circuit = circuit_from(TWO_STAGES)
    find = circuit.topology.finds[0]
    together = simplify_all(circuit, find, Budget(range_hz=(Fraction(1000), Fraction(10**6))))
    assert [found.question.kind for found in together] == [
        *(question.kind for question in FOUR_QUESTIONS),
        "response in a band",
    ]
    for question, found in zip(FOUR_QUESTIONS, together, strict=False):
        alone = simplify(circuit, find, question, Budget())
        assert alone.form == found.form
        assert alone.price == found.price
        assert alone.assumptions == found.assumptions
