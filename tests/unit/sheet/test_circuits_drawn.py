"""Where a sheet shows its circuits: the schematic ahead of the parts, and each band's circuit with its changes."""

from __future__ import annotations

from dataclasses import replace

import pytest

import derive
from derive.drawing.netlist import netlist_of
from derive.reading.read import parse
from derive.sheet.compose import compose
from derive.sheet.document import Circuit, Paragraph, Table

TEXT = """
[sheet]
title = "Coupled divider"
[drives]
V_s = { voltage = ["in", "gnd"] }
[parts]
C_1 = { capacitor = "1u", between = ["in", "x"], role = "coupling" }
R_1 = { resistor = "1k", between = ["x", "out"] }
R_2 = { resistor = "4k7", between = ["out", "gnd"] }
C_2 = { capacitor = "10p", between = ["out", "gnd"], role = "parasitic" }
[find.A_v]
voltage = "out"
per = "V_s"
"""


@pytest.fixture(scope="module")
def outcome():
    return derive.derive(parse(TEXT, "divider.toml")).outcome


def names_in(block):
    return {name for name, _ in netlist_of(block.drawing).parts}


def test_the_schematic_stands_before_the_parts(outcome):
    sections = {section.title: section for section in compose(outcome, "divider").sections}
    titles = list(sections)
    assert titles.index("Schematic") < titles.index("Parts")
    (block,) = sections["Schematic"].blocks
    assert names_in(block) == {"V_s", "C_1", "R_1", "R_2", "C_2"}


def test_each_band_shows_its_circuit_after_what_was_changed(outcome):
    sections = {section.title: section for section in compose(outcome, "divider").sections}
    for band, gone in (("low", {"C_2"}), ("mid", {"C_1", "C_2"}), ("high", {"C_1"})):
        blocks = sections[f"Circuit of the {band} band"].blocks
        place = next(k for k, block in enumerate(blocks) if isinstance(block, Circuit))
        assert isinstance(blocks[1], Table)
        assert place > 1
        assert blocks[place].caption == f"Small-signal circuit of the {band} band"
        assert names_in(blocks[place]) == {"V_s", "C_1", "R_1", "R_2", "C_2"} - gone


def test_what_cannot_be_drawn_is_said_in_the_same_places(outcome, monkeypatch):
    monkeypatch.setattr("derive.drawing.draw.MOST_ITEMS", 1)
    sections = {section.title: section for section in compose(replace(outcome), "divider").sections}
    (said,) = sections["Schematic"].blocks
    assert isinstance(said, Paragraph)
    assert said.line[0].text.startswith("With 5 parts and sources the circuit is too large")
    assert not any(isinstance(block, Circuit) for block in sections["Circuit of the mid band"].blocks)
