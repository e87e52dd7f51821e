"""The tableau and its three solvers against circuits worked by hand."""

from dataclasses import replace
from fractions import Fraction

import numpy as np
import pytest
from hand_solutions import CIRCUITS, C, L, R, current, solution_of, system_of, voltage

from derive.check.excitation import excite
from derive.check.limits import limit_modulo
from derive.check.solve import (
    NoSolutionError,
    long_double,
    solve_exact,
    solve_frequencies,
    solve_modulo,
)
from derive.check.stamp import assemble, node_names
from derive.devices.elements import (
    Capacitor,
    CurrentDrive,
    Inductor,
    Resistor,
    Transconductance,
    VoltageDrive,
    VoltageGain,
)

PRIME = 2**61 - 1
ONE_PER = (("I_s", Fraction(1)),)


def tableau_of(name, values):
    system = system_of(CIRCUITS[name], name)
    return assemble(system.small_signal, excite(system), values.__getitem__)


def built(elements, drives, find, values):
    circuit = replace(CIRCUITS["low-pass"], elements=elements, drives=drives, find=find, values={})
    system = system_of(circuit, "built")
    return assemble(system.small_signal, excite(system), values.__getitem__)


def test_every_voltage_and_current_of_a_divider_is_given():
    values = {"R_1": Fraction(2), "C_1": Fraction(3)}
    state = solve_exact(tableau_of("low-pass", values), Fraction(1, 6))
    # s·C = 1/2 siemens: 2 ohm over 2 ohm.
    assert state.response == Fraction(1, 2)
    assert state.nodes == {"in": Fraction(1), "out": Fraction(1, 2)}
    # The drive's own current goes through it from plus to minus, so it is negative here.
    assert state.branches == {
        "R_1": Fraction(1, 4),
        "C_1": Fraction(1, 4),
        "V_s": Fraction(-1, 4),
    }


def test_the_solution_modulo_a_prime_is_the_rational_one_modulo_that_prime():
    values = {"R_1": 7, "C_1": 5}
    exact = solve_exact(tableau_of("low-pass", {k: Fraction(v) for k, v in values.items()}), Fraction(3))
    state = solve_modulo(tableau_of("low-pass", values), 3, PRIME)
    assert exact.response == Fraction(1, 106)
    assert state.response * 106 % PRIME == 1


def test_a_transconductance_takes_its_current_from_its_first_node():
    elements = (
        R("R_1", "in", "gnd"),
        R("R_2", "out", "gnd"),
        Transconductance("g", "g", ("out", "gnd"), ("in", "gnd"), "g"),
    )
    drives = (VoltageDrive("V_s", ("in", "gnd")),)
    values = {"R_1": Fraction(1), "R_2": Fraction(10), "g": Fraction(2)}
    state = solve_exact(built(elements, drives, voltage("out"), values), Fraction(1))
    assert state.response == -20  # an inverting stage: −g·R


def test_a_current_drive_flows_through_itself_from_first_to_second_node():
    drives = (CurrentDrive("I_s", ("gnd", "a")),)
    elements = (R("R_1", "a", "gnd"),)
    state = solve_exact(
        built(elements, drives, voltage("a", per=ONE_PER), {"R_1": Fraction(5)}), Fraction(1)
    )
    assert state.response == 5


def test_the_current_of_a_drive_can_be_wanted():
    elements = (R("R_1", "in", "gnd"),)
    drives = (VoltageDrive("V_s", ("in", "gnd")),)
    state = solve_exact(built(elements, drives, current("V_s"), {"R_1": Fraction(4)}), Fraction(1))
    assert state.response == Fraction(-1, 4)


def test_the_response_is_found_although_a_floating_piece_stays_open():
    elements = (R("R_1", "in", "out"), R("R_2", "out", "gnd"), R("R_9", "x", "y"))
    drives = (VoltageDrive("V_s", ("in", "gnd")),)
    values = {"R_1": Fraction(1), "R_2": Fraction(3), "R_9": Fraction(1)}
    state = solve_exact(built(elements, drives, voltage("out"), values), Fraction(1))
    assert state.response == Fraction(3, 4)
    assert "x" not in state.nodes


@pytest.mark.parametrize(
    ("elements", "drives", "words"),
    [
        ((R("R_1", "x", "y"),), (VoltageDrive("V_s", ("in", "gnd")),), "leave the response open"),
        (
            (R("R_1", "out", "gnd"),),
            (VoltageDrive("V_s", ("out", "gnd")), VoltageDrive("V_2", ("out", "gnd"))),
            "contradict",
        ),
    ],
)
def test_a_circuit_without_an_answer_says_so(elements, drives, words):
    find = voltage("out" if words == "contradict" else "x")
    tableau = built(elements, drives, find, {"R_1": 3})
    with pytest.raises(NoSolutionError, match=words):
        solve_modulo(tableau, 5, PRIME)


def test_an_element_that_two_share_a_name_with_is_refused():
    elements = (R("R_1", "a", "gnd"), R("R_1", "b", "gnd"))
    with pytest.raises(KeyError, match="two elements are called R_1"):
        built(elements, (), voltage("a"), {"R_1": 1})


def test_sensed_nodes_are_nodes_too():
    system = system_of(CIRCUITS["emitter follower at high frequency"], "x")
    assert node_names(system.small_signal, excite(system)) == ["in", "b", "out"]


def test_a_low_pass_at_its_corner_is_at_minus_three_decibels_and_minus_45_degrees():
    values = {"R_1": long_double(1000), "C_1": long_double(Fraction(1, 10**6))}
    sweep = solve_frequencies(tableau_of("low-pass", values), [1000.0])
    assert sweep.responses[0] == pytest.approx((1 - 1j) / 2, rel=1e-15)


def test_fifteen_decades_between_two_resistors_cost_no_digits():
    values = {
        "R_1": long_double(Fraction(1, 1000)),
        "R_2": long_double(10**12),
        "A": long_double(10**6),
    }
    elements = (
        Resistor("R_1", "R_1", ("in", "x"), "R_1"),
        Resistor("R_2", "R_2", ("x", "gnd"), "R_2"),
        VoltageGain("A", "A", ("out", "gnd"), ("in", "x"), "A"),
    )
    drives = (VoltageDrive("V_s", ("in", "gnd")),)
    sweep = solve_frequencies(built(elements, drives, voltage("out"), values), [1.0])
    # A·R_1/(R_1 + R_2), a difference of two voltages that agree in fifteen digits.
    assert complex(sweep.responses[0]).real == pytest.approx(1e-9 / (1 + 1e-15), rel=1e-3)


def reactive(*elements):
    drives = (CurrentDrive("I_s", ("gnd", "a")),)
    values = {"C_1": 3, "C_2": 5, "L_1": 7, "R_1": 11, "g": 13}
    return built(elements, drives, voltage("a", per=ONE_PER), values)


@pytest.mark.parametrize(
    ("elements", "at_zero", "at_infinity"),
    [
        ((C("C_1", "a", "gnd"),), None, 0),  # 1/(s·C)
        ((L("L_1", "a", "gnd"),), 0, None),  # s·L
        ((L("L_1", "a", "b"), C("C_1", "b", "gnd")), None, None),  # series resonance
        ((L("L_1", "a", "gnd"), C("C_1", "a", "gnd")), 0, 0),  # parallel resonance
        ((C("C_1", "a", "b"), R("R_1", "b", "gnd")), None, 11),
        ((C("C_1", "a", "b"), C("C_2", "b", "gnd"), R("R_1", "a", "gnd")), 11, 0),
        ((L("L_1", "a", "b"), R("R_1", "b", "gnd")), 11, None),
    ],
)
def test_limits_of_an_impedance(elements, at_zero, at_infinity):
    tableau = reactive(*elements)
    assert limit_modulo(tableau, PRIME, at_infinity=False) == at_zero
    assert limit_modulo(tableau, PRIME, at_infinity=True) == at_infinity


def test_two_integrators_in_a_row_are_infinite_at_zero_and_zero_at_infinity():
    elements = (
        Capacitor("C_1", "C_1", ("x", "gnd"), "C_1"),
        Transconductance("g", "g", ("gnd", "a"), ("x", "gnd"), "g"),
        Capacitor("C_2", "C_2", ("a", "gnd"), "C_2"),
    )
    drives = (CurrentDrive("I_s", ("gnd", "x")),)
    values = {"C_1": 3, "C_2": 5, "g": 13}
    tableau = built(elements, drives, voltage("a", per=ONE_PER), values)
    assert limit_modulo(tableau, PRIME, at_infinity=False) is None
    assert limit_modulo(tableau, PRIME, at_infinity=True) == 0


def test_a_voltage_across_a_driven_capacitor_has_its_limit_although_its_current_has_none():
    elements = (C("C_1", "in", "gnd"), Inductor("L_1", "L_1", ("in", "gnd"), "L_1"))
    drives = (VoltageDrive("V_s", ("in", "gnd")),)
    values = {"C_1": 3, "L_1": 7}
    for wanted, at_zero, at_infinity in ((voltage("in"), 1, 1), (current("C_1"), 0, None)):
        tableau = built(elements, drives, wanted, values)
        assert limit_modulo(tableau, PRIME, at_infinity=False) == at_zero
        assert limit_modulo(tableau, PRIME, at_infinity=True) == at_infinity


def test_an_impedance_is_taken_with_every_drive_at_zero():
    solution = solution_of("low-pass")
    find = replace(CIRCUITS["impedance of a resistor with a capacitor across"].find, nodes=("out", "gnd"))
    system = replace(solution.derivation.system, find=find, input="I_t", weights=(("I_t", Fraction(1)),))
    values = {"R_1": Fraction(10), "C_1": Fraction(1, 10)}
    tableau = assemble(system.small_signal, excite(system), values.__getitem__)
    assert solve_exact(tableau, Fraction(1)).response == 5  # 10 ohm across 1/(s·C) = 10 ohm


def test_stack_of_frequencies_may_come_in_several_chunks(monkeypatch):
    values = {"R_1": long_double(1000), "C_1": long_double(Fraction(1, 10**6))}
    omegas = list(np.geomspace(1, 1e6, 7))
    whole = solve_frequencies(tableau_of("low-pass", values), omegas).responses
    monkeypatch.setattr("derive.check.solve.CHUNK_ENTRIES", 60)
    assert np.array_equal(solve_frequencies(tableau_of("low-pass", values), omegas).responses, whole)
