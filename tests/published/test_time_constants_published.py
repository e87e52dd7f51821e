"""Published results by time constants: each source's form against the constants that a circuit gives.

The circuits, closed forms and sources stand in the data folder; here each form is compared, identically,
with the open-circuit time constants, their products and the resistances seen.
"""

from __future__ import annotations

import random
from functools import cache

import pytest
from ledger_arithmetic import PRIME, RESIDUES
from published_checks import Published, closed_form, published

from derive.check.reading import value_modulo
from derive.devices.linearise import linearise
from derive.eliminate.eliminate import eliminate
from derive.eliminate.plan import plan
from derive.expressions.parse import parse_expression
from derive.nodal.write import write_equations
from derive.normalise.normalise import normalise
from derive.reactances.find_time_constants import find_time_constants
from derive.reactances.time_constants import TimeConstants
from derive.readable.vocabulary import vocabulary_of
from derive.reading.read import parse

CHECKS = {check.id: check for check in published()}
POINTS = 3

# b_1 as the sum of the open-circuit time constants. Sources by check in the data folder: Gray, Hurst, Lewis,
# Meyer; Razavi ch. 6; method of Cochrun and Grabel 1973.
FIRST = ("ce_b1", "cascode_b1", "cs_b1", "bypass_pole")
# b_2 as the sum of products: Cochrun and Grabel 1973 for oct_b2, Razavi ch. 6 for cs_b2.
SECOND = ("oct_b2", "cs_b2")


@cache
def constants_of(topology: str) -> TimeConstants:
    circuit = linearise(parse(topology, "published.toml"), {})
    system = write_equations(circuit, circuit.topology.finds[0])
    form, derivation = normalise(eliminate(system, plan(system)))
    found = find_time_constants(derivation, form, vocabulary_of(circuit))
    assert found is not None
    return found


def points(check: Published, found: TimeConstants):
    """Give values for every symbol and every definition that readable forms use."""
    chance = random.Random(check.id)
    circuit = linearise(parse(check.topology, "published.toml"), {})
    for _ in range(POINTS):
        values = {symbol.name: chance.randrange(1, PRIME) for symbol in circuit.symbols}
        for name, meaning in vocabulary_of(circuit).definitions:
            values.setdefault(name, value_modulo(meaning, values, PRIME))
        yield values


def read_at(expression, values) -> int:
    return value_modulo(expression, values, PRIME)


@pytest.mark.parametrize("name", FIRST)
def test_published_b_1_is_the_sum_of_the_time_constants(name):
    check, found = CHECKS[name], constants_of(CHECKS[name].topology)
    assert (check.kind, check.index) == ("b", 1)
    for values in points(check, found):
        total = sum(read_at(row.constant, values) for row in found.open_circuit) % PRIME
        assert total == closed_form(check, values, RESIDUES)
        without = sum(read_at(row.constant, values) for row in found.open_circuit[1:]) % PRIME
        assert without != total
    seconds = float(sum(row.seconds for row in found.open_circuit))
    assert seconds == pytest.approx(check.expected.real, rel=1e-9)


@pytest.mark.parametrize("name", SECOND)
def test_published_b_2_is_the_sum_of_products(name):
    check, found = CHECKS[name], constants_of(CHECKS[name].topology)
    assert (check.kind, check.index) == ("b", 2)
    (products,) = [each.products for each in found.coefficients if each.name == "b_2"]
    for values in points(check, found):
        truth = closed_form(check, values, RESIDUES)
        assert sum(read_at(product.term, values) for product in products) % PRIME == truth
        assert sum(read_at(product.readable, values) for product in products) % PRIME == truth


def test_each_product_of_cochrun_and_grabel_is_that_of_its_pair():
    # Cochrun and Grabel 1973, as check oct_b2 has it: R_π⁰C_π·R_L C_μ, R_π⁰C_π·R_L C_L, and
    # R_μ⁰C_μ·(R_p ∥ R_L ∥ 1/g_m)·C_L, each on its own.
    check = CHECKS["oct_b2"]
    found = constants_of(check.topology)
    (products,) = [each.products for each in found.coefficients if each.name == "b_2"]
    forms = {
        ("Cpi", "Cmu"): "(Rs || rpi)*Cpi*RL*Cmu",
        ("Cpi", "CL"): "(Rs || rpi)*Cpi*RL*CL",
        ("Cmu", "CL"): "((Rs || rpi)*(1 + gm*RL) + RL)*Cmu*(Rs || rpi || RL || (1/gm))*CL",
    }
    assert [product.symbols for product in products] == list(forms)
    for values in points(check, found):
        for product in products:
            assert read_at(product.term, values) == read_at(
                parse_expression(forms[product.symbols]), values
            )


def test_elmore_delay_is_the_sum_for_the_tree_and_its_zeros():
    # Elmore 1948; tree form of Rubinstein, Penfield, Horowitz 1983. The delay at d is b_1 − a_1, and each
    # capacitor's part of it is C times the resistance common to the ways to it and to d.
    check = CHECKS["elmore"]
    found = constants_of(check.topology)
    named = {each.name: each.products for each in found.coefficients}
    to_root = {"C1": "R1", "C2": "R1 + R2", "C3": "R1 + R3", "C4": "R1 + R3 + R4"}
    for values in points(check, found):
        rows = {row.symbol: read_at(row.readable, values) for row in found.open_circuit}
        assert rows == {c: read_at(parse_expression(r), values) for c, r in to_root.items()}
        b_1 = sum(read_at(row.constant, values) for row in found.open_circuit)
        a_1 = sum(read_at(product.term, values) for product in named["a_1"])
        assert (b_1 - a_1) % PRIME == closed_form(check, values, RESIDUES)


def test_extra_element_theorem_s_driving_resistance_is_what_c_mu_sees():
    # Middlebrook 1989: check eet_zd gives the form, eet_asm the circuit with the capacitor in its place.
    check = CHECKS["eet_zd"]
    found = constants_of(CHECKS["eet_asm"].topology)
    (row,) = found.open_circuit
    assert row.symbol == "Cmu"
    for values in points(CHECKS["eet_asm"], found):
        assert read_at(row.resistance, values) == closed_form(check, values, RESIDUES)
        assert read_at(row.readable, values) == closed_form(check, values, RESIDUES)


def test_cascode_s_c_mu_is_not_multiplied_by_the_full_gain():
    # Gray, Hurst, Lewis, Meyer, as check cascode_b1: C_mu1 sees R_p(1 + g_m1·r_e2) + r_e2; R_L is not in it.
    found = constants_of(CHECKS["cascode_b1"].topology)
    row = next(row for row in found.open_circuit if row.symbol == "Cmu1")
    for values in points(CHECKS["cascode_b1"], found):
        form = "(Rs || rpi1)*(1 + gm1*rpi2/(gm2*rpi2 + 1)) + rpi2/(gm2*rpi2 + 1)"
        assert read_at(row.resistance, values) == read_at(parse_expression(form), values)
        assert read_at(row.resistance, values) == read_at(row.resistance, {**values, "RL": 1})
