"""Nested and expanded form of the same circuits: one function, whatever the values."""

import random
from fractions import Fraction

import pytest
from road import system_of

from derive.algebra.modular import PRIME, residues
from derive.eliminate.derivation import Nested
from derive.eliminate.eliminate import eliminate
from derive.eliminate.names import names_taken
from derive.eliminate.nested import eliminate_nested
from derive.eliminate.plan import plan
from derive.errors import InputError
from derive.expressions.walk import evaluate, evaluate_modulo
from derive.normalise.nested import normalise_nested
from derive.normalise.nested_terms import determinants
from derive.normalise.normalise import normalise
from derive.normalise.numbers import nominal_numbers

CIRCUITS, BATCH = 100, 20


def random_parts(chance):
    """Give the lines of a circuit of two to six nodes with every kind of element that has a law of its own."""
    nodes = [f"n{k}" for k in range(1, chance.randint(2, 6))] + ["out"]
    lines = [f'R_in = {{ resistor = "1k", between = ["in", "{nodes[0]}"] }}']
    for place, node in enumerate(nodes):
        others = [*nodes[:place], "gnd", "in"]
        lines.append(
            f'R_{place} = {{ resistor = "{chance.randint(1, 99)}k", between = ["{node}", "{chance.choice(others)}"] }}'
        )
    for place in range(chance.randint(2, 9)):
        one, other = chance.sample([*nodes, "gnd"], 2)
        three, four = chance.sample([*nodes, "gnd"], 2)
        size = chance.randint(1, 99)
        between, flows = f'between = ["{one}", "{other}"]', f'flows = ["{one}", "{other}"]'
        senses = f'senses = ["{three}", "{four}"]'
        kind = chance.choice(("C", "C", "R", "g", "g", "L", "A"))
        lines.append(
            {
                "C": f'C_x{place} = {{ capacitor = "{size}p", {between} }}',
                "R": f'R_x{place} = {{ resistor = "{size}k", {between} }}',
                "L": f'L_x{place} = {{ inductor = "{size}u", {between} }}',
                "g": f'g_x{place} = {{ transconductance = "{size} mS", {flows}, {senses} }}',
                "A": f'A_x{place} = {{ voltage_gain = "{size}", output = ["own{place}", "gnd"], {senses} }}\n'
                f'R_y{place} = {{ resistor = "{size}k", between = ["own{place}", "{one}"] }}',
            }[kind]
        )
    return "\n".join(lines)


def systems(batch):
    """Give the systems of a batch of circuits that have a solution."""
    found, seed = [], 1000 * batch
    while len(found) < BATCH:
        seed += 1
        try:
            system = system_of(random_parts(random.Random(seed)))
            plan(system)
        except InputError:
            continue
        found.append(system)
    return found


def both(system):
    order = plan(system)
    expanded = normalise(eliminate(system, order))
    derivation = eliminate_nested(system, order, Nested(None))
    found = determinants(system, derivation.plan, names_taken(system))
    return expanded, normalise_nested(derivation, found), normalise_nested(derivation, None)


def value(form, values, number, at):
    """Give the normal form's value, and its coefficients where nothing is left uncancelled."""
    known = dict(values)
    for name, meaning in form.definitions:
        known[name] = at(meaning, known)
    top = sum(at(entry, known) * values["s"] ** k for k, entry in enumerate(form.numerator))
    bottom = sum(at(entry, known) * values["s"] ** k for k, entry in enumerate(form.denominator))
    return number(at(form.gain, known), values["s"], form.power_of_s, top, bottom)


def modulo(gain, s, power, top, bottom):
    return gain * pow(s, power, PRIME) * top * pow(bottom, -1, PRIME) % PRIME


def exactly(gain, s, power, top, bottom):
    return gain * s**power * top / bottom


@pytest.mark.parametrize("batch", range(CIRCUITS // BATCH))
def test_both_forms_are_one_function_of_all_values(batch):
    for system in systems(batch):
        (plain, _), (nested, _, _), (at_points, _, _) = both(system)
        names = system.ring.names
        residue = dict(zip(names, residues(len(names), f"batch {batch}"), strict=True))
        chance = random.Random(batch)
        exact = {name: Fraction(chance.randint(2, 500), chance.randint(2, 9)) for name in names}
        forms = (plain, nested, at_points)
        assert (
            len({value(f, residue, modulo, lambda e, v: evaluate_modulo(e, v, PRIME)) for f in forms})
            == 1
        )
        assert len({value(f, exact, exactly, lambda e, v: evaluate(e, v, Fraction)) for f in forms}) == 1


@pytest.mark.parametrize("batch", range(CIRCUITS // BATCH))
def test_both_forms_have_the_same_numbers(batch):
    for system in systems(batch):
        (_, derivation), (nested, _, numbers), (_, _, at_points) = both(system)
        expected = nominal_numbers(derivation)
        assert numbers.gain == expected.gain
        assert at_points.gain == expected.gain
        if not nested.shared and not nested.is_zero and expected.top[0] and expected.bottom[0]:
            for own, other in ((numbers.top, expected.top), (numbers.bottom, expected.bottom)):
                assert [entry / own[0] for entry in own] == [entry / other[0] for entry in other]
