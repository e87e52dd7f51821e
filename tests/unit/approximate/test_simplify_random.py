"""On random circuits no short form passes its budget, judged by a solution of the circuit made here."""

from __future__ import annotations

import random
from fractions import Fraction

import numpy as np
import pytest
from simplify_circuits import circuit_from, poles_of, random_parts, solved

from derive.algebra.ratio import exact_value
from derive.approximate.questions import FOUR_QUESTIONS, Question
from derive.approximate.simplify import simplify_all
from derive.errors import InputError
from derive.expressions.walk import evaluate, substitute
from derive.topology.topology import Budget

RANGE = (1e4, 1e7)
GROUPS = 5
EACH = 20


def value_by_hand(found, parts):
    """Give the value of a short form's tree, or of its ratio of coefficients, at the nominal values."""
    values = {part[0]: part[1] for part in parts}
    known = {}
    for name, expression in found.definitions:
        known[name] = substitute(expression, known)
    if found.root == 1:
        return evaluate(substitute(found.form, known), values, float)
    exact = {name: Fraction(repr(value)) for name, value in values.items()}
    ratio = exact_value(found.ring, found.top, exact, {}) / exact_value(
        found.ring, found.bottom, exact, {}
    )
    return float(abs(ratio)) ** (1 / found.root)


def draws(group):
    chance = random.Random(f"simplify {group}")
    for _ in range(EACH):
        parts = random_parts(chance)
        try:
            circuit = circuit_from(parts)
        except InputError:
            continue
        yield parts, circuit


@pytest.mark.parametrize("group", range(GROUPS))
def test_no_form_passes_its_budget(group):
    answered = 0
    hertz = np.geomspace(*RANGE, 700)
    s = 2j * np.pi * hertz
    for parts, circuit in draws(group):
        asked = (*FOUR_QUESTIONS, Question("response in a band", RANGE))
        for found in simplify_all(circuit, circuit.topology.finds[0], Budget(), asked, readable=False):
            if found.status == "refused":
                assert found.reason
                continue
            answered += 1
            assert found.within, (parts, found)
            if found.question.kind == "response in a band":
                values = {part[0]: part[1] for part in parts}
                known = {}
                for name, expression in found.definitions:
                    known[name] = substitute(expression, known)
                tree = substitute(found.form, known)
                short = np.array([evaluate(tree, {**values, "s": at}, float) for at in s])
                ratio = short / solved(parts, s)
                # A little more than the budget, for the frequencies here lie between those sampled.
                assert max(abs(20 * np.log10(abs(ratio)))) <= 0.501, parts
                assert max(abs(np.angle(ratio, deg=True))) <= 5.01, parts
                continue
            value = value_by_hand(found, parts)
            assert value == pytest.approx(found.value, rel=1e-9)
            original = whole(found, parts)
            limit = 0.02 if found.question.kind == "low-frequency gain" else 0.1
            assert abs(value / original - 1) <= limit * (1 + 1e-6), (parts, found)
            assert found.price.relative == pytest.approx(value / original - 1, abs=1e-6)
    assert answered > EACH


def whole(found, parts):
    """Give the value that the whole circuit has, by its own road."""
    kind = found.question.kind
    if kind == "low-frequency gain":
        power = round(np.log10(abs(solved(parts, [1e-3])[0] / solved(parts, [1e-4])[0])))
        s = 1e-3
        return (solved(parts, [s])[0] / s**power).real
    if kind == "unity-gain frequency":
        # Where the size is one: the answer's own place, proved by the circuit.
        assert abs(solved(parts, [1j * found.original])[0]) == pytest.approx(1, rel=1e-6)
        return found.original
    near = min(poles_of(parts), key=lambda pole: abs(abs(pole) / abs(found.original) - 1))
    assert abs(near) == pytest.approx(abs(found.original), rel=1e-5)
    return near.real if found.root == 1 else abs(near)


def test_the_same_circuit_gives_the_same_form_again():
    parts, circuit = next(draws(1))
    one, other = (
        simplify_all(circuit_from(parts), circuit.topology.finds[0], Budget()) for _ in range(2)
    )
    for first, second in zip(one, other, strict=True):
        assert first.form == second.form
        assert first.assumptions == second.assumptions
        assert first.price == second.price


def test_a_form_outside_its_budget_would_be_seen():
    parts, circuit = next(draws(2))
    found = next(
        answer
        for answer in simplify_all(circuit, circuit.topology.finds[0], Budget())
        if answer.status != "refused"
    )
    changed = [
        [(name, value * (1.5 if name == part[0] else 1), *ends) for name, value, *ends in parts]
        for part in parts
    ]
    off = [abs(value_by_hand(found, other) / found.original - 1) for other in changed]
    assert any(error > 0.02 for error in off)
