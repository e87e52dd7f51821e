"""Merged names in checks: they are expanded by their definitions, and a wrong definition is caught."""

from dataclasses import replace
from fractions import Fraction

import pytest
from hand_solutions import CIRCUITS, R, solution_of, system_of

from derive.bands.band_circuit import BandCircuit, Merged
from derive.check.degree import degrees, weights_of
from derive.check.judge import check
from derive.check.roads import dimensions, identity, nominal
from derive.check.verdict import Solution
from derive.devices.elements import Capacitor
from derive.eliminate.eliminate import eliminate
from derive.eliminate.plan import plan
from derive.expressions.parse import parse_expression
from derive.nodal.write import write_equations
from derive.normalise.normalise import normalise
from derive.normalise.numbers import nominal_numbers
from derive.quantities.dimension import CAPACITANCE, RESISTANCE
from derive.quantities.symbol import Symbol

LOW_PASS = CIRCUITS["low-pass"]
EVERY_ROAD = {
    "identity in all symbols",
    "generic values",
    "nominal values",
    "asymptotes",
    "every step",
    "another engine",
}


def banded(definition="R_2 || R_3", dimension=RESISTANCE, exact=Fraction(400)):
    """Derive a loaded low-pass whose load R_p stands for two resistors, under this definition."""
    load = (R("R_2", "out", "gnd"), R("R_3", "out", "gnd"))
    plain = system_of(LOW_PASS, "low-pass").small_signal
    values = {"R_2": Fraction(500), "R_3": Fraction(2000)}
    symbols = [Symbol(name, RESISTANCE, value, f"part {name}") for name, value in values.items()]
    unmerged = replace(plain, elements=(*plain.elements, *load), symbols=(*plain.symbols, *symbols))
    whole = Symbol("R_p", dimension, exact, "merged: R_2 || R_3")
    circuit = replace(
        plain, elements=(*plain.elements, R("R_p", "out", "gnd")), symbols=(*plain.symbols, whole)
    )
    merged = Merged("R_p", parse_expression(definition), ("R_2", "R_3"))
    system = write_equations(circuit, LOW_PASS.find)
    form, derivation = normalise(eliminate(system, plan(system)))
    band = BandCircuit("mid", circuit, unmerged, (), (merged,))
    return Solution(derivation, form, nominal_numbers(derivation), band)


def failed(solution, **more):
    return {verdict.name for verdict in check(solution, **more) if verdict.passed is False}


def test_a_right_definition_passes_every_road():
    verdicts = check(banded(), lcapy_seconds=60)
    assert [verdict.name for verdict in verdicts if verdict.applies and not verdict.passed] == []


@pytest.mark.parametrize("wrong", ["R_2 + R_3", "R_2", "R_2*R_3/(R_2 + 2*R_3)"])
def test_a_wrong_definition_fails_every_road_that_solves_the_circuit(wrong):
    assert failed(banded(wrong), lcapy_seconds=60) == EVERY_ROAD


def test_a_definition_of_the_wrong_kind_fails_the_dimensions():
    verdict = dimensions.judge(banded("1/R_2 + 1/R_3"))
    assert verdict.passed is False
    assert "R_p" in verdict.measured
    mixed = dimensions.judge(banded("R_2 + 1/R_3"))
    assert mixed.passed is False
    assert "are added" in mixed.measured


def test_a_wrong_value_of_a_merged_part_fails_the_nominal_values():
    verdict = nominal.judge(banded(exact=Fraction(401)))
    assert verdict.passed is False
    assert "R_p" in verdict.measured


def test_a_definition_with_a_name_that_is_not_known_fails():
    assert "identity in all symbols" in failed(banded("R_2 || R_9"), lcapy=False)


def test_a_merged_name_has_its_definitions_degree():
    merged = Merged("R_p", parse_expression("R_2 || R_3"), ("R_2", "R_3"))
    weights = weights_of(system_of(LOW_PASS, "low-pass").small_signal, (merged,))
    assert weights["R_p"] == degrees(parse_expression("R_2 || R_3"), {})
    top, bottom = degrees(parse_expression("R_p*C_1"), weights)
    assert top - bottom == 2
    assert "degree" in identity.judge(banded()).limit


def test_two_capacitors_under_one_name_pass_as_well():
    solution = banded()
    parts = [Capacitor(name, name, ("out", "gnd"), name) for name in ("C_a", "C_b")]
    kept = [element for element in solution.band.unmerged.elements if element.name != "C_1"]
    symbols = [Symbol(name, CAPACITANCE, Fraction(1, 2 * 10**6), "part") for name in ("C_a", "C_b")]
    others = [symbol for symbol in solution.band.unmerged.symbols if symbol.name != "C_1"]
    unmerged = replace(solution.band.unmerged, elements=(*kept, *parts), symbols=(*others, *symbols))
    for definition, fine in (("C_a + C_b", True), ("C_a || C_b", False)):
        merged = Merged("C_1", parse_expression(definition), ("C_a", "C_b"))
        band = replace(solution.band, unmerged=unmerged, definitions=(*solution.band.definitions, merged))
        assert (failed(replace(solution, band=band), lcapy=False) == set()) is fine


def test_a_hand_made_solution_without_a_band_is_judged_as_it_is():
    assert failed(solution_of("low-pass"), lcapy=False) == set()
