"""Time constants of random stages against node equations stamped and solved in the test itself."""

from __future__ import annotations

import random
from fractions import Fraction
from functools import cache

import numpy as np
import pytest
from rc_stages import Stage, characteristic, random_stage, seen

from derive.devices.linearise import linearise
from derive.eliminate.eliminate import eliminate
from derive.eliminate.plan import plan
from derive.errors import InputError
from derive.expressions.walk import evaluate
from derive.nodal.write import write_equations
from derive.normalise.form import NormalForm
from derive.normalise.normalise import normalise
from derive.reactances.find_time_constants import find_time_constants
from derive.reactances.time_constants import TimeConstants
from derive.readable.vocabulary import vocabulary_of
from derive.reading.read import parse

COUNT, BATCH = 500, 50
SEED = 4_000_000


@cache
def stages(batch: int) -> tuple[tuple[Stage, NormalForm, TimeConstants], ...]:
    first = SEED + batch * BATCH
    return tuple(worked(random.Random(seed)) for seed in range(first, first + BATCH))


def worked(chance: random.Random) -> tuple[Stage, NormalForm, TimeConstants]:
    """Draw until the reader accepts: it refuses parts that hang in the air."""
    while True:
        stage = random_stage(chance)
        try:
            circuit = linearise(parse(stage.text, "stage.toml"), {})
        except InputError:
            continue
        break
    system = write_equations(circuit, circuit.topology.finds[0])
    form, derivation = normalise(eliminate(system, plan(system)))
    constants = find_time_constants(derivation, form, vocabulary_of(circuit))
    assert constants is not None
    return stage, form, constants


def drawn(stage: Stage) -> dict[str, Fraction]:
    """Give every part a value of its own: a wrong identity holds at it by a chance of some 1e-7."""
    chance = random.Random(stage.text)
    return {name: Fraction(chance.randint(1, 10**9)) for _, name, _ in stage.parts}


def own_polynomial(stage: Stage, values: dict[str, Fraction]) -> list[Fraction]:
    found = characteristic(*stage.matrices(values))
    assert found[0], "every node has a way for DC"
    return [value / found[0] for value in found]


def value(expression, values):
    return evaluate(expression, values, Fraction)


@pytest.mark.parametrize("batch", range(COUNT // BATCH))
def test_open_circuit_time_constants_add_up_to_b_1_identically(batch):
    for stage, _, found in stages(batch):
        values = drawn(stage)
        total = sum(value(row.constant, values) for row in found.open_circuit)
        assert total == own_polynomial(stage, values)[1], stage.text


@pytest.mark.parametrize("batch", range(COUNT // BATCH))
def test_products_add_up_to_b_2_and_higher_identically(batch):
    for stage, form, found in stages(batch):
        values = drawn(stage)
        own = own_polynomial(stage, values)
        if found.hidden_says:
            # The coefficients are those of the response, which has not all modes of the circuit.
            own = [value(item, values) for item in form.denominator]
            if not found.hidden_symbols:
                assert found.coefficients == ()
                continue
        named = {each.name: each.products for each in found.coefficients}
        for power in range(1, len(own)):
            products = named.get(f"b_{power}", ())
            if power > 2 and not products and f"b_{power} and higher have too many terms" in found.remark:
                break
            assert sum(value(p.term, values) for p in products) == own[power], stage.text
            for product in products:
                assert value(product.term, values) == value(product.readable, values), stage.text


@pytest.mark.parametrize("batch", range(COUNT // BATCH))
def test_each_capacitor_sees_the_resistance_of_the_node_equations(batch):
    for stage, _, found in stages(batch):
        values = drawn(stage)
        conductances, _ = stage.matrices(values)
        rows = {row.symbol: row for row in found.open_circuit}
        assert list(rows) == [name for name, _ in stage.capacitors]
        for name, at in stage.capacitors:
            truth = seen(conductances, at)
            assert value(rows[name].resistance, values) == truth, stage.text
            assert value(rows[name].readable, values) == truth, stage.text
            assert value(rows[name].constant, values) == truth * values[name], stage.text


@pytest.mark.parametrize("batch", range(COUNT // BATCH))
def test_response_and_hidden_factor_make_the_circuit_s_own_polynomial(batch):
    for stage, form, found in stages(batch):
        values = drawn(stage)
        product = np.convolve(
            np.array([value(item, values) for item in form.denominator], dtype=object),
            np.array([value(item, values) for item in found.hidden], dtype=object),
        )
        own = own_polynomial(stage, values)
        assert [*product, *[0] * (len(own) - len(product))] == own, stage.text


def test_numbers_at_nominal_agree_with_numpy():
    for stage, _, found in stages(0):
        nominal = {
            name: Fraction(count * 370) if kind == "R" else Fraction(count * 13, 10**12) if kind == "C" else
            Fraction(count, 1000)
            for count, (kind, name, _) in enumerate(stage.parts, 1)
        }  # fmt: skip
        conductances, capacitances = (np.array(m, dtype=float) for m in stage.matrices(nominal))
        for row in found.open_circuit:
            at = dict(stage.capacitors)[row.symbol]
            port = np.zeros(len(conductances))
            for node, sign in zip(at, (1, -1), strict=True):
                if node >= 2:
                    port[node - 2] = sign
            seconds = float(nominal[row.symbol]) * (port @ np.linalg.solve(conductances, port))
            assert float(row.seconds) == pytest.approx(seconds, rel=1e-9, abs=1e-24)
        # The sum of all is minus the sum of the poles' reciprocals.
        total = np.trace(np.linalg.solve(conductances, capacitances))
        assert float(sum(row.seconds for row in found.open_circuit)) == pytest.approx(total, rel=1e-9)
        known = [row.share for row in found.open_circuit if row.share is not None]
        assert not known or sum(known) == pytest.approx(1)


def test_stages_are_many_and_unlike():
    every = [stage for batch in range(COUNT // BATCH) for stage in stages(batch)]
    assert len(every) == COUNT
    assert sum(any(kind == "g" for kind, _, _ in stage.parts) for stage, _, _ in every) > COUNT // 3
    assert sum(len(found.hidden) > 1 for _, _, found in every) > 20
    assert sum(len(found.open_circuit) >= 3 for _, _, found in every) > COUNT // 3
    assert sum(len(row.derivation.steps) > 5 for _, _, found in every for row in found.open_circuit
               if row.derivation) > COUNT  # fmt: skip
