"""Random circuits: the ledger against a solver written from the interface contract alone."""

from __future__ import annotations

import random
from functools import cache

import pytest
from circuits import random_text
from comparison import Comparison, compare, random_point
from ledger_arithmetic import PRIME
from modular_solver import Circuit

from derive.errors import InputError
from derive.reading.read import parse

COUNT, BATCH = 500, 25
SEED = 2_000_000
DRAFTS = 600


@cache
def compared(batch: int) -> tuple[Comparison, ...]:
    first = SEED + batch * BATCH
    return tuple(compare(seed) for seed in range(first, first + BATCH))


@pytest.mark.parametrize("batch", range(COUNT // BATCH))
def test_ledger_is_identical_to_the_independent_solution(batch):
    for circuit in compared(batch):
        assert circuit.differences == (), circuit.text
        assert not circuit.too_large, circuit.text


@pytest.mark.parametrize("batch", range(COUNT // BATCH))
def test_no_check_fails_on_a_right_result(batch):
    for circuit in compared(batch):
        assert circuit.failed == (), circuit.text
        # Equal parts may leave a circuit without a solution at its nominal values, and at these only.
        assert all(check.startswith("nominal values: not") for check in circuit.left_open), circuit.text


def test_random_circuits_are_of_every_kind_and_some_have_no_solution():
    every = [circuit for batch in range(COUNT // BATCH) for circuit in compared(batch)]
    assert len(every) == COUNT
    kinds = {kind for circuit in every for kind in circuit.kinds}
    assert kinds == {
        "resistor",
        "capacitor",
        "inductor",
        "transconductance",
        "voltage_gain",
        "current_gain",
        "transresistance",
        "ideal_opamp",
        "opamp",
        "coupling",
    }
    assert sum(circuit.singular for circuit in every) >= 5
    assert sum(circuit.results for circuit in every) >= COUNT
    assert sum(bool(circuit.left_open) for circuit in every) <= COUNT // 10
    text = "".join(circuit.text for circuit in every)
    for words in ("impedance = ", "current = ", "voltage = [", 'A_0 = "', 'R_out = "', "per = {"):
        assert words in text


# What the reader says of circuits that have no unique solution, for any values of their parts.
NO_SOLUTION = ("form a loop of voltage sources", "has no feedback", "share the output")


def test_reader_calls_only_those_circuits_unsolvable_that_are():
    chance = random.Random(SEED)
    refused = 0
    for _ in range(DRAFTS):
        text = random_text(chance)
        try:
            parse(text, "draft.toml")
        except InputError as error:
            if any(words in error.what for words in NO_SOLUTION):
                refused += 1
                circuit = Circuit(text)
                assert circuit.solve(*random_point(circuit, chance)) is None, text
    assert refused >= DRAFTS // 20


DIVIDER = """[sheet]
title = "Divider"
[drives]
V_s = { voltage = ["a", "gnd"] }
I_s = { current = ["gnd", "b"] }
[parts]
R_1 = { resistor = "1k", between = ["a", "b"] }
R_2 = { resistor = "2k", between = ["b", "gnd"] }
[find.A_v]
voltage = "b"
per = "V_s"
[find.Z_b]
voltage = "b"
per = "I_s"
[find.Z_t]
impedance = ["a", "b"]
[find.Y_s]
current = "V_s"
per = "V_s"
"""


def test_independent_solver_knows_the_divider():
    circuit = Circuit(DIVIDER)
    values, s = random_point(circuit, random.Random(1))
    truth = circuit.solve(values, s)
    r_1, r_2 = values["R_1"], values["R_2"]
    total = pow(r_1 + r_2, -1, PRIME)
    assert truth == {
        "A_v": r_2 * total % PRIME,
        "Z_b": r_1 * r_2 * total % PRIME,
        # With V_s at zero, a is ground: what is seen between a and b is R_1 beside R_2.
        "Z_t": r_1 * r_2 * total % PRIME,
        # Through the source from plus to minus: the current into the divider, turned round.
        "Y_s": -total % PRIME,
    }


def test_independent_solver_gives_none_where_two_drives_fight():
    fight = DIVIDER.replace("[parts]", 'V_t = { voltage = ["gnd", "a"] }\n[parts]')
    circuit = Circuit(fight)
    assert circuit.solve(*random_point(circuit, random.Random(1))) is None
