"""Drawings of the cases and of random circuits, read back from their lines alone and held against the circuit."""

from __future__ import annotations

import random
from dataclasses import replace
from functools import cache
from pathlib import Path

import pytest

from derive.bands.choose import bands_of
from derive.bands.restrict import restrict
from derive.bias.solve import operating_point
from derive.devices.linearise import linearise
from derive.drawing.draw import draw_band, draw_circuit, draw_schematic
from derive.drawing.drawing import Drawing, Wire
from derive.drawing.faults import faults_of
from derive.drawing.netlist import netlist_of
from derive.reading.read import read
from tests.support.drawn import overlaps, parts_of_circuit, parts_of_topology, senses_of
from tests.support.random_drawings import random_circuit, random_topology

CASES = sorted(path.parent.name for path in (Path(__file__).parents[3] / "cases").glob("*/topology.toml"))
RANDOM = range(12)  # drawing_campaign.py of the properties draws more


@cache
def circuits_of(case):
    topology = read(Path(__file__).parents[3] / "cases" / case / "topology.toml")
    point = operating_point(topology)
    circuit = linearise(topology, {d.part: d for d in point.devices} if point else {})
    return topology, tuple(restrict(circuit, band) for band in bands_of(circuit))


def assert_shows(drawing, parts, senses):
    assert isinstance(drawing, Drawing), drawing.why
    netlist = netlist_of(drawing)
    assert {name: dict(pins) for name, pins in netlist.parts} == parts
    assert set(netlist.follows) == senses
    assert overlaps(drawing) == []
    assert faults_of(drawing) == ()


@pytest.mark.parametrize("case", CASES)
def test_the_schematic_of_a_case_shows_every_connection_and_nothing_overlaps(case):
    topology, _ = circuits_of(case)
    assert_shows(draw_schematic(topology), parts_of_topology(topology), senses_of(topology))


@pytest.mark.parametrize("case", CASES)
def test_the_circuit_of_each_band_shows_every_connection_and_nothing_overlaps(case):
    _, bands = circuits_of(case)
    for band in bands:
        assert_shows(draw_band(band), parts_of_circuit(band.circuit), senses_of(band.circuit))


@pytest.mark.parametrize("seed", RANDOM)
def test_random_schematics_with_parts_of_every_kind_show_every_connection(seed):
    topology = random_topology(random.Random(seed))
    assert_shows(draw_schematic(topology), parts_of_topology(topology), senses_of(topology))


@pytest.mark.parametrize("seed", RANDOM)
def test_random_small_signal_circuits_show_every_connection(seed):
    circuit = random_circuit(random.Random(1000 + seed))
    assert_shows(draw_circuit(circuit), parts_of_circuit(circuit), senses_of(circuit))


def test_the_same_circuit_is_drawn_the_same():
    topology, bands = circuits_of("echo_preamp")
    assert draw_schematic(topology) == draw_schematic(topology)
    assert draw_band(bands[0]) == draw_band(bands[0])


class TestBrokenDrawings:
    """A wrong drawing is found out."""

    @pytest.fixture
    def drawing(self):
        return draw_schematic(circuits_of("echo_preamp")[0])

    def test_every_dot_left_out_is_missed(self, drawing):
        parted = 0
        for place in range(len(drawing.dots)):
            broken = replace(drawing, dots=drawing.dots[:place] + drawing.dots[place + 1 :])
            assert any("without a dot" in fault for fault in faults_of(broken))
            parted += netlist_of(broken) != netlist_of(drawing)
        assert parted  # where a wire ends on another, the dot alone joins them

    def test_a_dot_on_a_plain_wire_is_found(self, drawing):
        wire = max(drawing.wires, key=lambda wire: wire.end[0] - wire.start[0])
        middle = ((wire.start[0] + wire.end[0]) / 2, wire.start[1])
        assert any(
            "at a dot" in fault for fault in faults_of(replace(drawing, dots=(*drawing.dots, middle)))
        )

    def test_every_wire_left_out_is_missed(self, drawing):
        for place in range(len(drawing.wires)):
            broken = replace(drawing, wires=drawing.wires[:place] + drawing.wires[place + 1 :])
            assert netlist_of(broken) != netlist_of(drawing), drawing.wires[place]

    def test_a_dot_where_two_wires_only_cross_joins_them(self):
        drawing = draw_schematic(circuits_of("echo_cascode")[0])
        crossings = [
            (upright.start[0], level.start[1])
            for upright in drawing.wires
            for level in drawing.wires
            if upright.start[0] == upright.end[0] and level.start[1] == level.end[1]
            if level.start[0] < upright.start[0] < level.end[0]
            and upright.start[1] < level.start[1] < upright.end[1]
            and (upright.start[0], level.start[1]) not in drawing.dots
        ]
        assert crossings  # the wire of C_B crosses that of node b
        broken = replace(drawing, dots=(*drawing.dots, crossings[0]))
        assert netlist_of(broken) != netlist_of(drawing)
        assert "b/h" in {node for _, pins in netlist_of(broken).parts for _, node in pins}

    def test_a_label_at_the_wrong_wire_is_found(self, drawing):
        one, other = [label for label in drawing.labels if label.kind == "node"][:2]
        swapped = {one: replace(one, anchor=other.anchor), other: replace(other, anchor=one.anchor)}
        labels = tuple(swapped.get(label, label) for label in drawing.labels)
        assert netlist_of(replace(drawing, labels=labels)) != netlist_of(drawing)

    def test_a_sign_at_the_wrong_wire_is_found(self):
        drawing = draw_band(circuits_of("echo_preamp")[1][0])
        plus, minus = drawing.marks
        marks = (replace(plus, anchor=minus.anchor), minus)
        assert netlist_of(replace(drawing, marks=marks)) != netlist_of(drawing)

    def test_a_symbol_moved_onto_another_is_found(self, drawing):
        one, other = drawing.symbols[1], drawing.symbols[4]
        broken = replace(
            drawing, symbols=(*drawing.symbols[:1], replace(other, name=one.name), *drawing.symbols[2:])
        )
        assert overlaps(broken)
        assert faults_of(broken)

    @pytest.mark.parametrize("kind", ["part", "value", "node"])
    def test_a_label_moved_onto_a_wire_or_a_part_is_found(self, drawing, kind):
        label = next(label for label in drawing.labels if label.kind == kind)
        wire = max(drawing.wires, key=lambda wire: wire.end[0] - wire.start[0])
        for x, y in (wire.start, drawing.symbols[3].shapes[0].points[0]):
            dx, dy = x - label.at[0], y + 3 - label.at[1]
            box = label.box
            shifted = replace(
                box, left=box.left + dx, right=box.right + dx, top=box.top + dy, bottom=box.bottom + dy
            )
            moved = replace(label, at=(x, y + 3), box=shifted)
            broken = replace(
                drawing, labels=tuple(moved if each == label else each for each in drawing.labels)
            )
            assert overlaps(broken)
            assert faults_of(broken)

    def test_a_wire_through_a_part_and_wires_on_each_other_are_found(self, drawing):
        box = next(symbol.box for symbol in drawing.symbols if symbol.name == "R_C")
        middle = (box.top + box.bottom) / 2
        through = replace(
            drawing, wires=(*drawing.wires, Wire((box.left - 20, middle), (box.right + 20, middle)))
        )
        assert any("runs through R_C" in fault for fault in faults_of(through))
        assert any("R_C" in fault for fault in overlaps(through))
        doubled = replace(drawing, wires=(*drawing.wires, drawing.wires[0]))
        assert any("on each other" in fault for fault in faults_of(doubled))
