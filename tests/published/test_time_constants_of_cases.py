"""Time constants of every case: their sums against the coefficients that elimination gave."""

from __future__ import annotations

import random
from functools import cache
from pathlib import Path

import pytest
from ledger_arithmetic import PRIME

from derive.bands.choose import bands_of
from derive.bands.restrict import restrict
from derive.bias.solve import operating_point
from derive.check.reading import value_modulo
from derive.check.roads import time_constants as road
from derive.check.verdict import Solution
from derive.devices.linearise import linearise
from derive.pipeline import solve
from derive.reading.read import read

CASES = sorted(path.parent.name for path in (Path(__file__).parents[2] / "cases").glob("*/topology.toml"))


@cache
def solutions_of(case: str) -> tuple[Solution, ...]:
    topology = read(Path(__file__).parents[2] / "cases" / case / "topology.toml")
    point = operating_point(topology)
    circuit = linearise(topology, {device.part: device for device in point.devices} if point else {})
    bands = [restrict(circuit, name) for name in bands_of(circuit)]
    found = [solve(band, find) for band in bands for find in topology.finds]
    return tuple(solution for solution in found if solution.time_constants is not None)


def convolved(one: list[int], other: list[int]) -> list[int]:
    product = [0] * (len(one) + len(other) - 1)
    for place, a in enumerate(one):
        for further, b in enumerate(other):
            product[place + further] = (product[place + further] + a * b) % PRIME
    return product


@pytest.mark.parametrize("case", CASES)
def test_sums_of_products_are_the_coefficients_and_sums_of_constants_those_of_the_circuit(case):
    for solution in solutions_of(case):
        given = solution.time_constants
        orders = [len(solution.form.numerator) - 1, len(solution.form.denominator) - 1]
        assert given.coefficients or not any(orders)
        chance = random.Random(case)
        symbols = solution.derivation.system.small_signal.symbols
        values = {symbol.name: chance.randrange(1, PRIME) for symbol in symbols}
        rows = (*given.open_circuit, *given.short_circuit)
        for name, meaning in (*given.definitions, *(each for row in rows for each in row.definitions)):
            values.setdefault(name, value_modulo(meaning, values, PRIME))

        def at(expression, values=values):
            return value_modulo(expression, values, PRIME)

        hidden = [at(item) for item in given.hidden]
        own = {
            "a": [at(item) for item in solution.form.numerator],
            "b": [at(item) for item in solution.form.denominator],
        }
        circuit = convolved(own["b"], hidden)
        for coefficient in given.coefficients:
            letter, _, power = coefficient.name.partition("_")
            truth = own[letter][int(power)]
            assert sum(at(product.term) for product in coefficient.products) % PRIME == truth
            assert sum(at(product.readable) for product in coefficient.products) % PRIME == truth
        known = [at(row.constant) for row in given.open_circuit if row.constant is not None]
        assert sum(known) % PRIME == circuit[1]
        assert [each.name for each in given.coefficients][:2][: len(own["b"]) - 1] == [
            f"b_{power}" for power in range(1, min(len(own["b"]), 3))
        ]


@pytest.mark.parametrize("case", CASES)
def test_road_of_time_constants_passes(case):
    for solution in solutions_of(case):
        assert road.judge(solution).passed is True


def test_cases_have_time_constants_in_several_bands():
    every = [solution for case in CASES for solution in solutions_of(case)]
    assert {solution.band.band for solution in every} >= {"low", "high", "full"}
    assert sum(len(solution.time_constants.hidden) > 1 for solution in every) >= 2
    assert sum(bool(solution.time_constants.short_circuit) for solution in every) >= 5
