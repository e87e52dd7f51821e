from dataclasses import replace
from fractions import Fraction

import pytest
from band_circuits import (
    OUTPUT,
    C,
    L,
    R,
    circuit,
    common_emitter,
    current,
    gain,
    gm,
    impedance,
    solution_in,
)

from derive.bands.restrict import find_in, restrict
from derive.check.judge import check
from derive.devices.elements import (
    Coupling,
    CurrentDrive,
    CurrentGain,
    VirtualShort,
    VoltageDrive,
    VoltageGain,
)
from derive.errors import InputError
from derive.quantities.dimension import RATIO
from derive.quantities.symbol import Symbol

ROLES = (("C_1", "coupling"), ("C_2", "parasitic"))
PARTS = (
    R("R_1", "gen", "a"),
    C("C_1", "a", "b"),
    R("R_2", "b", "gnd"),
    C("C_2", "b", "out"),
    R("R_3", "out", "gnd"),
)
VALUES = {"R_1": "50", "C_1": "1/1000", "R_2": "75", "C_2": "1/1000000000", "R_3": "1000"}


def stage(*more, roles=ROLES, finds=OUTPUT, values=(), drives=None, **others):
    made = circuit((*PARTS, *more), VALUES | dict(values), roles, finds, **others)
    return replace(made, drives=tuple(drives)) if drives else made


def ratio(made, name):
    return replace(made, symbols=(*made.symbols, Symbol(name, RATIO, Fraction(3), "part")))


def test_a_sensed_current_of_a_short_or_an_open_part_is_refused():
    for sensed, band, word in (("C_1", "mid", "a short"), ("C_2", "low", "open")):
        made = ratio(stage(CurrentGain("F_1", "F_1", ("out", "gnd"), sensed, "k_F")), "k_F")
        with pytest.raises(InputError, match=f"{sensed}, which is {word}") as caught:
            restrict(made, band)
        assert caught.value.where == "hand.toml:7"
        assert caught.value.cure
        restrict(made, "full")


def test_the_wanted_current_of_a_part_that_is_gone_is_refused_in_that_band_alone():
    made = stage(finds=(current("C_1"),))
    find = made.topology.finds[0]
    assert find_in(restrict(made, "low"), find) == find
    with pytest.raises(InputError, match=r"the current of C_1, .* at mid-band \(short\)") as caught:
        find_in(restrict(made, "mid"), find)
    assert caught.value.where == "hand.toml:7"


def test_a_wanted_node_goes_by_its_new_name():
    made = stage(finds=(gain("b"), gain("b", "out"), impedance("b")))
    mid = restrict(made, "mid")
    assert [find_in(mid, find).nodes for find in made.topology.finds] == [
        ("a", "gnd"),
        ("a", "out"),
        ("a", "gnd"),
    ]


def test_a_wanted_node_to_which_nothing_is_connected_any_more_is_refused():
    made = circuit(
        (*PARTS[:3], C("C_2", "b", "out"), C("C_3", "out", "gnd")),
        {**{k: v for k, v in VALUES.items() if k != "R_3"}, "C_3": "1/1000000"},
        (("C_2", "parasitic"), ("C_3", "parasitic")),
    )
    with pytest.raises(InputError, match="A_v asks for node out"):
        find_in(restrict(made, "mid"), made.topology.finds[0])


def test_a_sensed_node_that_hangs_in_the_air_is_refused():
    made = circuit(
        (*PARTS[:3], C("C_2", "b", "g"), gm("g_m", ("out", "gnd"), ("g", "gnd"), "Q1"), PARTS[4]),
        VALUES | {"g_m": "1/100"},
        (("C_2", "parasitic"),),
    )
    with pytest.raises(InputError, match="node g, which part Q1 senses, hangs in the air"):
        restrict(made, "mid")


def test_a_drive_across_a_supply_is_refused():
    made = stage(supplies=(("V_CC", "gen"),))
    with pytest.raises(InputError, match="drive V_s is shorted"):
        restrict(made, "full")


@pytest.mark.parametrize(
    "element",
    [
        VoltageGain("A_1", "A_1", ("a", "b"), ("out", "gnd"), "k_F"),
        VirtualShort("O_1", "O_1", "out", ("a", "b")),
    ],
)
def test_a_source_that_a_band_shorts_is_refused(element):
    with pytest.raises(InputError, match=f"part {element.part}"):
        restrict(ratio(stage(element), "k_F"), "mid")


def test_a_current_source_whose_ends_become_one_drives_nothing():
    made = stage(
        gm("g_m", ("a", "b"), ("out", "gnd"), "Q1"),
        gm("g_x", ("out", "gnd"), ("a", "b"), "Q2"),
        values={"g_m": "1/10", "g_x": "1/20"},
    )
    mid = restrict(made, "mid", merge=False)
    says = {change.subject: change.says for change in mid.changes if change.kind == "left out"}
    assert says == {
        "g_m": "left out: shorted by C_1",
        "g_x": "left out: both nodes that it senses are node a",
    }
    assert [symbol.name for symbol in mid.circuit.symbols] == ["R_1", "R_2", "R_3"]


def test_the_wanted_current_of_a_shorted_resistor_is_zero():
    elements = (R("R_1", "gen", "e"), R("R_E", "e", "gnd"), C("C_E", "e", "gnd"))
    made = circuit(
        elements,
        {"R_1": "100", "R_E": "220", "C_E": "1/1000"},
        (("C_E", "bypass"),),
        (current("R_E"),),
    )
    solution = solution_in(made, "mid")
    assert solution.form.is_zero
    assert all(verdict.passed is not False for verdict in check(solution, lcapy=False))


def test_an_impedance_at_a_shorted_node_is_zero():
    made = common_emitter(finds=(impedance("e"),))
    solution = solution_in(made, "mid")
    assert solution.form.is_zero
    assert all(verdict.passed is not False for verdict in check(solution, lcapy=False))


def test_a_current_drive_whose_ends_become_one_gives_no_response():
    made = stage(
        R("R_4", "b", "out"),
        values={"R_4": "10"},
        drives=(VoltageDrive("V_s", ("gen", "gnd")), CurrentDrive("I_x", ("a", "b"))),
        finds=(replace(gain("out"), per=(("I_x", Fraction(1)),)),),
    )
    assert solution_in(made, "mid").form.is_zero
    assert not solution_in(made, "low").form.is_zero


def test_a_coupling_goes_with_its_coil():
    elements = (
        R("R_1", "gen", "a"),
        L("L_1", "a", "gnd"),
        L("L_2", "out", "gnd"),
        Coupling("k_1", "k_1", ("L_1", "L_2"), "k_1", "M_k_1"),
        R("R_2", "out", "gnd"),
    )
    values = {"R_1": "50", "L_1": "1/1000", "L_2": "1/1000", "R_2": "50"}
    made = ratio(circuit(elements, values, (("L_1", "bypass"),)), "k_1")
    mid = restrict(made, "mid")
    assert ("left out", "k_1", "left out: its coil L_1 is open") in [
        (change.kind, change.subject, change.says) for change in mid.changes
    ]
    assert [symbol.name for symbol in mid.circuit.symbols] == ["R_1", "L_2", "R_2"]
    assert solution_in(made, "mid").form.is_zero
