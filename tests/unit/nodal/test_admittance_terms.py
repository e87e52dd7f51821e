"""Responses by diagrams of admittance terms, against plain nodal matrices and against known circuits."""

import random
from dataclasses import replace
from fractions import Fraction
from itertools import pairwise
from pathlib import Path

import numpy as np
import pytest
from flint import fmpq, fmpq_mat, fmpq_poly
from road import circuit_of, points

from derive.devices.elements import Capacitor, Resistor, Transconductance, VoltageDrive
from derive.devices.linearise import linearise
from derive.errors import TooLargeError
from derive.expressions.walk import evaluate
from derive.nodal.admittance_definitions import nested_coefficients
from derive.nodal.admittance_terms import admittance_terms
from derive.normalise.exact_response import exact_response
from derive.normalise.numbers import values_of
from derive.reading.read import read

CIRCUITS = Path(__file__).resolve().parents[2] / "benchmarks" / "circuits"


def response_of(circuit):
    found = admittance_terms(circuit, circuit.topology.finds[0])
    assert found is not None
    return found, found.diagram()


def polynomial(coefficients):
    return fmpq_poly([fmpq(value.numerator, value.denominator) for value in coefficients])


def agrees(circuit, find):
    """Whether N/D is the response that the exact determinants of the nodal equations give."""
    response = admittance_terms(circuit, find)
    diagram = response.diagram()
    expected = exact_response(circuit, find)
    if expected is None:
        return diagram.counts()[0] == 0 or not any(response.coefficients(diagram, values_of(circuit))[1])
    top, bottom = response.coefficients(diagram, values_of(circuit))
    left = polynomial(top) * polynomial(expected.bottom)
    return bool(bottom) and left == polynomial(bottom) * polynomial(expected.top)


NODES = ("a", "b", "c", "d", "e", "gnd")


def random_parts(source):
    """Resistors from node to node for a solution, and a dozen others anywhere."""
    lines = [
        f'R_{k} = {{ resistor = "{source.randrange(1, 99)} ohm", between = ["{one}", "{other}"] }}'
        for k, (one, other) in enumerate(pairwise(NODES))
    ]
    for k in range(source.randrange(3, 9)):
        one, other, third, fourth = (*source.sample(NODES, 2), *source.sample(NODES, 2))
        between = f'between = ["{one}", "{other}"]'
        lines.append(
            source.choice(
                (
                    f'C_{k} = {{ capacitor = "{source.randrange(1, 99)} F", {between} }}',
                    f'G_{k} = {{ resistor = "{source.randrange(1, 99)} ohm", {between} }}',
                    f'g_{k} = {{ transconductance = "{source.randrange(1, 99)} S", '
                    f'flows = ["{one}", "{other}"], senses = ["{third}", "{fourth}"] }}',
                )
            )
        )
    return "\n".join(lines)


FINDS = {
    "voltage": 'voltage = ["{one}", "{other}"]\nper = {per}',
    "impedance": 'impedance = ["{one}", "{other}"]',
    "current of a resistor": 'current = "R_{number}"\nper = {per}',
    "current of a drive": 'current = "V_1"\nper = {per}',
}
VOLTAGE_DRIVES = 'V_1 = { voltage = ["a", "gnd"] }\nV_2 = { voltage = ["d", "b"] }'
CURRENT_DRIVES = (
    'V_1 = { voltage = ["e", "gnd"] }\nI_1 = { current = ["b", "d"] }\nI_2 = { current = ["gnd", "a"] }'
)


PER_VOLTAGES = ('"V_1"', '"V_2"', '{ V_1 = "1", V_2 = "-1" }', '{ V_1 = "1/2", V_2 = "1/3" }')
PER_CURRENTS = ('"V_1"', '"I_1"', '"I_2"', '{ I_1 = "1", I_2 = "-1/2" }')


@pytest.mark.parametrize("seed", range(12))
@pytest.mark.parametrize("kind", FINDS)
@pytest.mark.parametrize("drives", [VOLTAGE_DRIVES, CURRENT_DRIVES], ids=["voltage", "current"])
def test_a_random_response_is_that_of_the_nodal_equations(drives, kind, seed):
    source = random.Random(f"{kind} {seed}")
    per = PER_VOLTAGES if "V_2" in drives else PER_CURRENTS
    one, other = source.sample(NODES, 2)
    find = FINDS[kind].format(one=one, other=other, number=source.randrange(5), per=per[seed % 4])
    circuit = circuit_of(random_parts(source), find=find, drives=drives)
    assert agrees(circuit, circuit.topology.finds[0])


def test_a_swapped_sense_pair_would_be_seen():
    parts = (
        'R_1 = { resistor = "3 ohm", between = ["in", "out"] }\n'
        'R_2 = { resistor = "5 ohm", between = ["out", "gnd"] }\n'
        'g_1 = { transconductance = "7 S", flows = ["out", "gnd"], senses = ["in", "out"] }'
    )
    right = circuit_of(parts)
    wrong = circuit_of(parts[: parts.index("senses")] + 'senses = ["out", "in"] }')
    find = right.topology.finds[0]
    assert agrees(right, find)
    response = admittance_terms(wrong, find)
    found = response.coefficients(response.diagram(), values_of(right))
    expected = exact_response(right, find)
    assert found[0][0] * expected.bottom[0] != found[1][0] * expected.top[0]


def test_signs_are_those_of_the_bench():
    """A divider, a load, a transconductance stage, and the two currents of a source."""
    values = {"R_1": Fraction(1000), "R_2": Fraction(3000), "g_1": Fraction(1, 100)}
    divider = (
        'R_1 = { resistor = "1k", between = ["in", "out"] }\n'
        'R_2 = { resistor = "3k", between = ["out", "gnd"] }\n'
    )

    def gain(parts, **more):
        response, diagram = response_of(circuit_of(parts, **more))
        top, bottom = response.coefficients(diagram, values)
        return top[0] / bottom[0]

    assert gain(divider) == Fraction(3, 4)
    assert gain(divider, find='impedance = "out"') == 750
    assert gain(divider, find='current = "R_2"\nper = "V_s"') == Fraction(1, 4000)
    # Counted from its plus node through the drive: what the circuit draws there flows the other way.
    assert gain(divider, find='current = "V_s"\nper = "V_s"') == Fraction(-1, 4000)
    pulled = 'I_s = { current = ["gnd", "out"] }\nV_s = { voltage = ["in", "gnd"] }'
    assert gain(divider, drives=pulled, find='voltage = "out"\nper = "I_s"') == 750
    assert gain(divider, drives=pulled, find='current = "V_s"\nper = "I_s"') == Fraction(3, 4)
    stage = (
        'R_1 = { resistor = "1k", between = ["in", "gnd"] }\nR_2 = { resistor = "3k", between = ["out", "gnd"] }\n'
        'g_1 = { transconductance = "10 mS", flows = ["out", "gnd"], senses = ["in", "gnd"] }\n'
    )
    assert gain(stage) == -30


def test_an_ideal_op_amp_is_a_pair_of_edges_like_a_drive():
    inverting = (
        'R_1 = { resistor = "1k", between = ["in", "m"] }\nR_2 = { resistor = "5k", between = ["m", "out"] }\n'
        'U = { ideal_opamp = true, output = "out", inputs = ["gnd", "m"] }\n'
    )
    response, diagram = response_of(circuit_of(inverting))
    top, bottom = response.coefficients(diagram, {"R_1": Fraction(1000), "R_2": Fraction(5000)})
    assert top[0] / bottom[0] == -5
    assert diagram.counts() == (1, 1)


def test_other_elements_and_their_currents_are_left_to_others():
    coil = 'L_1 = { inductor = "1m", between = ["in", "out"] }\nR_1 = { resistor = "1k", between = ["out", "gnd"] }'
    circuit = circuit_of(coil)
    assert admittance_terms(circuit, circuit.topology.finds[0]) is None


def test_a_loop_of_drives_and_a_floating_node_leave_no_product():
    whole = circuit_of(
        'R_1 = { resistor = "1k", between = ["in", "out"] }\n'
        'R_2 = { resistor = "1k", between = ["out", "gnd"] }\n'
        'R_3 = { resistor = "1k", between = ["x", "y"] }\n'
        'R_4 = { resistor = "1k", between = ["y", "gnd"] }\n'
        'g_1 = { transconductance = "1 mS", flows = ["x", "y"], senses = ["in", "gnd"] }\n'
    )
    _, diagram = response_of(whole)
    assert diagram.counts()[0] > 0
    # Without R_4 the voltage of x and y against ground is open.
    _, diagram = response_of(replace(whole, elements=tuple(e for e in whole.elements if e.name != "R_4")))
    assert diagram.counts()[0] == 0
    # A second drive across the first could contradict it.
    doubled = replace(whole, drives=(*whole.drives, VoltageDrive("V_t", ("in", "gnd"))))
    _, diagram = response_of(doubled)
    assert diagram.counts()[0] == 0


@pytest.mark.parametrize("variable", [None, "s"])
@pytest.mark.parametrize("name", ["follower", "cascode", "random5", "ladder10"])
def test_nested_definitions_worked_in_order_give_the_response(name, variable):
    topology = read(CIRCUITS / f"{name}.toml")
    circuit = linearise(topology)
    response, diagram = response_of(circuit)
    nested = nested_coefficients(response, diagram, "x", variable)
    for values in points([symbol.name for symbol in circuit.symbols] + ["s"]):
        known = dict(values)
        for label, expression in nested.definitions:
            known[label] = evaluate(expression, known, Fraction)
        sums = []
        for coefficients in (nested.numerator, nested.denominator):
            parts = [
                evaluate(c, known, Fraction) * known["s"] ** power for power, c in enumerate(coefficients)
            ]
            sums.append(sum(parts, Fraction(0)))
        determinants = diagram.values(response.lookup(values), known["s"], Fraction(1))
        assert tuple(sums) == response.ratio(determinants, response.lookup(values), known["s"])
        assert sums[1] != 0


def test_weights_and_the_factors_of_a_current_are_in_the_nested_coefficients():
    parts = (
        'R_1 = { resistor = "1k", between = ["in", "out"] }\nC_1 = { capacitor = "1 nF", between = ["out", "b"] }\n'
        'R_2 = { resistor = "2k", between = ["b", "gnd"] }\n'
    )
    drives = 'V_s = { voltage = ["in", "gnd"] }\nV_t = { voltage = ["gnd", "b"] }'
    find = 'current = "C_1"\nper = { V_s = "1/2", V_t = "1/3" }'
    circuit = circuit_of(parts, drives=drives, find=find)
    response, diagram = response_of(circuit)
    values = {"R_1": Fraction(2), "C_1": Fraction(5), "R_2": Fraction(3)}
    top, bottom = response.coefficients(diagram, values)
    for variable, s in ((None, None), ("s", Fraction(7))):
        nested = nested_coefficients(response, diagram, "x", variable)
        assert nested.definitions == ()
        known = values if s is None else {**values, "s": s}
        for shown, exact in ((nested.numerator, top), (nested.denominator, bottom)):
            found = [evaluate(expression, known, Fraction) for expression in shown]
            if s is None:
                assert found == list(exact)
            else:
                assert found == [sum(c * s**k for k, c in enumerate(exact))]
    expected = exact_response(circuit, circuit.topology.finds[0])
    assert expected is not None
    assert not expected.is_zero


def stamped(circuit, values, s):
    """The nodal matrix with its node names, written down by hand: one entry after the other."""
    nodes = sorted({node for e in circuit.elements for pair in ends(e) for node in pair} - {"gnd"})
    place = {node: k for k, node in enumerate(nodes)}
    matrix = [[0] * len(nodes) for _ in nodes]
    for element in circuit.elements:
        (p, m), (q, r) = ends(element)
        if isinstance(element, Resistor):
            admittance = 1 / values[element.resistance]
        elif isinstance(element, Capacitor):
            admittance = s * values[element.capacitance]
        else:
            admittance = values[element.transconductance]
        for row, column, sign in ((p, q, 1), (p, r, -1), (m, q, -1), (m, r, 1)):
            if row in place and column in place:
                matrix[place[row]][place[column]] += sign * admittance
    return place, matrix


def ends(element):
    if isinstance(element, Transconductance):
        return element.flows, element.senses
    return element.between, element.between


@pytest.fixture(scope="module")
def opamp20():
    circuit = linearise(read(CIRCUITS / "opamp20.toml"))
    response, diagram = response_of(circuit)
    return circuit, response, diagram, response.coefficients(diagram, values_of(circuit))


def test_twenty_transistors_have_as_many_products_as_were_counted_before(opamp20):
    _, _, diagram, _ = opamp20
    # Counted once with another program: 2.4e18 products in the denominator.
    assert round(diagram.counts()[0] / 1e17) == 24
    assert len(diagram.forks) < 5_000


def test_the_exact_coefficients_of_twenty_transistors_are_the_exact_determinants(opamp20):
    circuit, _, _, (top, bottom) = opamp20
    values = values_of(circuit)
    # At as many points as the degree asks for, two polynomials that agree are one.
    for point in range(max(len(top), len(bottom)) + 1):
        s = Fraction(point) * 10**9
        place, matrix = stamped(circuit, values, s)
        kept = [k for node, k in place.items() if node != "in"]
        source, wanted = place["in"], kept.index(place["out"])
        rows = [[matrix[row][column] for column in kept] for row in kept]
        right = [-matrix[row][source] for row in kept]
        below = determinant(rows)
        for row, value in zip(rows, right, strict=True):
            row[wanted] = value
        above = determinant(rows)
        values_at = [sum(c * s**k for k, c in enumerate(found)) for found in (top, bottom)]
        # Numerator and denominator may both have the other sign than Cramer's.
        assert abs(values_at[1]) == abs(below)
        assert values_at[0] * below == values_at[1] * above


def determinant(rows):
    entries = [fmpq(v.numerator, v.denominator) for row in rows for v in map(Fraction, row)]
    found = fmpq_mat(len(rows), len(rows), entries).det()
    return Fraction(int(found.p), int(found.q))


def test_the_diagram_of_twenty_transistors_evaluates_to_numpys_solution(opamp20):
    circuit, response, diagram, _ = opamp20
    values = {name: float(value) for name, value in values_of(circuit).items()}
    s = 2j * np.pi * np.logspace(0, 9, 40)
    lookup = {name: float(v) for name, v in response.lookup(values_of(circuit)).items()}
    top, bottom = response.ratio(diagram.values(lookup, s, np.ones(40, complex)), lookup, s)
    for point, found in zip(s, top / bottom, strict=True):
        place, matrix = stamped(circuit, values, point)
        kept = [k for node, k in place.items() if node != "in"]
        solved = np.linalg.solve(
            np.array([[matrix[row][column] for column in kept] for row in kept]),
            np.array([-matrix[row][place["in"]] for row in kept]),
        )
        assert found == pytest.approx(solved[kept.index(place["out"])], rel=1e-8)


def test_a_limit_on_the_states_is_kept(opamp20):
    _, response, _, _ = opamp20
    with pytest.raises(TooLargeError, match="more than 500 states"):
        response.diagram(limit=500)
