"""A network's responses and trials against the tableau of the checks, and against circuits rewritten by hand."""

from __future__ import annotations

import random
from pathlib import Path

import numpy as np
import pytest
from simplify_circuits import circuit_from, random_parts, solved

from derive.approximate.simplify_expand import expand
from derive.approximate.simplify_network import network_of
from derive.approximate.simplify_terms import terms_of
from derive.approximate.simplify_trials import Bench, responses
from derive.check.excitation import excite
from derive.check.solve import NoSolutionError, long_double, solve_frequencies
from derive.check.stamp import assemble
from derive.devices.linearise import linearise
from derive.errors import DeriveError
from derive.nodal.write import write_equations
from derive.normalise.numbers import values_of
from derive.reading.read import parse

ALL_KINDS = """
[sheet]
title = "All kinds"
[drives]
V_s = { voltage = ["in", "gnd"] }
I_s = { current = ["gnd", "b"] }
[parts]
R_1 = { resistor = "1k", between = ["in", "a"] }
R_2 = { resistor = "2k2", between = ["a", "b"] }
R_3 = { resistor = "4k7", between = ["b", "gnd"] }
L_1 = { inductor = "1 mH", between = ["b", "c"] }
L_2 = { inductor = "2 mH", between = ["c", "gnd"] }
L_3 = { inductor = "3 mH", between = ["d", "gnd"] }
K_1 = { coupling = "0.5", coils = ["L_1", "L_2"] }
C_1 = { capacitor = "1n", between = ["c", "gnd"] }
g_1 = { transconductance = "1 mS", flows = ["d", "gnd"], senses = ["a", "c"] }
R_4 = { resistor = "1k", between = ["d", "e"] }
E_1 = { voltage_gain = "3", output = ["e", "gnd"], senses = ["b", "c"] }
F_1 = { current_gain = "2", flows = ["f", "gnd"], senses = "R_2" }
R_5 = { resistor = "3k3", between = ["f", "e"] }
H_1 = { transresistance = "500 Ω", output = ["g", "gnd"], senses = "R_4" }
R_6 = { resistor = "1k", between = ["g", "h"] }
R_7 = { resistor = "10k", between = ["h", "out"] }
U_1 = { ideal_opamp = true, output = "out", inputs = ["gnd", "h"] }
U_2 = { opamp = true, output = "k", inputs = ["out", "k"], A_0 = "1000", w_unity = "1 Mrad/s" }
R_8 = { resistor = "1k", between = ["k", "gnd"] }
"""


def by_tableau(circuit, find, omegas):
    """Give the response as the station of checks solves it."""
    system = write_equations(circuit, find)
    values = {name: long_double(value) for name, value in values_of(circuit).items()}
    tableau = assemble(circuit, excite(system), values.__getitem__)
    return solve_frequencies(tableau, omegas).responses.astype(complex)


@pytest.mark.parametrize(
    "find",
    [
        'voltage = "k"\nper = "V_s"',
        'voltage = ["k", "d"]\nper = { V_s = "1/2" }',
        'current = "R_5"\nper = "I_s"',
        'current = "L_3"\nper = "V_s"',
        'impedance = ["a", "d"]',
    ],
)
def test_a_network_of_every_kind_responds_as_its_tableau_does(find):
    text = ALL_KINDS.replace('w_unity = "1 Mrad/s"', 'f_unity = "160 kHz"') + f"[find.H]\n{find}\n"
    circuit = linearise(parse(text, "test.toml"))
    wanted = circuit.topology.finds[0]
    omegas = np.geomspace(1e2, 1e8, 25)
    ours = responses(network_of(circuit, wanted), 1j * omegas)
    assert ours == pytest.approx(by_tableau(circuit, wanted, omegas.tolist()), rel=1e-9)
    bench = Bench(network_of(circuit, wanted), 1j * omegas)
    assert bench.response == pytest.approx(ours, rel=1e-8)


def test_random_networks_of_every_kind_respond_as_their_tableaus_do():
    import sys

    sys.path.append(str(Path(__file__).parents[2] / "properties"))
    from circuits import accepted_circuit

    omegas = np.geomspace(1e3, 1e7, 5)
    compared = 0
    for seed in range(80):
        topology, _ = accepted_circuit(random.Random(f"network {seed}"))
        circuit = linearise(topology)
        for find in topology.finds:
            try:
                theirs = by_tableau(circuit, find, omegas.tolist())
                ours = responses(network_of(circuit, find), 1j * omegas)
            except (NoSolutionError, DeriveError, np.linalg.LinAlgError):
                continue
            size = np.abs(theirs).max()
            if size < 1e-9 or size > 1e9:
                continue
            assert ours == pytest.approx(theirs, rel=1e-6, abs=1e-6 * size), topology.text
            compared += 1
    assert compared > 60


def test_a_trial_is_the_response_of_the_circuit_rewritten():
    samples = 2j * np.pi * np.geomspace(1e3, 1e8, 9)
    seen = 0
    for seed in range(12):
        parts = random_parts(random.Random(f"trial {seed}"))
        circuit = circuit_from(parts)
        bench = Bench(network_of(circuit, circuit.topology.finds[0]), samples)
        places = bench.at_work
        trials = bench.trials(places)
        for column, place in enumerate(places):
            name = bench.network.stamps[place].owner
            for shorted in (False, True):
                found = trials.responses[int(shorted), :, column]
                if np.isnan(found).any():
                    continue
                try:
                    true = solved(changed(parts, name, shorted=shorted), samples)
                except (np.linalg.LinAlgError, KeyError):
                    continue
                assert found == pytest.approx(true, rel=1e-5, abs=1e-9), (parts, name, shorted)
                seen += 1
    assert seen > 150


def changed(parts, name, *, shorted):
    """Take a part out, or make one of a resistor or capacitor's nodes the other."""
    left = [part for part in parts if part[0] != name]
    if not shorted:
        return left
    a, b = next(part[2:4] for part in parts if part[0] == name)
    keep, lose = (a, b) if a in ("gnd", "in", "out") else (b, a)
    if lose in ("gnd", "in", "out"):
        raise KeyError(name)
    return [
        (n, v, *renamed)
        for n, v, *ends in left
        for renamed in [[keep if e == lose else e for e in ends]]
        if renamed[0] != renamed[1]
    ]


def test_changes_in_a_row_leave_the_response_of_the_circuit_that_is_left():
    parts = random_parts(random.Random("in a row"))
    circuit = circuit_from(parts)
    samples = 2j * np.pi * np.geomspace(1e3, 1e8, 9)
    bench = Bench(network_of(circuit, circuit.topology.finds[0]), samples)
    for _ in range(3):
        trials = bench.trials(bench.at_work)
        column = int(np.flatnonzero(~np.isnan(trials.responses[0]).any(axis=0))[-1])
        before = trials.responses[0, :, column]
        name = bench.network.stamps[bench.at_work[column]].owner
        bench.apply(int(bench.at_work[column]), shorted=False)
        parts = [part for part in parts if part[0] != name]
        assert bench.response == pytest.approx(before, rel=1e-8)
        assert bench.response == pytest.approx(solved(parts, samples), rel=1e-8)
    updated = bench.response.copy()
    bench.refresh()
    assert bench.response == pytest.approx(updated, rel=1e-8)


def test_what_is_expanded_is_what_is_on_the_bench():
    for seed in range(15):
        parts = random_parts(random.Random(f"expand {seed}"))
        circuit = circuit_from(parts)
        network = network_of(circuit, circuit.topology.finds[0])
        samples = 2j * np.pi * np.geomspace(1e3, 1e8, 9)
        bench = Bench(network, samples)
        trials = bench.trials(bench.at_work)
        kind = seed % 2
        free = np.flatnonzero(
            ~np.isnan(trials.responses[kind]).any(axis=0)
            & (np.abs(trials.responses[kind]).min(axis=0) > 0)
        )
        if len(free):
            bench.apply(int(bench.at_work[free[0]]), shorted=bool(kind))
        expanded = expand(bench)
        above, below = (
            terms_of(expanded.ring, p, network.values).at(samples).sum(axis=1)
            for p in (expanded.top, expanded.bottom)
        )
        assert above / below == pytest.approx(bench.response, rel=1e-7)
