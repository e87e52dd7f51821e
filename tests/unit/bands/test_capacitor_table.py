"""The capacitor table and the band edges, against time constants known from textbooks."""

import math
from dataclasses import replace
from fractions import Fraction

import pytest
from band_circuits import (
    CE_ELEMENTS,
    CE_ROLES,
    CE_VALUES,
    C,
    L,
    R,
    circuit,
    common_emitter,
    gain,
    impedance,
    printed,
    solution_in,
    value,
    with_value,
)

from derive.devices.elements import CurrentDrive, CurrentGain, OnePoleGain
from derive.normalise.band_edges import BandEdges, band_edges
from derive.normalise.capacitor_table import capacitor_table
from derive.quantities.dimension import FREQUENCY, RATIO
from derive.quantities.symbol import Symbol

NO_EDGES = BandEdges((), ())


def rows(stage, band="mid", edges=NO_EDGES):
    return {row.symbol: row for row in capacitor_table(stage, band, edges)}


def without_r_o():
    values = {name: text for name, text in CE_VALUES.items() if name != "r_o"}
    elements = [element for element in CE_ELEMENTS if element.name != "Q1.r_o"]
    return circuit(elements, values, CE_ROLES, supplies=(("V_CC", "vcc"),)), values


def test_each_capacitor_sees_the_resistance_of_the_textbook():
    stage, values = without_r_o()
    source = "(R_S || R_1 || R_2 || r_pi)"
    expected = {
        "C_1": "R_S + (R_1 || R_2 || r_pi)",
        "C_E": "R_E || ((r_pi + (R_S || R_1 || R_2))/(1 + g_m*r_pi))",
        "C_2": "R_C + R_L",
        "C_pi": source,
        "C_mu": f"{source} + (R_C || R_L) + g_m*{source}*(R_C || R_L)",
    }
    seen = {name: row.resistance for name, row in rows(stage).items()}
    assert seen == {name: value(text, values) for name, text in expected.items()}
    assert all(row.says == "" for row in rows(stage).values())


def test_the_open_circuit_time_constants_sum_to_b_1_of_the_high_band():
    stage = common_emitter()
    _, _, _, denominator = printed(solution_in(stage, "high"), CE_VALUES)
    seen = rows(stage, "high")
    assert denominator[1] == sum(
        seen[name].resistance * Fraction(CE_VALUES[name]) for name in ("C_pi", "C_mu")
    )


def test_the_states_are_those_of_the_band():
    states = {
        band: [row.state for row in rows(common_emitter(), band).values()] for band in ("low", "mid")
    }
    assert states == {
        "low": ["kept", "open", "open", "kept", "kept"],
        "mid": ["short", "open", "open", "short", "short"],
    }


def test_the_edges_lie_at_the_poles_of_the_bands():
    stage = common_emitter()
    edges = band_edges(stage)
    low = [root.hertz for root in solution_in(stage, "low").numbers.poles]
    high = [root.hertz for root in solution_in(stage, "high").numbers.poles]
    assert edges.low_corners == pytest.approx(low)
    assert edges.high_corners == pytest.approx(high)
    assert edges.of("low") == (min(edges.low_corners), max(edges.low_corners))
    assert edges.of("mid") == (max(edges.low_corners), min(edges.high_corners))
    assert edges.of("high") == (min(edges.high_corners), max(edges.high_corners))
    assert edges.of("full") == (min(edges.low_corners), max(edges.high_corners))
    assert not edges.overlap


def test_an_end_without_a_corner_is_open():
    assert BandEdges((10.0, 20.0), ()).of("mid") == (20.0, None)
    assert BandEdges((), (5.0,)).of("mid") == (None, 5.0)
    assert BandEdges((), ()).of("full") == (None, None)
    assert BandEdges((100.0,), (5.0,)).overlap


def test_a_pole_of_a_part_without_a_role_is_no_edge_of_a_band():
    stage = circuit(
        (
            R("R_S", "gen", "a"),
            C("C_1", "a", "out"),
            R("R_L", "out", "gnd"),
            C("C_n", "out", "gnd"),
            C("C_p", "gen", "out"),
        ),
        {
            "R_S": "1000",
            "C_1": "1/1000000",
            "R_L": "3000",
            "C_n": "1/10000000000",
            "C_p": "1/10000000000",
        },
        (("C_1", "coupling"), ("C_p", "parasitic")),
        finds=(gain("out"), gain("a", name="A_a")),
    )
    edges = band_edges(stage)
    assert edges.low_corners == pytest.approx((1 / (2 * math.pi * 4000 * 1e-6),), rel=1e-3)
    # With C_p kept the one pole at high frequency has only moved: it is not the band's alone.
    assert edges.high_corners == ()


def test_quantities_with_the_same_poles_share_their_corners():
    stage = common_emitter(finds=(gain("out"), gain("c", name="A_c"), impedance("out")))
    assert len(band_edges(stage).low_corners) == 3
    assert len(band_edges(stage).high_corners) == 2


def test_reactances_and_ratios_at_the_edges_and_in_the_middle():
    stage = circuit(
        (R("R_S", "gen", "a"), C("C_1", "a", "out"), R("R_L", "out", "gnd"), C("C_L", "out", "gnd")),
        {"R_S": "1000", "C_1": "1/1000000", "R_L": "3000", "C_L": "1/1000000000"},
        (("C_1", "coupling"), ("C_L", "parasitic")),
    )
    edges = band_edges(stage)
    assert edges.mid_from == pytest.approx(1 / (2 * math.pi * 4000 * 1e-6))
    assert edges.mid_to == pytest.approx(1 / (2 * math.pi * 750 * 1e-9))
    coupling, load = rows(stage, "mid", edges).values()
    assert (coupling.resistance, load.resistance) == (4000, 750)
    assert [at.where for at in coupling.at] == ["lower edge", "centre", "upper edge"]
    # At its own corner a capacitor's reactance is the resistance that it sees.
    assert coupling.at[0].ratio == pytest.approx(1)
    assert coupling.at[0].ohms == pytest.approx(4000)
    assert load.at[2].ratio == pytest.approx(1)
    # A reactance goes with frequency, or against it.
    assert coupling.at[2].ratio == pytest.approx(edges.mid_from / edges.mid_to)
    assert load.at[0].ratio == pytest.approx(edges.mid_to / edges.mid_from)


def test_an_inductor_is_in_the_table_with_its_own_reactance():
    stage = circuit(
        (R("R_1", "gen", "out"), L("L_1", "out", "gnd"), C("C_1", "out", "gnd")),
        {"R_1": "50", "L_1": "1/1000", "C_1": "1/1000000"},
        (("L_1", "bypass"),),
    )
    edges = BandEdges((1000.0,), ())
    row = rows(stage, "mid", edges)["L_1"]
    assert (row.kind, row.state, row.resistance) == ("inductor", "open", 50)
    assert row.at[0].ohms == pytest.approx(2 * math.pi)
    assert row.at[0].ratio == pytest.approx(2 * math.pi / 50)


def test_what_a_capacitor_sees_may_be_nothing_or_infinite():
    stage = circuit(
        (C("C_1", "gen", "gnd"), C("C_2", "z", "gnd"), R("R_1", "gen", "out"), R("R_2", "out", "gnd")),
        {"C_1": "1/1000", "C_2": "1/1000", "R_1": "10", "R_2": "10"},
    )
    seen = rows(stage, "full", BandEdges((10.0,), ()))
    assert (seen["C_1"].resistance, seen["C_1"].at[0].ratio) == (0, None)
    assert (seen["C_2"].resistance, seen["C_2"].says) == (None, "infinite")
    # No reactance is small beside an infinite resistance in the sense that the part were a short.
    assert seen["C_2"].at[0].ratio is None


def test_a_capacitor_that_carries_the_current_of_a_drive_is_said_to_do_so():
    stage = circuit(
        (C("C_1", "x", "out"), R("R_1", "out", "gnd")),
        {"C_1": "1/1000", "R_1": "10"},
        (("C_1", "coupling"),),
        drives=(CurrentDrive("I_s", ("gnd", "x")),),
    )
    row = rows(stage, "mid", BandEdges((10.0,), ()))["C_1"]
    assert (row.resistance, row.at[0].ratio) == (None, None)
    assert row.says == "infinite: in series with the current drive I_s"
    # With a resistor beside the drive the capacitor sees both resistors.
    shunted = circuit(
        (C("C_1", "x", "out"), R("R_1", "out", "gnd"), R("R_2", "x", "gnd")),
        {"C_1": "1/1000", "R_1": "10", "R_2": "30"},
        (("C_1", "coupling"),),
        drives=(CurrentDrive("I_s", ("gnd", "x")),),
    )
    assert rows(shunted, "mid", BandEdges((10.0,), ()))["C_1"].resistance == 40


def test_an_open_value_is_said():
    row = rows(with_value(common_emitter(), "R_C", None), "mid", BandEdges((10.0,), ()))["C_2"]
    assert (row.resistance, row.says) == (None, "a value is left open")
    assert row.at[0].ratio is None


def test_a_resistance_that_cannot_be_worked_says_why():
    stage = circuit(
        (R("R_1", "gen", "out"), C("C_1", "out", "gnd"), C("C_2", "out", "gnd")),
        {"R_1": "50", "C_1": "1/1000", "C_2": "1/1000"},
        (("C_1", "coupling"),),
    )
    sensing = CurrentGain("F_1", "F_1", ("out", "gnd"), "C_1", "k_F")
    stage = replace(
        stage,
        elements=(*stage.elements, sensing),
        symbols=(*stage.symbols, Symbol("k_F", RATIO, Fraction(2), "part F_1")),
    )
    assert "senses the current of C_1" in rows(stage)["C_2"].says


def test_an_op_amp_counts_with_its_gain_at_low_frequency():
    elements = (
        R("R_1", "gen", "m"),
        R("R_2", "m", "out"),
        OnePoleGain("U1", "U1", "out", ("gnd", "m"), "A_0", "w_u"),
        C("C_1", "m", "gnd"),
    )
    stage = circuit(elements, {"R_1": "1000", "R_2": "9000", "C_1": "1/1000"})
    symbols = (
        Symbol("A_0", RATIO, Fraction(8), "part"),
        Symbol("w_u", FREQUENCY, Fraction(10**6), "part"),
    )
    stage = replace(stage, symbols=(*stage.symbols, *symbols))
    # R_2 over 1 + A_0 is 1 kΩ, beside R_1.
    assert rows(stage)["C_1"].resistance == 500
