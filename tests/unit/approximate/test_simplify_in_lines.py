"""The operational amplifier's four answers in short lines, judged by nodal analysis made here."""

from __future__ import annotations

import tomllib
from fractions import Fraction
from pathlib import Path

import pytest
from simplify_circuits import circuit_from, poles_of, solved

from derive.approximate.questions import Question
from derive.approximate.simplify import simplify, simplify_all
from derive.approximate.simplify_lines import WIDTH, Lines, numeral
from derive.devices.linearise import linearise
from derive.expressions.ledger_text import to_ledger
from derive.expressions.parse import parse_expression
from derive.expressions.text import to_text
from derive.expressions.tree import Name
from derive.expressions.unicode_text import to_unicode
from derive.expressions.walk import evaluate, names_of
from derive.quantities.dimension import RESISTANCE
from derive.reading.read import read
from derive.topology.topology import Budget

FILE = Path(__file__).parents[2] / "benchmarks" / "circuits" / "opamp20.toml"
# Two equal sections of a ladder: 1 + 3·RC·s + (RC·s)², poles (−3 ± √5)/(2·RC).
LADDER = [
    ("R_1", 1e3, "in", "a"),
    ("C_1", 1e-9, "a", "gnd"),
    ("R_2", 1e3, "a", "out"),
    ("C_2", 1e-9, "out", "gnd"),
]


def parts_of_file():
    """Read the circuit's elements as tuples, without the package's reader."""
    found = []
    for name, entry in tomllib.loads(FILE.read_text(encoding="utf-8"))["parts"].items():
        value = float(next(v for k, v in entry.items() if isinstance(v, str)).split()[0])
        nodes = entry.get("between") or [*entry["flows"], *entry["senses"]]
        found.append((name, value, *nodes))
    return found


PARTS = parts_of_file()


@pytest.fixture(scope="module")
def answers():
    circuit = linearise(read(FILE))
    found = simplify_all(circuit, circuit.topology.finds[0], Budget())
    return {answer.question.kind: answer for answer in found}


def worked(answer, values=None, write=to_text):
    """Give the value of every name and of the form, read back from their texts."""
    known = dict(values or {part[0]: part[1] for part in PARTS})
    for name, value in answer.definitions:
        assert set(names_of(value)) <= set(known), f"{name} needs what is not defined yet"
        known[name] = evaluate(parse_expression(write(value)), known, float)
    return known, evaluate(parse_expression(write(answer.form)), known, float)


def true_values():
    poles = poles_of(PARTS)
    return {
        "low-frequency gain": solved(PARTS, [0])[0].real,
        "dominant pole": poles[0].real,
        "second pole": poles[1].real,
    }


def test_every_question_has_an_answer_within_its_budget_whose_text_has_the_stated_error(answers):
    for kind, true in true_values().items():
        answer = answers[kind]
        _, value = worked(answer)
        limit = 0.02 if kind == "low-frequency gain" else 0.1
        assert abs(value / true - 1) <= limit, kind
        assert answer.value == pytest.approx(value, rel=1e-12)
        assert answer.original == pytest.approx(true, rel=1e-6)
        assert answer.price.relative == pytest.approx(value / true - 1, abs=1e-6)
        assert answer.within
    unity = answers["unity-gain frequency"]
    assert abs(solved(PARTS, [1j * unity.original])[0]) == pytest.approx(1, abs=1e-9)
    assert worked(unity)[1] / unity.original - 1 == pytest.approx(unity.price.relative, abs=1e-9)
    assert unity.within


def test_the_ledger_writes_the_same_as_the_terminal(answers):
    for answer in answers.values():
        assert worked(answer, write=to_ledger)[1] == pytest.approx(worked(answer)[1], rel=1e-12)


def test_every_line_is_short_and_there_are_few(answers):
    for answer in answers.values():
        lines = [value for name, value in answer.definitions if name in dict(answer.says)]
        assert len(lines) <= 10
        for value in (answer.form, *lines):
            assert len(to_unicode(value)) <= WIDTH


def test_no_name_is_one_of_the_circuit_and_none_has_two_meanings(answers):
    symbols = {part[0] for part in PARTS}
    meanings = {}
    for answer in answers.values():
        for name, value in answer.definitions:
            assert name not in symbols
            assert meanings.setdefault(name, value) == value


def test_names_have_the_dimension_that_their_letter_says(answers):
    values = {part[0]: part[1] for part in PARTS}
    scale = {"r": 2.0, "R": 2.0, "g": 0.5, "C": 3.0}
    moved = {name: value * scale[name[0]] for name, value in values.items()}
    wanted = {"R": 2.0, "G": 0.5, "A": 1.0, "tau": 6.0}
    for answer in answers.values():
        before, after = worked(answer, values)[0], worked(answer, moved)[0]
        for name, _ in answer.says:
            letter = name.partition("_")[0]
            assert after[name] / before[name] == pytest.approx(wanted[letter], rel=1e-9), name


def held(node, parts):
    """Put the drive at a node of the circuit, and ground the circuit's own input."""
    moved = {"in": "gnd", node: "in"}
    return [(name, value, *(moved.get(end, end) for end in ends)) for name, value, *ends in parts]


def resistance(node, parts):
    """Give the resistance from a node to ground: a vast resistor from the drive feeds it a known current."""
    vast = 1e15
    fed = [("R_vast", vast, "in", node), *held("none", parts)]
    fed = [
        (name, value, *("out" if end == node else "old" if end == "out" else end for end in ends))
        for name, value, *ends in fed
    ]
    return solved(fed, [0])[0].real * vast


def test_stages_are_what_their_words_say(answers):
    gain = answers["low-frequency gain"]
    known, says = worked(gain)[0], dict(gain.says)
    checked = 0
    for name, words in says.items():
        if words.startswith("gain from node"):
            start = words.split()[3]
            assert known[name] == pytest.approx(solved(held(start, PARTS), [0])[0].real, rel=0.02)
            checked += 1
        if words.startswith("resistance from node"):
            node, _, grounded = words.removeprefix("resistance from node ").partition(" to ground")
            parts = PARTS
            if grounded:
                at = grounded.split()[2]
                parts = [(n, v, *("gnd" if e == at else e for e in ends)) for n, v, *ends in PARTS]
                parts = [part for part in parts if set(part[2:4]) != {"gnd"}]
            assert known[name] == pytest.approx(resistance(node, parts), rel=0.02), name
            checked += 1
    assert checked >= 4


def test_the_dominant_pole_is_that_of_the_compensation_seen_through_the_stages(answers):
    pole, gain = answers["dominant pole"], answers["low-frequency gain"]
    assert "C_c" in names_of(pole.form)
    shared = {name for name, _ in pole.says}
    # The same stages, in the same lines.
    assert shared <= {name for name, _ in gain.says}
    # K·|p_1| is about the unity-gain frequency, for the gain falls as 1/s from the pole on.
    product = gain.value * abs(pole.value) * 1.0
    assert product == pytest.approx(answers["unity-gain frequency"].original, rel=0.1)


def test_one_line_that_goes_beyond_the_budget_stays_for_orientation(answers):
    for kind, true in true_values().items():
        beyond = answers[kind].beyond
        assert beyond is not None
        assert not beyond.within
        assert beyond.price.relative == pytest.approx(worked(beyond)[1] / true - 1, abs=1e-6)


def ladder_pole(limit):
    circuit = circuit_from(LADDER)
    question = Question("dominant pole", None, limit)
    return simplify(circuit, circuit.topology.finds[0], question, Budget())


def test_poles_that_hang_together_are_given_by_three_coefficients():
    found = ladder_pole(Fraction(1, 20))
    known, value = worked(found, {part[0]: part[1] for part in LADDER})
    # b_1 = 3·RC and b_2/b_1 = RC/3; −1/(b_1 − b_2/b_1) is off by 2 %.
    assert known["tau_1a"] == pytest.approx(3e-6)
    assert known["tau_1b"] == pytest.approx(1e-6 / 3)
    assert value == pytest.approx(-1 / (3e-6 - 1e-6 / 3), rel=1e-12)
    true = (-3 + 5**0.5) / 2e-6
    assert found.original == pytest.approx(true, rel=1e-9)
    assert found.price.relative == pytest.approx(value / true - 1, abs=1e-9)
    assert found.within


def test_a_narrow_budget_gets_the_root_of_the_square_which_is_exact():
    found = ladder_pole(Fraction(1, 1000))
    value = worked(found, {part[0]: part[1] for part in LADDER})[1]
    assert value == pytest.approx((-3 + 5**0.5) / 2e-6, rel=1e-9)
    assert "sqrt" in to_text(found.form)


def test_a_narrower_budget_than_any_form_has_is_refused_with_the_reason():
    circuit = circuit_from(LADDER)
    found = simplify(
        circuit, circuit.topology.finds[0], Question("second pole", None, Fraction(1, 100)), Budget()
    )
    assert found.status == "refused"
    assert found.reason


def long_sum():
    ways = " + ".join(f"(R_{k} || (R_{k + 1} + beta*R_{k + 2}))" for k in range(1, 12, 3))
    return parse_expression(f"g_m*({ways})/(1 + g_m*({ways}))")


def test_a_long_value_is_cut_into_lines_with_the_same_value():
    value = long_sum()
    names = names_of(value)
    dimensions = {name: RESISTANCE for name in names if name.startswith("R")}
    dimensions |= {"g_m": (RESISTANCE / RESISTANCE) / RESISTANCE, "beta": RESISTANCE / RESISTANCE}
    lines = Lines({*names, "R_IIa"}, dict(dimensions))
    assert len(to_unicode(value)) > WIDTH
    name = lines.name(value, "II", "what it is")
    assert name == Name("A_II")
    known = {each: 1.0 + place / 7 for place, each in enumerate(names)}
    true = evaluate(value, known, float)
    for each, line in lines.lines:
        assert each not in known
        assert len(to_unicode(line)) <= WIDTH
        known[each] = evaluate(line, known, float)
    assert known["A_II"] == pytest.approx(true, rel=1e-12)
    # A name that has a meaning already is passed over.
    assert "R_IIa" not in dict(lines.lines)
    assert lines.words == {"A_II": "what it is"}


def test_numerals_are_those_of_the_romans():
    assert [numeral(k) for k in (1, 4, 5, 9, 10, 14)] == ["I", "IV", "V", "IX", "X", "XIV"]
