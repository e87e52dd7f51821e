"""What parts become: elements with the part they came from, and symbols with value and origin."""

from dataclasses import replace
from fractions import Fraction

import pytest
from road import DRIVE, circuit_of, topology_of

from derive.devices.elements import (
    Capacitor,
    Coupling,
    CurrentDrive,
    OnePoleGain,
    Resistor,
    Transconductance,
    VirtualShort,
    VoltageDrive,
)
from derive.devices.linearise import linearise
from derive.devices.registry import models
from derive.errors import InputError
from derive.quantities.dimension import CAPACITANCE, FREQUENCY, RATIO, RESISTANCE

ENDS = (
    'R_a = { resistor = "1k", between = ["in", "out"] }\n'
    'R_b = { resistor = "1k", between = ["out", "gnd"] }'
)


def named(circuit):
    return {symbol.name: symbol for symbol in circuit.symbols}


def test_a_part_keeps_its_value_tolerance_and_origin():
    circuit = circuit_of(
        'R_a = { resistor = "4k7", between = ["in", "out"], tol = "1 %" }\n'
        'C_b = { capacitor = "4u7", between = ["out", "gnd"] }'
    )
    assert circuit.elements == (
        Resistor("R_a", "R_a", ("in", "out"), "R_a"),
        Capacitor("C_b", "C_b", ("out", "gnd"), "C_b"),
    )
    resistance, capacitance = circuit.symbols
    assert (resistance.dimension, resistance.value, resistance.tolerance) == (
        RESISTANCE,
        Fraction(4700),
        Fraction(1, 100),
    )
    assert (capacitance.dimension, capacitance.value) == (CAPACITANCE, Fraction(47, 10**7))
    assert (resistance.origin, resistance.text) == ("part R_a", "4k7")
    assert resistance.positive


def test_drives_keep_their_direction():
    circuit = circuit_of(ENDS, drives=f'{DRIVE}\nI_n = {{ current = ["gnd", "out"] }}')
    assert circuit.drives == (VoltageDrive("V_s", ("in", "gnd")), CurrentDrive("I_n", ("gnd", "out")))


def test_a_controlled_source_may_have_either_sign():
    circuit = circuit_of(
        f'{ENDS}\ng = {{ transconductance = "-2 mS", flows = ["out", "gnd"], senses = ["in", "out"] }}'
    )
    assert circuit.elements[-1] == Transconductance("g", "g", ("out", "gnd"), ("in", "out"), "g")
    assert named(circuit)["g"].value == Fraction(-2, 1000)
    assert not named(circuit)["g"].positive


OPAMP = (
    'U1 = {{ opamp = true, output = "x", inputs = ["in", "out"]{0} }}\n'
    'R_x = {{ resistor = "1k", between = ["x", "out"] }}'
)


@pytest.mark.parametrize(
    ("given", "expected"),
    [
        (', A_0 = "1e5"', OnePoleGain("U1", "U1", "x", ("in", "out"), "A_0", None)),
        (', w_unity = "1e7 rad/s"', OnePoleGain("U1", "U1", "x", ("in", "out"), None, "w_u")),
        (
            ', A_0 = "1e5", f_unity = "1 MHz"',
            OnePoleGain("U1", "U1", "x", ("in", "out"), "A_0", "w_u"),
        ),
    ],
)
def test_an_op_amp_is_what_is_given_of_it(given, expected):
    circuit = circuit_of(f"{ENDS}\n{OPAMP.format(given)}")
    assert [element for element in circuit.elements if element.part == "U1"] == [expected]


def test_an_op_amp_of_which_nothing_is_given_is_ideal():
    topology = topology_of(f"{ENDS}\n{OPAMP.format(', A_0 = 1e5')}".replace("1e5", "'1e5'"))
    parts = tuple(replace(part, parameters=()) for part in topology.parts)
    circuit = linearise(replace(topology, parts=parts))
    assert circuit.elements[2] == VirtualShort("U1", "U1", "x", ("in", "out"))


def test_the_unity_gain_frequency_becomes_two_pi_times_it():
    given = ", f_unity = '1 MHz'"
    symbol = named(circuit_of(f"{ENDS}\n{OPAMP.format(given)}"))["w_u"]
    assert symbol.dimension == FREQUENCY
    # 2π to 25 digits, from memory: 6.283185307179586476925287
    assert abs(symbol.value / 10**6 - Fraction("6.283185307179586476925287")) < Fraction(1, 10**24)
    assert symbol.text == "2π · 1 MHz"


def test_op_amp_resistances_stand_at_its_input_and_behind_an_inner_node():
    given = ", A_0 = '1e5', R_in = '2M', R_out = '75R'"
    circuit = circuit_of(f"{ENDS}\n{OPAMP.format(given)}")
    gain, r_in, r_out = (element for element in circuit.elements if element.part == "U1")
    assert gain.output == "U1_open"
    assert r_in == Resistor("U1.R_in", "U1", ("in", "out"), "R_in")
    assert r_out == Resistor("U1.R_out", "U1", ("U1_open", "x"), "R_out")
    assert named(circuit)["A_0"].dimension == RATIO


TWO = """
U1 = { opamp = true, output = "x", inputs = ["in", "x"], A_0 = "1e5", R_out = "75R" }
U_buf = { opamp = true, output = "U1_open", inputs = ["x", "U1_open"], A_0 = "1e4" }
R_o = { resistor = "1k", between = ["U1_open", "out"] }
R_b = { resistor = "1k", between = ["out", "gnd"] }
"""


def test_several_op_amps_index_their_symbols_by_their_names():
    assert [name for name in named(circuit_of(TWO)) if name.startswith(("A", "R_out"))] == [
        "A_01",
        "R_out1",
        "A_0_buf",
    ]


def test_an_inner_node_never_meets_a_node_of_the_user():
    circuit = circuit_of(TWO)
    assert circuit.elements[0].output == "U1_open_"


def test_a_devices_symbol_may_not_be_another_parts_name():
    with pytest.raises(
        InputError, match=r"part U1: its symbol A_0 is also the name of another item"
    ) as told:
        circuit_of(
            'A_0 = { resistor = "1k", between = ["in", "out"] }\n'
            'R_b = { resistor = "1k", between = ["out", "gnd"] }\n' + OPAMP.format(", A_0 = '1e5'")
        )
    assert told.value.where == "test.toml:8"
    assert told.value.cure


def test_a_mutual_inductance_is_a_name_of_its_own_that_no_part_bears():
    coils = """
L_1 = { inductor = "1m", between = ["in", "out"] }
L_2 = { inductor = "4m", between = ["x", "gnd"] }
R_x = { resistor = "1k", between = ["x", "gnd"] }
R_L = { resistor = "1k", between = ["out", "gnd"] }
K = { coupling = "-0.5", coils = ["L_1", "L_2"] }
"""
    circuit = circuit_of(coils)
    (coupling,) = (element for element in circuit.elements if isinstance(element, Coupling))
    assert (coupling.coils, coupling.coefficient, coupling.mutual) == (("L_1", "L_2"), "K", "M_K")
    clash = circuit_of(coils.replace("R_L", "M_K"))
    assert clash.elements[-1].mutual == "M_K_"


def test_an_open_value_has_no_number():
    circuit = circuit_of(ENDS.replace('"1k"', '"?"', 1))
    assert named(circuit)["R_a"].value is None


def test_models_are_found_by_folder_and_read_only_once():
    assert models() is models()
    assert list(models()) == sorted(models())
    assert linearise.__doc__
