"""The benchmark circuits, small to far too large to write out: results against counts and numbers of others.

Counts of terms: measured for the same files by other methods (memoised minors, and an element diagram in
other code); those of the ladders are every second Fibonacci number, as is well known of ladders. Responses
and poles: the nodal matrices written here anew from the files, worked by numpy and SciPy.
"""

import re
import tomllib
from functools import cache
from pathlib import Path

import numpy as np
import pytest
import scipy.linalg

from derive.devices.linearise import linearise
from derive.eliminate.names import names_taken
from derive.eliminate.nested import needed
from derive.eliminate.plan import plan
from derive.nodal.write import write_equations
from derive.normalise.nested_response import nested_response
from derive.normalise.nested_terms import determinants
from derive.pipeline import derive
from derive.reading.read import read

FOLDER = Path(__file__).parents[1] / "benchmarks" / "circuits"
NAMES = sorted(path.stem for path in FOLDER.glob("*.toml"))
COUNTS = {
    "ce": 58,
    "cascode": 320,
    "two_stage": 840,
    "three_stage": 13_456,
    "ladder6": 233,
    "ladder8": 1_597,
    "ladder10": 10_946,
    "ladder14": 514_229,
    "random8": 9_612,
}
# Printed to fewer digits where they were measured.
ROUGH_COUNTS = {"random12": "7.79e+05", "random15": "3.56e+07", "opamp20": "2.4e+18"}
NESTED = {"ladder10", "ladder14", "opamp20", "random8", "random10", "random12", "random15"}
PREFIXES = {"": 1, "k": 1e3, "M": 1e6, "m": 1e-3, "u": 1e-6, "n": 1e-9, "p": 1e-12}


@cache
def results(name):
    # The largest are not put in words here: that is what takes their time. `test_large_circuits.py` has one.
    explain = name not in ("two_stage", "three_stage", "opamp20", "random15")
    return derive(read(FOLDER / f"{name}.toml"), other_engine=False, explain=explain)


@cache
def solution(name):
    return results(name).outcome.results[0].solution


@cache
def matrices(name):
    """Write the nodal matrices of a file: conductances, capacitances, the input's column, and the output's place."""
    data = tomllib.loads((FOLDER / f"{name}.toml").read_text(encoding="utf-8"))
    parts = data["parts"].values()
    wires = ("between", "flows", "senses")
    nodes = sorted(
        {node for part in parts for wire in wires for node in part.get(wire, ())} - {"gnd", "in"}
    )
    place = {node: k for k, node in enumerate(nodes)} | {"in": len(nodes)}
    size = len(nodes)
    whole = {kind: np.zeros((size + 1, size + 1)) for kind in ("G", "C")}
    for part in parts:
        kind = next(key for key in part if key not in wires)
        value = number(part[kind])
        flows = part.get("flows") or part["between"]
        senses = part.get("senses") or part["between"]
        amount = 1 / value if kind == "resistor" else value
        for node, sign in zip(flows, (1, -1), strict=True):
            for sensed, turn in zip(senses, (1, -1), strict=True):
                if "gnd" not in (node, sensed):
                    entry = whole["C" if kind == "capacitor" else "G"]
                    entry[place[node], place[sensed]] += sign * turn * amount
    return whole["G"][:size], whole["C"][:size], place[data["find"]["A_v"]["voltage"]]


def number(text):
    digits, prefix = re.fullmatch(r"([-+.0-9e]+) ?([kMmunp]?)(?:ohm|F|S|Ω)?", text).groups()
    return float(digits) * PREFIXES[prefix]


def response(name, s):
    conductances, capacitances, out = matrices(name)
    whole = conductances + s * capacitances
    return np.linalg.solve(whole[:, :-1], -whole[:, -1])[out]


def counted(name):
    topology = read(FOLDER / f"{name}.toml")
    circuit = linearise(topology, {})
    system = write_equations(circuit, topology.finds[0])
    return determinants(system, needed(plan(system)), names_taken(system)).terms


def test_all_circuits_are_there():
    assert len(NAMES) == 15
    assert {*COUNTS, *ROUGH_COUNTS} <= {*NAMES}


@pytest.mark.parametrize("name", NAMES)
def test_every_circuit_gives_results_that_pass_their_checks(name):
    assert results(name).passed
    verdicts = results(name).outcome.results[0].verdicts
    passed = {verdict.name for verdict in verdicts if verdict.passed}
    needed_ones = {
        "identity in all symbols",
        "generic values",
        "nominal values",
        "asymptotes",
        "every step",
    }
    assert needed_ones <= passed


@pytest.mark.parametrize("name", NAMES)
def test_form_is_nested_where_steps_could_not_be_read(name):
    assert (solution(name).derivation.nested is not None) == (name in NESTED)


@pytest.mark.parametrize("name", COUNTS)
def test_count_of_terms_is_the_published_one(name):
    assert counted(name) == COUNTS[name]


@pytest.mark.parametrize("name", ROUGH_COUNTS)
def test_large_count_of_terms_is_the_published_one(name):
    digits = len(ROUGH_COUNTS[name].partition("e")[0]) - 2
    assert f"{counted(name):.{digits}e}" == ROUGH_COUNTS[name]


@pytest.mark.parametrize("name", sorted(set(NAMES) & NESTED))
def test_response_is_that_of_the_circuit_solved_by_numpy(name):
    found = solution(name)
    values = {symbol.name: float(symbol.value) for symbol in found.judged.symbols}
    frequencies = 2j * np.pi * np.logspace(5, 9, 25)
    nested = nested_response(found.derivation, values, frequencies)
    for s, value in zip(frequencies, nested, strict=True):
        assert value == pytest.approx(response(name, s), rel=1e-6)


@pytest.mark.parametrize("name", NAMES)
def test_gain_at_zero_frequency_is_that_of_the_circuit_solved_by_numpy(name):
    # Far below all corners: at zero itself a node between capacitors is left open.
    low = min(pole.magnitude for pole in solution(name).numbers.poles) / 1e4
    expected = response(name, 1j * low)
    power = solution(name).form.power_of_s
    assert float(solution(name).numbers.gain) == pytest.approx(
        (expected / (1j * low) ** power).real, rel=1e-5
    )


@pytest.mark.parametrize("name", NAMES)
def test_poles_are_the_generalised_eigenvalues(name):
    conductances, capacitances, _ = matrices(name)
    with np.errstate(all="ignore"):
        found = scipy.linalg.eigvals(conductances[:, :-1], -capacitances[:, :-1])
    scale = max(pole.magnitude for pole in solution(name).numbers.poles)
    finite = sorted(found[np.isfinite(found) & (abs(found) < 1e3 * scale)], key=abs)
    poles = sorted(
        (
            complex(pole.real, pole.imaginary)
            for pole in solution(name).numbers.poles
            for _ in range(pole.multiplicity)
        ),
        key=abs,
    )
    assert len(finite) >= len(poles)
    for pole in poles:
        nearest = min(finite, key=lambda other: abs(other - pole))
        assert abs(nearest - pole) <= 1e-4 * abs(pole) + 1e-9 * scale


def test_twenty_transistors_take_fewer_than_three_hundred_lines():
    derivation = solution("opamp20").derivation
    lines = [step for step in derivation.steps if step.rule in ("name an entry", "name a ratio")]
    assert 200 < len(lines) < 300


def test_operational_amplifier_has_the_poles_of_its_compensation():
    # From memory: a dominant pole near 5 Hz and a gain of some hundred thousand are what its data sheet shows.
    numbers = solution("opamp20").numbers
    assert 1 < numbers.poles[0].hertz < 10
    assert 1e5 < abs(numbers.gain) < 1e6
    assert len(numbers.bottom) == 26
