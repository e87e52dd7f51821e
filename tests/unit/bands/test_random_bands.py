"""Random circuits: a band's response is the full one's limit, and merging changes nothing."""

from __future__ import annotations

import random
from fractions import Fraction

import pytest
from band_circuits import C, R, circuit, gain, gm, impedance, printed, solution_in, with_value

from derive.bands.restrict import find_in, restrict
from derive.normalise.exact_response import exact_response, ratio_at

FAR = Fraction(10) ** 40


def draw(seed, *, roles=True, merge=False):
    """Give a random circuit of resistors, capacitors and transconductances, with DC paths."""
    chance = random.Random(seed)
    nodes = ["out", *(f"n{k}" for k in range(chance.randint(2, 4)))]
    elements = [R("R_in", "gen", nodes[-1])]
    values = {"R_in": "100"}
    for k, node in enumerate(nodes):
        elements.append(R(f"R_g{k}", node, "gnd"))
        values[f"R_g{k}"] = str(chance.randint(100, 10_000))
    for k in range(chance.randint(2, 5)):
        elements.append(R(f"R_{k}", *chance.sample([*nodes, "gnd"], 2)))
        values[f"R_{k}"] = str(chance.randint(100, 10_000))
    chosen = []
    for k in range(chance.randint(2, 4)):
        elements.append(C(f"C_{k}", *chance.sample([*nodes, "gnd"], 2)))
        values[f"C_{k}"] = f"1/{chance.randint(10**5, 10**9)}"
        role = chance.choice(("coupling", "bypass", "parasitic", ""))
        if roles and role:
            chosen.append((f"C_{k}", role))
    for k in range(chance.randint(0, 2)):
        pairs = chance.sample([*nodes, "gnd"], 2), chance.sample([*nodes, "gnd"], 2)
        elements.append(gm(f"g_{k}", *map(tuple, pairs), f"Q{k}"))
        values[f"g_{k}"] = f"1/{chance.randint(10, 1000)}"
    finds = (chance.choice((gain("out"), gain("out", nodes[1]), impedance(nodes[1]))),)
    supplies = (("V_CC", "vcc"),) if merge else ()
    return circuit(elements, values, chosen, finds, supplies=supplies), values


@pytest.mark.parametrize("seed", range(25))
def test_the_full_band_of_a_circuit_without_roles_is_the_circuit(seed):
    stage, _ = draw(seed, roles=False)
    narrowed = restrict(stage, "full")
    assert narrowed.circuit == stage
    assert not narrowed.changes


@pytest.mark.parametrize("seed", range(40))
def test_a_bands_response_is_the_limit_of_the_full_circuits(seed):
    stage, _ = draw(seed)
    find = stage.topology.finds[0]
    for band in ("low", "mid", "high"):
        limit = stage
        for name, role in stage.roles:
            exact = next(symbol.value for symbol in stage.symbols if symbol.name == name)
            if role == "parasitic" and band in ("low", "mid"):
                limit = with_value(limit, name, exact / FAR)
            elif role in ("coupling", "bypass") and band in ("mid", "high"):
                limit = with_value(limit, name, exact * FAR)
        narrowed = restrict(stage, band)
        response = exact_response(narrowed.circuit, find_in(narrowed, find))
        full = exact_response(limit, find)
        assert response is not None
        assert full is not None
        for hertz in (3.0, 1e3, 7e5):
            if response.is_zero:
                continue
            assert abs(ratio_at([response], [full], hertz) - 1) < 1e-9


@pytest.mark.parametrize("seed", range(40))
def test_merging_changes_no_response_and_its_definitions_hold(seed):
    stage, values = draw(seed, merge=True)
    for band in ("mid", "full"):
        one = printed(solution_in(stage, band), values)
        other = printed(solution_in(stage, band, merge=False), values)
        assert one == other


def test_the_random_circuits_do_have_something_to_merge():
    count = sum(bool(restrict(draw(seed, merge=True)[0], "mid").definitions) for seed in range(40))
    assert count > 20
