"""The small pieces of the bias: ways through a graph, exact systems, matched junctions, rounding."""

import random
from fractions import Fraction

import numpy as np
import pytest
from biased import npn, other, pnp, resistor, simple, topology
from stages import DIVIDER, MOSFET, TWO_RAILS

from derive.bias import response
from derive.bias.at_dc import at_dc
from derive.bias.dc_circuit import dc_circuit
from derive.bias.linear import OpenError, solve_matrix
from derive.bias.paths import Join, reached, way
from derive.bias.solve import operating_point
from derive.bias.square_numeric import NoPointError, rounded, solve_together
from derive.bias.thevenin import divider_of
from derive.devices.elements import Capacitor, OnePoleGain, Resistor, VirtualShort, VoltageGain
from derive.devices.registry import names_for
from derive.expressions.text import to_text


def test_a_way_names_the_items_in_order():
    joins = [Join("A", ("a", "b")), Join("B", ("c", "b")), Join("C", ("d", "e"))]
    assert way("a", "c", joins) == ("A", "B")
    assert way("a", "a", joins) == ()
    assert way("a", "e", joins) == ()
    assert reached("a", joins) == {"a", "b", "c"}


def test_an_exact_system_is_solved_or_says_what_is_open():
    half = Fraction(1, 2)
    assert solve_matrix("xy", [([half, half], half), ([half, -half], 3 * half)]) == [2, -1]
    with pytest.raises(OpenError) as caught:
        solve_matrix("xy", [([half, half], half), ([1 + half - half, Fraction(1)], Fraction(1))])
    assert caught.value.unknowns == ("y",)
    with pytest.raises(OpenError) as caught:
        solve_matrix("x", [([half], half), ([half], Fraction(2))])
    assert caught.value.unknowns == ()


def test_op_amps_at_dc_have_their_dc_gain_and_capacitors_are_gone():
    elements = (
        Capacitor("C", "C", ("a", "b"), "C"),
        Resistor("R", "R", ("a", "b"), "R"),
        OnePoleGain("U1", "U1", "o", ("p", "m"), "A_0", "w_u"),
        OnePoleGain("U2", "U2", "o", ("p", "m"), None, "w_u"),
    )
    assert list(at_dc(elements)) == [
        elements[1],
        VoltageGain("U1", "U1", ("o", "gnd"), ("p", "m"), "A_0"),
        VirtualShort("U2", "U2", "o", ("p", "m")),
    ]


def test_what_answers_to_a_capacitor_s_current_has_none():
    parts = (
        *DIVIDER,
        simple("capacitor", "C_1", "1u", "c", "gnd"),
        other("current_gain", "F", "2", senses_part="C_1", flows=("b", "gnd")),
        other("transresistance", "H", "1k", senses_part="C_1", output=("h", "gnd")),
        resistor("R_H", "1k", "h", "gnd"),
    )
    point = operating_point(topology(parts))
    assert point.devices[0].current == operating_point(topology(DIVIDER)).devices[0].current
    assert dict(point.nodes)["h"] == 0


def divider(parts, supplies=TWO_RAILS[:1]):
    dc = dc_circuit(topology(parts, supplies))
    return divider_of(dc, dc.devices[0])


def test_a_divider_between_two_rails_and_its_emitter_rail():
    parts = (
        resistor("R_1", "10k", "vee", "b"),
        resistor("R_2", "20k", "vcc", "b"),
        npn("Q1", "b", "vcc", "e"),
        resistor("R_E", "1k", "e", "vee"),
    )
    found = divider(parts, TWO_RAILS)
    assert to_text(found.voltage) == "(V_EE*R_2 + V_CC*R_1)/(R_1 + R_2)"
    assert (found.emitter_rail.text, found.emitter_resistor.text) == ("V_EE", "R_E")
    point = operating_point(topology(parts, TWO_RAILS))
    v_bb = Fraction(-12 * 20 + 12 * 10, 30)
    r_b = Fraction(200000, 30)
    expected = 100 * (v_bb + 12 - Fraction("0.7")) / (r_b + 101 * 1000)
    assert point.devices[0].current == expected
    assert (
        to_text(point.derivations[0].result.right) == "beta*(V_BB - V_EE - V_BE)/(R_B + (beta + 1)*R_E)"
    )


def test_an_emitter_at_ground_leaves_the_formula_without_its_resistor():
    parts = (resistor("R_1", "1M", "vcc", "b"), resistor("R_2", "100k", "b", "gnd"))
    parts = (*parts, npn("Q1", "b", "c", "gnd"), resistor("R_C", "4k7", "vcc", "c"))
    point = operating_point(topology(parts))
    assert to_text(point.derivations[0].result.right) == "beta*(V_BB - V_BE)/R_B"


@pytest.mark.parametrize(
    "more",
    [
        resistor("R_3", "100k", "b", "c"),
        resistor("R_3", "100k", "e", "c"),
        resistor("R_3", "100k", "b", "gnd"),
        npn("Q2", "b", "vcc", "e2"),
    ],
)
def test_another_shape_is_not_taken_for_the_usual_divider(more):
    parts = (*DIVIDER, more, resistor("R_9", "1k", "e2", "gnd"))
    assert divider(DIVIDER) is not None
    assert divider(parts) is None
    assert not operating_point(topology(parts)).derivations[0].broken


@pytest.mark.parametrize(
    ("value", "digits", "expected"),
    [
        (Fraction(2, 3), 3, Fraction("0.667")),
        (Fraction(-123456), 2, Fraction(-120000)),
        (Fraction(1, 3000), 4, Fraction("0.0003333")),
        (Fraction(0), 5, Fraction(0)),
    ],
)
def test_rounding_keeps_at_least_the_digits_asked_for(value, digits, expected):
    found = rounded(value, digits)
    assert abs(found - value) <= abs(expected - value)
    assert abs(found - value) <= abs(value) / Fraction(10) ** (digits - 1)


def test_square_laws_together_balance_to_forty_digits():
    beyond = [Fraction(3), Fraction(4)]
    drops = [[Fraction(1000), Fraction(500)], [Fraction(500), Fraction(2000)]]
    factors = [Fraction(1, 1000), Fraction(1, 500)]
    one, two = solve_together(beyond, drops, factors)
    for k, own in enumerate((one, two)):
        total = own + drops[k][0] * factors[0] * one**2 + drops[k][1] * factors[1] * two**2
        assert abs(total - beyond[k]) < Fraction(1, 10**38)
    with pytest.raises(NoPointError):
        solve_together([Fraction(-1), Fraction(4)], drops, factors)


def stamped(parts, supplies):
    """Solve the circuit with constant V_BE by an ordinary numerical tableau; give I_C by part."""
    nodes = sorted({n for part in parts for pair in part[2].values() for n in pair} - {"gnd"})
    place = {node: k for k, node in enumerate(nodes)}
    devices = [part for part in parts if part[1] == "bipolar"]
    size = len(nodes) + len(supplies) + len(devices)
    matrix, right = np.zeros((size, size)), np.zeros(size)

    def add(row, node, value):
        if node != "gnd":
            matrix[row, place[node]] += value

    for part in parts:
        if part[1] == "resistor":
            one, two = part[2]["between"]
            conductance = 1 / float(part[5].exact)
            for node, far in ((one, two), (two, one)):
                if node != "gnd":
                    add(place[node], node, conductance)
                    add(place[node], far, -conductance)
    for k, (_, node, volts) in enumerate(supplies):
        row = len(nodes) + k
        matrix[row, place[node]] = matrix[place[node], row] = 1
        right[row] = float(volts)
    for k, part in enumerate(devices):
        row = len(nodes) + len(supplies) + k
        sign = 1 if part[4]["polarity"] == "npn" else -1
        beta = float(part[3]["beta"])
        base, collector, emitter = (part[2][key][0] for key in ("base", "collector", "emitter"))
        add(row, base, sign)
        add(row, emitter, -sign)
        right[row] = 0.7
        for node, share in ((base, 1), (collector, beta), (emitter, -1 - beta)):
            if node != "gnd":
                matrix[place[node], row] += sign * share
    found = np.linalg.solve(matrix, right)[len(nodes) + len(supplies) :]
    betas = [float(part[3]["beta"]) for part in devices]
    return {part[0]: beta * i for part, beta, i in zip(devices, betas, found, strict=True)}


def random_stage(source):
    """Give a chain of stages, each base fed from a divider or the collector before it."""

    def value(low, high):
        return f"{source.randint(low, high)} Ω"

    parts, feed = [], None
    for k in range(source.randint(1, 3)):
        up = feed is not None and source.random() < 0.5
        kind = pnp if up else npn
        base = feed or f"b{k}"
        if feed is None or source.random() < 0.3:
            parts.append(resistor(f"R_A{k}", value(40000, 90000), "vcc", base))
            parts.append(resistor(f"R_B{k}", value(10000, 20000), base, "gnd"))
        rails = ("gnd", "vcc") if up else ("vcc", "gnd")
        beta = str(source.randint(50, 300))
        parts.append(kind(f"Q{k}", base, f"c{k}", f"e{k}", beta=beta))
        parts.append(resistor(f"R_C{k}", value(1000, 3000), rails[0], f"c{k}"))
        parts.append(resistor(f"R_E{k}", value(500, 2000), f"e{k}", rails[1]))
        feed = f"c{k}"
    if source.random() < 0.5:
        parts.append(resistor("R_X", value(50000, 200000), feed, "b0"))
    return parts


SUPPLY = (("V_CC", "vcc", "15"),)
CHAINS = [random_stage(random.Random(seed)) for seed in range(60)]
CONDUCTING = [chain for chain in CHAINS if min(stamped(chain, SUPPLY).values()) > 0]


def test_most_random_chains_conduct():
    assert len(CONDUCTING) > 40


@pytest.mark.parametrize("place", range(40))
def test_random_chains_agree_with_an_ordinary_tableau(place):
    parts = CONDUCTING[place]
    point = operating_point(topology(parts, SUPPLY))
    expected = stamped(parts, SUPPLY)
    assert point.method == "linear"
    for device in point.devices:
        assert float(device.current) == pytest.approx(expected[device.part], rel=1e-9)
    assert not any(found.broken for found in point.derivations)


def test_names_of_two_devices_take_their_index():
    parts = (*DIVIDER, npn("Q2", "c", "vcc", "e2"), resistor("R_E2", "5k", "e2", "gnd"))
    file = topology(parts)
    assert [found.symbol for found in operating_point(file).derivations] == ["I_C1", "I_C2"]
    assert names_for(file).taken >= {"Q1", "Q2"}


def test_the_same_file_gives_the_same_point():
    file = topology((*DIVIDER, npn("Q2", "c", "vcc", "e2"), resistor("R_E2", "5k", "e2", "gnd")))
    one, other_one = operating_point(file), operating_point(file)
    assert one.nodes == other_one.nodes
    assert one.newton == other_one.newton
    assert [d.steps for d in one.derivations] == [d.steps for d in other_one.derivations]


def test_a_derivation_too_long_to_read_is_left_out_and_said(monkeypatch):
    monkeypatch.setattr(response, "LONGEST", 3)
    point = operating_point(topology(DIVIDER))
    (found,) = point.derivations
    assert found.steps == ()
    assert found.result is None
    assert "too many to write down" in found.says
    assert point.devices[0].current == operating_point(topology(DIVIDER)).devices[0].current
    (square,) = operating_point(topology(MOSFET)).derivations
    assert square.steps == ()
    assert "too many to write down" in square.says
    monkeypatch.undo()
    assert operating_point(topology(MOSFET)).derivations[0].steps
