"""Every fault of a bias is one message that names the part, its line and a cure."""

import re
from dataclasses import replace

import pytest
from biased import fet, npn, other, pnp, resistor, simple, topology
from stages import DIVIDER, JFET, MOSFET, TWO_RAILS

from derive.bias.solve import operating_point
from derive.errors import InputError
from derive.quantities.symbol import Value

TEN = (("V_CC", "vcc", "10"),)
FAULTS = {
    "no supplies": (
        topology(DIVIDER, ()),
        "test.toml:3: part Q1: it needs an operating point, and the file has no [supplies]",
    ),
    "a base behind a capacitor": (
        topology(
            (*DIVIDER[2:], simple("capacitor", "C_1", "1u", "in", "b"), resistor("R", "1k", "in", "gnd"))
        ),
        "test.toml:1: part Q1: its base (node b) has no DC path",
    ),
    "a gate behind a capacitor": (
        topology(
            (*JFET[1:], simple("capacitor", "C_1", "1u", "in", "g"), resistor("R", "1k", "in", "gnd"))
        ),
        "test.toml:1: part J1: its gate (node g) has no DC path",
    ),
    "two bases joined and nothing else": (
        topology(
            (
                npn("Q1", "b", "vcc", "e1"),
                npn("Q2", "b", "vcc", "e2"),
                resistor("R_1", "1k", "e1", "gnd"),
                resistor("R_2", "2k", "e2", "gnd"),
            )
        ),
        "test.toml:1: part Q1: its base (node b) has no DC path",
    ),
    "a device beyond capacitors": (
        topology(
            (*DIVIDER, *(simple("capacitor", "C_1", "1u", "gnd", "q"),), npn("Q2", "b", "q", "gnd"))
        ),
        "test.toml:7: part Q2: the operating point does not exist: nothing settles the voltage of node q",
    ),
    "a diode beyond capacitors": (
        topology(
            (
                *DIVIDER,
                simple("capacitor", "C_1", "1u", "gnd", "q"),
                other("diode", "D1", anode=("q",), cathode=("r",)),
                resistor("R", "1k", "q", "r"),
            )
        ),
        "test.toml:7: part D1: its anode (node q) has no DC path",
    ),
    "two supplies on one node": (
        topology(DIVIDER, (("V_CC", "vcc", "12"), ("V_DD", "vcc", "5"))),
        "test.toml:102: supply V_DD is shorted to supply V_CC at node vcc",
    ),
    "a supply on ground": (
        topology(DIVIDER, (("V_CC", "vcc", "12"), ("V_DD", "gnd", "5"))),
        "test.toml:102: supply V_DD is shorted to ground at node gnd",
    ),
    "a supply shorted by inductors": (
        topology(
            (
                *DIVIDER,
                simple("inductor", "L_1", "1m", "vcc", "q"),
                simple("inductor", "L_2", "1m", "q", "gnd"),
            )
        ),
        "test.toml:101: supply V_CC is shorted to ground through L_1 and L_2",
    ),
    "supplies shorted by a drive": (
        topology(DIVIDER, TWO_RAILS, [("V_s", "voltage", ("vcc", "vee"))]),
        "test.toml:102: supply V_EE is shorted to supply V_CC through V_s",
    ),
    "a pnp with an npn's bias": (
        topology((*DIVIDER[:2], pnp("Q1", "b", "c", "e"), *DIVIDER[3:])),
        "test.toml:3: part Q1: the operating point does not exist: with this bias the pnp transistor "
        "does not conduct",
    ),
    "an npn with a pnp's bias": (
        topology(
            (
                resistor("R_1", "12k", "vcc", "b"),
                resistor("R_2", "68k", "b", "gnd"),
                npn("Q1", "b", "c", "e"),
                resistor("R_C", "4k7", "c", "gnd"),
                resistor("R_E", "1k", "vcc", "e"),
            )
        ),
        "test.toml:3: part Q1: the operating point does not exist: with this bias the npn",
    ),
    "a base bias below V_BE": (
        topology((DIVIDER[0], resistor("R_2", "1k", "b", "gnd"), *DIVIDER[2:])),
        "does not conduct (I_C would be −",
    ),
    "a diode the wrong way round": (
        topology(
            (resistor("R_1", "1k", "vcc", "a"), other("diode", "D1", anode=("gnd",), cathode=("a",)))
        ),
        "test.toml:2: part D1: the operating point does not exist: it would have to conduct backwards",
    ),
    "a gate below threshold": (
        topology((MOSFET[0], resistor("R_2", "50k", "g", "gnd"), *MOSFET[2:]), TEN),
        "test.toml:3: part M1: the operating point does not exist: its control voltage does not reach",
    ),
    "a pair of gates below threshold": (
        topology(
            (
                fet("mosfet", "M1", "gnd", "vcc", "x", k="1 mA/V²", V_t="1 V"),
                fet("mosfet", "M2", "g", "vcc", "x", k="1 mA/V²", V_t="1 V"),
                resistor("R_G", "1k", "g", "gnd"),
                resistor("R_T", "1k", "x", "gnd"),
            )
        ),
        "test.toml:1: part M1: the operating point does not exist: no state was found by Newton's method",
    ),
    "a quadratic without a real root": (
        # The source follows its own drain current upwards: V_GS = 5 + 10k·I_D, and the law stays above.
        topology(
            (
                resistor("R_1", "1M", "vcc", "p"),
                resistor("R_2", "1M", "p", "gnd"),
                resistor("R_D", "10k", "vcc", "d"),
                other("voltage_gain", "A", "-1", output=("g", "q"), senses=("d", "vcc")),
                other("voltage_gain", "B", "1", output=("q", "gnd"), senses=("p", "gnd")),
                fet("mosfet", "M1", "g", "d", "gnd", k="2 mA/V²", V_t="1 V"),
            ),
            TEN,
        ),
        "test.toml:6: part M1: the operating point does not exist: the square law and the circuit have "
        "no voltage in common",
    ),
    "a junction across a supply": (
        topology((npn("Q1", "vcc", "c", "gnd"), resistor("R_C", "1k", "vcc", "c"))),
        "test.toml:1: part Q1: the operating point does not exist: V_BE stands between nodes vcc and "
        "gnd, whose voltage V_CC fixes already",
    ),
    "unlike junctions in parallel": (
        topology(
            (
                *DIVIDER,
                npn("Q2", "b", "vcc", "e", V_BE="0.6 V"),
            )
        ),
        "test.toml:6: part Q2: the operating point does not exist: V_BE2 stands between nodes b and e, "
        "whose voltage V_BE1 fixes already",
    ),
    "base and emitter on one inductor": (
        topology((*DIVIDER, simple("inductor", "L_1", "1m", "b", "e"))),
        "whose voltage L_1 fixes already",
    ),
    "collector fed by nothing": (
        topology((*DIVIDER[:3], DIVIDER[4], simple("capacitor", "C", "1u", "c", "gnd"))),
        "test.toml:3: part Q1: the operating point does not exist: nothing settles the voltage of node c",
    ),
    "beta missing": (
        topology((*DIVIDER[:2], npn("Q1", "b", "c", "e", beta=None), *DIVIDER[3:])),
        'test.toml:3: part Q1: the operating point needs "beta"',
    ),
    "V_t missing": (
        topology((*MOSFET[:2], fet("mosfet", "M1", "g", "d", "x", k="2 mA/V²"), *MOSFET[3:])),
        'test.toml:3: part M1: the operating point needs "V_t"',
    ),
    "a resistor left open": (
        topology((resistor("R_1", "?", "vcc", "b"), *DIVIDER[1:])),
        "test.toml:1: part R_1: the value of R_1 is left open, and the operating point needs it",
    ),
    "an op amp that senses a node behind a capacitor": (
        topology(
            (
                *DIVIDER,
                other("ideal_opamp", "U1", output=("o",), inputs=("p", "o")),
                simple("capacitor", "C_1", "1u", "e", "p"),
                resistor("R_O", "1k", "o", "gnd"),
            )
        ),
        "test.toml:6: part U1: it answers to node p, which has no DC path",
    ),
    "a symbol that is a part's name": (
        topology((*DIVIDER, resistor("beta", "1k", "vcc", "gnd"))),
        "part Q1: its symbol beta is also the name of another item",
    ),
}


@pytest.mark.parametrize("name", FAULTS)
def test_it_is_said_where_and_how_to_cure_it(name):
    file, words = FAULTS[name]
    with pytest.raises(InputError, match=re.escape(words)) as caught:
        operating_point(file)
    assert caught.value.cure
    assert re.match(r"test\.toml:\d+$", caught.value.where)


def test_a_supply_left_open_is_refused_only_where_it_is_needed():
    file = topology(DIVIDER)
    supply = replace(file.supplies[0], dc=Value(None, "?"))
    with pytest.raises(InputError, match="supply V_CC: the value of V_CC is left open") as caught:
        operating_point(replace(file, supplies=(supply,)))
    assert caught.value.where == "test.toml:101"
    given = topology((*DIVIDER[:2], npn("Q1", "b", "c", "e", I_C="1 mA"), *DIVIDER[3:]))
    assert operating_point(replace(given, supplies=(supply,))) is None
