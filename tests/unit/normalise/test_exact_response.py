"""The response by interpolation against the one by elimination, and against formulas known beforehand."""

from dataclasses import replace
from fractions import Fraction

import pytest
from road import circuit_of, derivation_of

from derive.normalise.exact_response import driving_point, exact_response, ratio_at
from derive.normalise.numbers import nominal_numbers
from derive.topology.topology import Find, Place

STAGES = {
    "low-pass": 'R_1 = { resistor = "1k", between = ["in", "out"] }\n'
    'C_1 = { capacitor = "1u", between = ["out", "gnd"] }',
    "follower": 'R_S = { resistor = "600R", between = ["in", "b"] }\n'
    'r_pi = { resistor = "2k5", between = ["b", "out"] }\n'
    'C_pi = { capacitor = "10p", between = ["b", "out"] }\n'
    'C_mu = { capacitor = "2p", between = ["b", "gnd"] }\n'
    'g_m = { transconductance = "40 mS", flows = ["gnd", "out"], senses = ["b", "out"] }\n'
    'R_E = { resistor = "1k", between = ["out", "gnd"] }',
    "coupled coils": 'R_1 = { resistor = "50R", between = ["in", "a"] }\n'
    'L_1 = { inductor = "1m", between = ["a", "gnd"] }\n'
    'L_2 = { inductor = "4m", between = ["out", "gnd"] }\n'
    'k_1 = { coupling = "0.5", coils = ["L_1", "L_2"] }\n'
    'R_2 = { resistor = "75R", between = ["out", "gnd"] }',
    "op amp": 'R_1 = { resistor = "1k", between = ["in", "m"] }\n'
    'R_2 = { resistor = "10k", between = ["m", "out"] }\n'
    'U1 = { opamp = true, output = "out", inputs = ["gnd", "m"], A_0 = "1e5", f_unity = "1 MHz" }',
}


def normal(polynomial, by):
    return [value / by for value in polynomial]


@pytest.mark.parametrize("name", STAGES)
def test_it_is_the_response_that_elimination_gives(name):
    circuit = circuit_of(STAGES[name])
    found = exact_response(circuit, circuit.topology.finds[0])
    derivation = derivation_of(STAGES[name])
    numbers = nominal_numbers(derivation)
    shift = len(found.top) - len(numbers.top)
    assert shift == (name == "coupled coils")
    assert not any(found.top[:shift])
    assert normal(found.top[shift:], found.bottom[-1]) == normal(numbers.top, numbers.bottom[-1])
    assert normal(found.bottom, found.bottom[-1]) == normal(numbers.bottom, numbers.bottom[-1])


def test_the_corner_of_a_low_pass():
    circuit = circuit_of(STAGES["low-pass"])
    response = exact_response(circuit, circuit.topology.finds[0])
    assert response.corners_hz == pytest.approx((159.1549431,))
    assert ratio_at([response], [], 159.15494309189535) == pytest.approx(0.5 - 0.5j)
    assert ratio_at([response], [response], 3e5) == pytest.approx(1)


def test_no_response_is_zero_and_has_no_ratio():
    apart = "".join(f'\nR_{k} = {{ resistor = "1k", between = ["z", "gnd"] }}' for k in (8, 9))
    circuit = circuit_of(STAGES["low-pass"] + apart)
    find = Find("H", Place("t", 1), "voltage", nodes=("z", "gnd"), per=(("V_s", Fraction(1)),))
    response = exact_response(circuit, find)
    assert response.is_zero
    assert ratio_at([], [response], 1.0) is None


def test_an_open_value_gives_none():
    circuit = circuit_of(STAGES["low-pass"].replace("1k", "?"))
    assert exact_response(circuit, circuit.topology.finds[0]) is None


def looking_in(*nodes):
    return Find("Z", Place("t", 1), "impedance", nodes=nodes)


def test_a_driving_point_resistance_is_exact():
    parts = (
        'R_1 = { resistor = "1k", between = ["in", "out"] }\n'
        'R_2 = { resistor = "2k", between = ["out", "gnd"] }\n'
        'R_3 = { resistor = "3k", between = ["out", "z"] }'
    )
    circuit = circuit_of(parts, find='voltage = "z"\nper = "V_s"')
    assert driving_point(circuit, looking_in("out", "gnd")) == Fraction(2000, 3)
    assert driving_point(circuit, looking_in("z", "gnd")) == 3000 + Fraction(2000, 3)
    assert driving_point(circuit, looking_in("z", "out")) == 3000
    assert driving_point(circuit, looking_in("in", "gnd")) == 0


def test_a_driving_point_without_a_path_is_infinite():
    parts = (
        'R_1 = { resistor = "1k", between = ["in", "gnd"] }\n'
        'R_2 = { resistor = "2k", between = ["in", "y"] }\n'
        'R_3 = { resistor = "3k", between = ["y", "z"] }\n'
        'R_4 = { resistor = "4k", between = ["z", "gnd"] }'
    )
    circuit = circuit_of(parts, find='voltage = "z"\nper = "V_s"')
    kept = tuple(element for element in circuit.elements if element.name in ("R_1", "R_3"))
    island = replace(circuit, elements=kept)
    assert driving_point(island, looking_in("z", "gnd")) is None
    # What floats as a whole still has its resistance from end to end.
    assert driving_point(island, looking_in("z", "y")) == 3000
