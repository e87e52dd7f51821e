"""The order of elimination: what is sought comes last, no pivot vanishes, a hopeless circuit says why."""

from dataclasses import replace
from itertools import pairwise

import pytest
import sympy
from road import circuit_of, derivation_of, system_of

from derive.eliminate.plan import plan
from derive.errors import DeriveError, SingularError, TooLargeError

CHAIN = ("in", "n1", "n2", "n3", "n4", "n5", "out")
LADDER = "\n".join(
    f'R_{b} = {{ resistor = "1k", between = ["{a}", "{b}"] }}\n'
    f'C_{b} = {{ capacitor = "1n", between = ["{b}", "gnd"] }}'
    for a, b in pairwise(CHAIN)
)


def test_what_is_sought_is_last_and_every_unknown_has_its_equation():
    system = system_of(LADDER)
    made = plan(system)
    assert made.lines[-1].unknown == system.wanted == "v_out"
    assert sorted(line.unknown for line in made.lines) == sorted(u.name for u in system.unknowns)
    assert sorted(line.equation for line in made.lines) == list(range(len(system.equations)))
    assert made.lines[-1].into == ()


def test_a_ladder_is_eliminated_along_its_length_without_fill_in():
    # Markowitz: each section of a chain goes into one other equation only.
    assert all(len(line.into) == 1 for line in plan(system_of(LADDER)).lines[:-1])


def test_an_equation_is_used_only_where_its_unknown_is_still_in():
    made = plan(system_of(LADDER))
    used = []
    for line in made.lines:
        assert line.equation not in used
        assert not set(line.into) & {*used, line.equation}
        used.append(line.equation)


@pytest.mark.parametrize("wanted", ["n1", "n3", "out"])
def test_every_pivot_is_a_quotient_of_minors_that_do_not_vanish(wanted):
    system = system_of(LADDER, find=f'voltage = "{wanted}"\nper = "V_s"')
    made = plan(system)
    columns = [line.unknown for line in made.lines]
    rows = [dict(system.equations[line.equation].row) for line in made.lines]
    symbols = sympy.symbols([f"x{k}" for k in range(len(system.ring.names))])
    point = dict(zip(symbols, sympy.primerange(10**6), strict=False))

    def value(entry):
        total = sympy.Integer(0)
        for exponents, coefficient in entry.to_dict().items():
            term = sympy.Integer(int(coefficient))
            for symbol, power in zip(symbols, map(int, exponents), strict=True):
                term *= point[symbol] ** power
            total += term
        return total

    matrix = sympy.Matrix([[value(row[n]) if n in row else 0 for n in columns] for row in rows])
    assert all(matrix[:k, :k].det() != 0 for k in range(1, len(columns) + 1))


def test_the_plan_is_the_same_every_time():
    assert plan(system_of(LADDER)) == plan(system_of(LADDER))


UNITY_LOOP = """
R_1 = { resistor = "1k", between = ["in", "a"] }
A_1 = { voltage_gain = "2", output = ["b", "gnd"], senses = ["a", "gnd"] }
U_1 = { ideal_opamp = true, output = "out", inputs = ["b", "a"] }
R_2 = { resistor = "1k", between = ["out", "gnd"] }
"""


def test_a_circuit_without_a_solution_names_what_is_left_open():
    # The op amp wants v_b = v_a, the gain stage v_b = A·v_a; nothing ties the op amp's output.
    with pytest.raises(DeriveError) as told:
        plan(system_of(UNITY_LOOP))
    assert "out" in str(told.value)
    assert told.value.cure


def test_an_open_quantity_names_the_find_its_place_and_a_cure():
    system = system_of(LADDER)
    # The same law twice: one node is left without an equation of its own.
    twice = replace(system, equations=(*system.equations[:-1], system.equations[0]))
    with pytest.raises(SingularError, match="no unique solution for H: its equations leave open") as told:
        plan(twice)
    assert "the voltage of node" in str(told.value)
    assert told.value.where == "test.toml:18"
    assert told.value.cure


def test_a_circuit_too_large_to_write_down_is_refused_in_words():
    nodes = [f"n{k}" for k in range(11)] + ["out"]
    parts = [
        f'R_{i}_{j} = {{ resistor = "1k", between = ["{a}", "{b}"] }}'
        for i, a in enumerate(nodes)
        for j, b in enumerate([*nodes[i + 1 :], "gnd"], i + 1)
    ]
    parts.append('R_s = { resistor = "1k", between = ["in", "n0"] }')
    assert len(circuit_of("\n".join(parts)).elements) == 79
    with pytest.raises(TooLargeError, match="would have more than") as told:
        derivation_of("\n".join(parts))
    assert told.value.cure
