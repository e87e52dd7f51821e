"""A drawing of a circuit on the page: real lines, real words, and words for those who do not see it."""

from __future__ import annotations

import io
from xml.etree import ElementTree

import pikepdf
import pytest

from derive.drawing.draw import draw_schematic
from derive.reading.read import parse
from derive.render.circuit import circuit_svg, share_of_page
from derive.render.html import to_html
from derive.render.pdf import to_pdf
from derive.sheet.circuits import circuit_block
from derive.sheet.document import Circuit, Paragraph, Section, Sheet

SVG = "{http://www.w3.org/2000/svg}"
STAGE = """
[sheet]
title = "Divider <&>"
[drives]
V_s = { voltage = ["in", "gnd"] }
[parts]
R_iso = { resistor = "4k7", between = ["in", "out"] }
C_1 = { capacitor = "10 µF", between = ["out", "gnd"] }
G_1 = { transconductance = "1 mS", flows = ["out", "gnd"], senses = ["in", "out"] }
[find.H]
voltage = "out"
per = "V_s"
"""


@pytest.fixture(scope="module")
def drawing():
    return draw_schematic(parse(STAGE, "a.toml"))


@pytest.fixture(scope="module")
def sheet(drawing):
    block = circuit_block(drawing, "Schematic of the divider")
    return Sheet(
        "Divider", (), True, (), (Section("Schematic", (block,)),), "a.toml", STAGE, "a.json", "{}"
    )


def test_every_wire_is_a_line_of_the_picture(drawing):
    root = ElementTree.fromstring(circuit_svg(drawing, "words", 1))
    path = next(p.attrib["d"] for p in root.iter(f"{SVG}path") if p.attrib["class"] == "wire")
    runs = [run.split("L") for run in path.split("M")[1:]]
    ends = {tuple(tuple(map(float, end.split())) for end in run) for run in runs}
    assert ends == {(wire.start, wire.end) for wire in drawing.wires}
    assert len(list(root.iter(f"{SVG}circle"))) == len(drawing.dots)


def test_names_are_text_with_lowered_subscripts(drawing):
    root = ElementTree.fromstring(circuit_svg(drawing, "words", 1))
    texts = {"".join(text.itertext()): text for text in root.iter(f"{SVG}text")}
    assert {"Riso", "4.7 kΩ", "C1", "10 µF", "Vs", "G1", "in", "out"} <= texts.keys()
    base, subscript = texts["Riso"]
    assert base.attrib["font-style"] == "italic"
    assert "font-style" not in subscript.attrib
    assert float(subscript.attrib["y"]) > float(base.attrib["y"])
    assert float(subscript.attrib["font-size"]) < float(texts["Riso"].attrib["font-size"])


def test_a_source_and_the_signs_that_it_follows_have_one_colour(drawing):
    root = ElementTree.fromstring(circuit_svg(drawing, "words", 1))
    signs = {p.attrib["stroke"] for p in root.iter(f"{SVG}path") if p.attrib["class"].startswith("mark")}
    label = next(text for text in root.iter(f"{SVG}text") if "".join(text.itertext()) == "G1")
    assert signs == {label.attrib["fill"]}


def test_a_drawing_is_as_wide_as_its_lines_and_never_wider_than_the_page(drawing):
    assert share_of_page(drawing) == pytest.approx(100 * drawing.width / 640)
    assert share_of_page(drawing) < 100


def test_the_html_holds_the_drawing_with_its_title_and_words(sheet):
    page = to_html(sheet).decode()
    assert page.count('<svg xmlns="http://www.w3.org/2000/svg" class="circuit" role="img"') == 1
    assert '<title id="circuit-1-title">Schematic of the divider</title>' in page
    assert "resistor R_iso between in and out" in page
    assert "controlled current G_1 between out and ground, following the voltage from in to out" in page
    assert "Figure 1 – Schematic of the divider" in page
    assert 'tabindex="0" role="group"' in page


def test_the_pdf_holds_it_as_vectors_with_the_same_words(sheet):
    pdf = pikepdf.open(io.BytesIO(to_pdf(sheet)))
    alternatives = [
        str(o["/Alt"]) for o in pdf.objects if isinstance(o, pikepdf.Dictionary) and "/Alt" in o
    ]
    assert any("resistor R_iso between in and out" in words for words in alternatives)
    pictures = [
        o
        for o in pdf.objects
        if isinstance(o, pikepdf.Stream) and o.get("/Subtype") == "/Image" and o.get("/Width", 0) > 1
    ]
    assert pictures == []


def test_a_circuit_that_is_not_drawn_leaves_a_sentence():
    rungs = "\n".join(f'R_{k} = {{ resistor = "1k", between = ["n{k}", "n{k + 1}"] }}' for k in range(40))
    text = (
        '[sheet]\ntitle = "Line"\n[drives]\nV_s = { voltage = ["n0", "gnd"] }\n[parts]\n'
        f'{rungs}\n[find.H]\nvoltage = "n40"\nper = "V_s"\n'
    )
    block = circuit_block(draw_schematic(parse(text, "line.toml")), "Schematic")
    assert isinstance(block, Paragraph)
    assert block.line[0].text.endswith("drawn readably. The table of parts shows how it is connected.")
    assert isinstance(circuit_block(draw_schematic(parse(STAGE, "a.toml")), "Schematic"), Circuit)
