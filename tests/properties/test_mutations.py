"""Every small mistake in a result or in a step is noticed, and the sheet says so."""

from __future__ import annotations

import random
from collections import Counter
from dataclasses import replace
from functools import cache
from itertools import islice

import pytest
from mutate import WAYS, Mutation, mutations

import derive.pipeline
from derive.bands.restrict import restrict
from derive.check.judge import finish, start
from derive.check.verdict import Outcome, Result, Solution
from derive.cli import main
from derive.devices.linearise import linearise
from derive.expressions.parse import parse_expression
from derive.pipeline import solve
from derive.reading.read import parse
from derive.sheet.compose import compose

TOTAL = 1000
HEAD = '[sheet]\ntitle = "Stage"\n[drives]\nV_s = { voltage = ["in", "gnd"] }\n[parts]\n'
GAIN = '\n[find.A_v]\nvoltage = "out"\nper = "V_s"\n'


def row(name: str, kind: str, value: str, one: str, other: str) -> str:
    """Write a part between two nodes."""
    return f'{name} = {{ {kind} = "{value}", between = ["{one}", "{other}"] }}\n'


FOLLOWER = (
    HEAD
    + row("R_S", "resistor", "600 Ω", "in", "b")
    + row("r_pi", "resistor", "4k5", "b", "out")
    + row("C_pi", "capacitor", "22p", "b", "out")
    + row("C_mu", "capacitor", "3p", "b", "gnd")
    + 'g_m = { transconductance = "40 mS", flows = ["gnd", "out"], senses = ["b", "out"] }\n'
    + row("R_E", "resistor", "2k2", "out", "gnd")
    + GAIN
)
CIRCUITS = {
    "follower": FOLLOWER,
    "common emitter": HEAD
    + row("R_S", "resistor", "1k", "in", "b")
    + row("r_pi", "resistor", "2k5", "b", "gnd")
    + row("C_pi", "capacitor", "12p", "b", "gnd")
    + row("C_mu", "capacitor", "2p", "b", "out")
    + 'g_m = { transconductance = "40 mS", flows = ["out", "gnd"], senses = ["b", "gnd"] }\n'
    + row("R_L", "resistor", "4k7", "out", "gnd")
    + GAIN,
    "Sallen-Key": HEAD
    + row("R_1", "resistor", "10k", "in", "a")
    + row("R_2", "resistor", "12k", "a", "p")
    + row("C_1", "capacitor", "22n", "a", "out")
    + row("C_2", "capacitor", "10n", "p", "gnd")
    + 'O_1 = { ideal_opamp = true, output = "out", inputs = ["p", "out"] }\n'
    + GAIN,
    "twin-T": HEAD
    + row("R_1", "resistor", "10k", "in", "a")
    + row("R_2", "resistor", "10k", "a", "out")
    + row("C_3", "capacitor", "20n", "a", "gnd")
    + row("C_1", "capacitor", "10n", "in", "b")
    + row("C_2", "capacitor", "10n", "b", "out")
    + row("R_3", "resistor", "5k1", "b", "gnd")
    + GAIN,
    "coupled inductors": HEAD
    + row("R_S", "resistor", "50R", "in", "a")
    + row("L_1", "inductor", "1 mH", "a", "gnd")
    + row("L_2", "inductor", "3 mH", "out", "gnd")
    + 'k_1 = { coupling = "0.6", coils = ["L_1", "L_2"] }\n'
    + row("R_L", "resistor", "100R", "out", "gnd")
    + GAIN,
    "weighted differential": HEAD.replace("[parts]", 'V_t = { voltage = ["b", "gnd"] }\n[parts]')
    + row("R_1", "resistor", "1k", "in", "p")
    + row("R_2", "resistor", "3k", "b", "p")
    + row("R_3", "resistor", "2k", "p", "gnd")
    + row("C_1", "capacitor", "1n", "p", "gnd")
    + 'A_1 = { voltage_gain = "7", output = ["out", "gnd"], senses = ["p", "gnd"] }\n'
    + row("R_4", "resistor", "2k", "out", "gnd")
    + '\n[find.A_d]\nvoltage = ["out", "in"]\nper = { V_s = "1/2", V_t = "-1/2" }\n',
    "impedance": HEAD
    + row("R_1", "resistor", "1k", "in", "out")
    + row("L_1", "inductor", "1 mH", "out", "x")
    + row("C_1", "capacitor", "1n", "x", "gnd")
    + row("R_2", "resistor", "3k", "x", "gnd")
    + '\n[find.Z_out]\nimpedance = "out"\n',
}


@cache
def solved(name: str) -> Solution:
    circuit = linearise(parse(CIRCUITS[name], "stage.toml"))
    return solve(restrict(circuit, "full"), circuit.topology.finds[0], explain=False)


def judged(*solutions: Solution) -> Outcome:
    verdicts = finish(start(solutions, lcapy=False))
    circuit = solutions[0].judged
    return Outcome(circuit, tuple(map(Result, solutions, verdicts)))


@cache
def mutated(name: str) -> tuple[Mutation, ...]:
    """Give this circuit's share of the mutations, the same ones on every run."""
    names = list(CIRCUITS)
    share = TOTAL // len(names) + (names.index(name) < TOTAL % len(names))
    return tuple(islice(mutations(solved(name), random.Random(name)), share))


@pytest.mark.parametrize("name", CIRCUITS)
def test_right_solution_passes_every_check(name):
    outcome = judged(solved(name))
    assert outcome.passed
    sheet = compose(outcome, "stage")
    assert sheet.passed
    assert sheet.failures == ()


@pytest.mark.parametrize("name", CIRCUITS)
def test_every_mutation_is_noticed_and_the_sheet_says_so(name):
    for mutation in mutated(name):
        outcome = judged(mutation.solution)
        (result,) = outcome.results
        failed = [verdict.name for verdict in result.verdicts if verdict.passed is False]
        assert failed, (mutation.place, mutation.way, mutation.solution)
        sheet = compose(outcome, "stage")
        assert not sheet.passed
        find = mutation.solution.derivation.system.find.name
        assert set(sheet.failures) >= {f"{find}: {check}" for check in failed}


def test_there_are_a_thousand_mutations_of_every_way_at_every_place():
    every = [mutation for name in CIRCUITS for mutation in mutated(name)]
    assert len(every) == TOTAL
    places = Counter(mutation.place for mutation in every)
    assert set(places) == {
        "gain",
        "numerator",
        "denominator",
        "nodal equation",
        "step",
        "multiplier",
        "divisor",
    }
    assert min(places.values()) >= 100
    ways = Counter(mutation.way for mutation in every)
    assert set(ways) == set(WAYS)
    assert min(ways.values()) >= 100


def test_beta_for_beta_plus_one_is_noticed():
    # The gain is (β + 1)·R_E/(R_S + r_pi + (β + 1)·R_E); with β = 180 the slip costs 0.01 % of it.
    wrong = parse_expression("g_m*r_pi*R_E/(R_S + r_pi + g_m*r_pi*R_E)")
    right = parse_expression("(g_m*r_pi + 1)*R_E/(R_S + r_pi + (g_m*r_pi + 1)*R_E)")
    for gain, passed in ((right, True), (wrong, False)):
        solution = solved("follower")
        outcome = judged(replace(solution, form=replace(solution.form, gain=gain)))
        (result,) = outcome.results
        verdicts = {verdict.name: verdict.passed for verdict in result.verdicts}
        assert verdicts["identity in all symbols"] is passed
        assert outcome.passed is passed


def picked() -> list[tuple[str, Mutation]]:
    """Give a mutation of each place, spread over the circuits."""
    found: dict[str, tuple[str, Mutation]] = {}
    for name in CIRCUITS:
        for mutation in mutated(name):
            if mutation.place not in found and name not in [other for other, _ in found.values()]:
                found[mutation.place] = (name, mutation)
    return list(found.values())


@pytest.mark.parametrize("index", range(4))
def test_show_ends_with_status_1_on_a_wrong_solution(index, tmp_path, monkeypatch, capsys):
    name, mutation = picked()[index]
    file = tmp_path / "stage.toml"
    file.write_text(CIRCUITS[name], encoding="utf-8")
    assert main(["show", str(file), "--quiet"]) == 0
    assert "✗" not in capsys.readouterr().out
    monkeypatch.setattr(derive.pipeline, "solve", lambda circuit, find, **kept: mutation.solution)
    assert main(["show", str(file), "--quiet"]) == 1
    assert "✗" in capsys.readouterr().out


@pytest.mark.parametrize("index", [0, 5])
def test_sheet_ends_with_status_1_and_names_the_failed_checks_on_its_first_page(
    index, tmp_path, monkeypatch, capsys
):
    name, mutation = picked()[index]
    file = tmp_path / "stage.toml"
    file.write_text(CIRCUITS[name], encoding="utf-8")
    monkeypatch.setattr(derive.pipeline, "solve", lambda circuit, find, **kept: mutation.solution)
    arguments = ["sheet", str(file), "--out", str(tmp_path), "--only", "html,json", "--quiet"]
    assert main(arguments) == 1
    capsys.readouterr()
    page = (tmp_path / "stage.html").read_text(encoding="utf-8")
    head = page.partition("<section")[0]
    failures = compose(judged(mutation.solution), "stage").failures
    assert failures
    for failure in failures:
        assert failure in head
    assert "not to be relied on" in head
