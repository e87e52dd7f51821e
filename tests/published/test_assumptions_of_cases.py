"""What assumptions cost in every case, worked from the circuit by matrices that the test stamps itself."""

from __future__ import annotations

import math
import random
import re
from functools import cache
from pathlib import Path

import numpy as np
import pytest
from stamped import response

import derive
from derive.approximate.approximate import approximate
from derive.approximate.refuse import refuse_assumptions
from derive.bands.choose import bands_of
from derive.bands.restrict import find_in, restrict
from derive.bias.solve import operating_point
from derive.check.roads import assumptions as road
from derive.check.verdict import Solution
from derive.devices.elements import Capacitor, Inductor, Resistor
from derive.devices.linearise import linearise
from derive.errors import InputError
from derive.expressions.typst_maths import to_typst
from derive.nodal.write import write_equations
from derive.normalise.nested_choice import derive_form
from derive.readable.vocabulary import vocabulary_of
from derive.reading.read import parse
from derive.render.breaking import displayed
from derive.render.maths import COLUMN_EM
from derive.render.typesetter import Measurer
from derive.sheet.assumed import written

CASES = Path(__file__).parents[2] / "cases"
NAMES = sorted(folder.name for folder in CASES.iterdir())
DRAWS = 2
REFUSALS = ("removes the whole response", "makes the response infinite", "changes nothing", "contradicts")


def text_of(name):
    """Give a case without the assumptions and the budget that it has itself."""
    text = (CASES / name / "topology.toml").read_text(encoding="utf-8")
    return re.split(r"^\[budget\]|^\[\[assume\]\]", text, flags=re.MULTILINE)[0]


@cache
def points_of(name):
    point = operating_point(parse(text_of(name), "case.toml"))
    return {device.part: device for device in point.devices} if point else {}


def registered(name, text, band_name, find_name):
    """Give the result of one quantity in one band with its register, on the shortest road."""
    circuit = linearise(parse(text, "case.toml"), points_of(name))
    band = restrict(circuit, band_name)
    refuse_assumptions(circuit, [restrict(circuit, each) for each in bands_of(circuit)])
    (find,) = [each for each in circuit.topology.finds if each.name == find_name]
    derivation, form, numbers = derive_form(write_equations(band.circuit, find_in(band, find)))
    register = approximate(band, derivation, form, numbers, vocabulary_of(band.circuit))
    return Solution(derivation, form, numbers, band, register=register)


def symbol_of(element):
    match element:
        case Resistor():
            return element.resistance
        case Capacitor():
            return element.capacitance
        case Inductor():
            return element.inductance
    return None


@cache
def drawn(name):
    """Draw a quantity and a band, and up to two parts that are assumed away, one on top of the other."""
    chance = random.Random(f"assumed away in {name}")
    circuit = linearise(parse(text_of(name), "case.toml"), points_of(name))
    found = []
    for _ in range(40):
        if len(found) == DRAWS:
            break
        band = restrict(circuit, chance.choice(bands_of(circuit)))
        find = chance.choice(circuit.topology.finds)
        passive = [element for element in band.unmerged.elements if symbol_of(element)]
        gone = {
            element.name: chance.choice(("open", "short"))
            for element in chance.sample(passive, min(len(passive), chance.choice((1, 2))))
        }
        lines = [text_of(name)]
        for element in passive:
            if element.name in gone:
                upward = (gone[element.name] == "open") == isinstance(element, Resistor)
                upward = upward if not isinstance(element, Inductor) else gone[element.name] == "open"
                lines.append(f'[[assume]]\nthat = "{symbol_of(element)} -> {"inf" if upward else "0"}"')
        try:
            solution = registered(name, "\n".join(lines) + "\n", band.band, find.name)
        except InputError as error:
            if not any(word in str(error) for word in REFUSALS):
                raise
            continue
        if solution.register and len(solution.register.entries) == len(gone):
            order = [element.name for element in passive if element.name in gone]
            found.append((solution, find_in(band, find), {each: gone[each] for each in order}))
    return found


def worst(circuit, find, values, gone, range_hz, more=()):
    """Give the worst error of magnitude and of phase over a fine grid, in dB and degrees."""
    low, high = range_hz
    grid = np.unique([*np.geomspace(low, high, 2001), *(f for f in more if low <= f <= high)])
    error = response(circuit, find, values, grid, gone) / response(circuit, find, values, grid)
    magnitude, phase = 20 * np.log10(np.abs(error)), np.degrees(np.angle(error))
    return magnitude[np.argmax(np.abs(magnitude))], phase[np.argmax(np.abs(phase))]


def values_of(solution):
    return {symbol.name: float(symbol.value) for symbol in solution.judged.symbols}


def near(stated, own, *, least):
    """Whether a stated worst value is that of the grid, or a little more between its points."""
    return abs(own) * (1 - 1e-6) - least <= abs(stated) <= abs(own) * 1.02 + least


@pytest.mark.parametrize("name", NAMES)
def test_errors_of_parts_assumed_away_are_those_of_the_circuit_without_them(name):
    assert drawn(name), "nothing could be assumed"
    for solution, find, gone in drawn(name):
        parts = {}
        for entry, (part, how) in zip(solution.register.entries, gone.items(), strict=True):
            parts[part] = how
            if entry.together is None:
                continue
            magnitude, phase = worst(
                solution.judged, find, values_of(solution), parts, solution.register.range_hz
            )
            assert near(entry.together.magnitude_db, magnitude, least=2e-5), (entry.assumption.that, name)
            assert near(entry.together.phase_deg, phase, least=2e-4), (entry.assumption.that, name)
        assert road.judge(solution).passed is True


def test_parts_are_assumed_away_alone_and_together_open_and_short():
    every = [gone for name in NAMES for _, _, gone in drawn(name)]
    assert len(every) > len(NAMES)
    assert {how for gone in every for how in gone.values()} == {"open", "short"}
    assert {len(gone) for gone in every} == {1, 2}


def test_the_register_of_another_circuit_would_be_seen():
    solution, find, gone = drawn("line_buffer")[0]
    values = {
        name: value * (1.3 if name == "R_S" else 1.0) for name, value in values_of(solution).items()
    }
    part, how = next(iter(gone.items()))
    errors = solution.register.entries[0].together
    right = worst(solution.judged, find, values_of(solution), {part: how}, solution.register.range_hz)
    wrong = worst(solution.judged, find, values, {part: how}, solution.register.range_hz)
    assert near(errors.magnitude_db, right[0], least=2e-5)
    assert not near(errors.magnitude_db, wrong[0], least=2e-5)


# The follower as it is written by hand: bias resistance dropped, β for β + 1, C_μ forgotten.


@cache
def follower():
    topology = derive.read(CASES / "detector_follower" / "topology.toml")
    return derive.derive(topology, other_engine=False)


def short_follower(values, hertz):
    """Give the hand form β·R_E/(R_S + r_π + β·R_E)·(1 + s·C_π/g_m)/(1 + b·s): common practice."""
    s = 2j * np.pi * np.asarray(hertz)
    beta = values["g_m"] * values["r_pi"]
    below = values["R_S"] + values["r_pi"] + beta * values["R_E"]
    b = values["C_pi"] * values["r_pi"] * (values["R_S"] + values["R_E"]) / below
    return beta * values["R_E"] / below * (1 + s * values["C_pi"] / values["g_m"]) / (1 + b * s)


def test_the_follower_shows_the_price_of_each_assumption():
    (result,) = follower().outcome.results
    solution = result.solution
    values = values_of(solution)
    grid = np.geomspace(1e3, 1e6, 2001)
    exact = response(solution.judged, solution.derivation.system.find, values, grid)
    error = short_follower(values, grid) / exact
    (bias, beta, feedback) = solution.register.entries
    assert [entry.status for entry in (bias, beta, feedback)] == ["holds"] * 3
    last = feedback.together
    assert math.isclose(last.magnitude_db, np.max(20 * np.log10(np.abs(error))), rel_tol=1e-4)
    assert math.isclose(last.phase_deg, np.max(np.degrees(np.angle(error))), rel_tol=1e-4)
    divider = values["R_1"] * values["R_2"] / (values["R_1"] + values["R_2"])
    seen = values["r_pi"] + (1 + values["g_m"] * values["r_pi"]) * values["R_E"]
    assert math.isclose(bias.ratio, 1 / (1 / values["R_S"] + 1 / seen) / divider, rel_tol=1e-9)
    assert math.isclose(beta.ratio, 1 / (values["g_m"] * values["r_pi"]), rel_tol=1e-9)
    assert bias.alone.gain == pytest.approx(float(abs(_without_bias(solution, values))), rel=1e-6)


def _without_bias(solution, values):
    find = solution.derivation.system.find
    gone = {"R_1": "open", "R_2": "open"}
    low = response(solution.judged, find, values, [1e-3], gone) / response(
        solution.judged, find, values, [1e-3]
    )
    return low[0] - 1


def test_the_follower_fails_where_the_bias_divider_is_no_longer_large():
    text = (CASES / "detector_follower" / "topology.toml").read_text(encoding="utf-8")
    text = text.replace('"330k"', '"33k"').replace('"470k"', '"47k"')
    results = derive.derive(parse(text, "follower.toml"), other_engine=False)
    (result,) = results.outcome.results
    assert result.solution.register.entries[0].status == "fails"
    assert not results.passed


def test_the_short_form_of_the_follower_is_one_line():
    (result,) = follower().outcome.results
    first, *_, last = (written(entry) for entry in result.solution.register.entries)
    widths = [Measurer()[displayed(to_typst(each))].width for each in (first, last)]
    assert widths[1] <= COLUMN_EM < widths[0]
