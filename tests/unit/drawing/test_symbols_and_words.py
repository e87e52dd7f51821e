"""Symbols, words and hints: what a drawing is made of."""

from __future__ import annotations

import pytest

from derive.devices.linearise import linearise
from derive.drawing.draw import MOST_ITEMS, draw_circuit, draw_schematic
from derive.drawing.drawing import Drawing, NotDrawn, Ring
from derive.drawing.letters import Run, as_text, name_words, run_width, width_of
from derive.drawing.words import words_of
from derive.errors import InputError
from derive.reading.read import parse
from tests.support.drawn import letters_width

STAGE = """
[sheet]
title = "Stage"
[supplies]
V_CC = { node = "vcc", dc = "12 V" }
[drives]
V_s = { voltage = ["in", "gnd"] }
[parts]
R_S = { resistor = "1k", between = ["in", "b"] }
R_B = { resistor = "1M", between = ["vcc", "b"] }
R_C = { resistor = "4k7", between = ["vcc", "c"] }
Q1 = { bipolar = true, base = "b", collector = "c", emitter = "gnd", beta = 180 }
[find.A_v]
voltage = "c"
per = "V_s"
"""
KINDS = """
[sheet]
title = "Kinds"
[supplies]
V_CC = { node = "vcc", dc = "12 V" }
V_EE = { node = "vee", dc = "-12 V" }
[drives]
I_s = { current = ["gnd", "a"] }
[parts]
R_1 = { resistor = "1k", between = ["a", "b"] }
C_1 = { capacitor = "1n", between = ["b", "c"] }
L_1 = { inductor = "1 mH", between = ["c", "gnd"] }
L_2 = { inductor = "1 mH", between = ["d", "gnd"] }
K_1 = { coupling = "0.9", coils = ["L_1", "L_2"] }
D1 = { diode = true, anode = "d", cathode = "e", r_d = "26 Ω" }
G_1 = { transconductance = "1 mS", flows = ["f", "gnd"], senses = ["b", "c"] }
A_1 = { voltage_gain = "10", output = ["g", "gnd"], senses = ["c", "gnd"] }
F_1 = { current_gain = "10", flows = ["e", "gnd"], senses = "R_1" }
H_1 = { transresistance = "1k", output = ["h", "gnd"], senses = "R_1" }
U1 = { ideal_opamp = true, output = "k", inputs = ["e", "k"] }
U2 = { opamp = true, output = "m", inputs = ["gnd", "h"], f_unity = "1 MHz" }
R_2 = { resistor = "1k", between = ["h", "m"] }
R_3 = { resistor = "1k", between = ["f", "k"] }
R_4 = { resistor = "1k", between = ["g", "m"] }
Q1 = { bipolar = true, base = "a", collector = "f", emitter = "e", g_m = "1 mS" }
Q2 = { bipolar = true, base = "b", collector = "vee", emitter = "f", polarity = "pnp", g_m = "1 mS" }
M1 = { mosfet = true, gate = "g", drain = "vcc", source = "k", bulk = "k", g_m = "1 mS" }
J1 = { jfet = true, gate = "d", drain = "vcc", source = "e", polarity = "n-channel", g_m = "1 mS" }
[find.H]
voltage = "m"
per = "I_s"
"""


def drawn(text):
    drawing = draw_schematic(parse(text, "stage.toml"))
    assert isinstance(drawing, Drawing)
    return drawing


def hinted(lines):
    return drawn(f"{STAGE}\n[drawing]\n{lines}\n")


def symbol(drawing, name):
    return next(symbol for symbol in drawing.symbols if symbol.name == name)


def pin(drawing, name, which):
    return dict(symbol(drawing, name).pins)[which]


class TestStage:
    """A stage is drawn as its designer would: currents go down, signals to the right."""

    def test_supply_above_ground_below_and_the_transistor_between(self):
        drawing = drawn(STAGE)
        heights = [
            pin(drawing, "V_CC", "node")[1],
            pin(drawing, "R_C", "1")[1],
            pin(drawing, "R_C", "2")[1],
            pin(drawing, "Q1", "base")[1],
            pin(drawing, "Q1", "emitter")[1],
        ]
        assert heights == sorted(heights)
        assert pin(drawing, "Q1", "collector")[0] == pin(drawing, "R_C", "2")[0]
        grounds = [placed for placed in drawing.symbols if placed.look == "ground"]
        assert min(ground.pins[0][1][1] for ground in grounds) > pin(drawing, "Q1", "base")[1]

    def test_from_the_source_on_the_left_to_the_collector_on_the_right(self):
        drawing = drawn(STAGE)
        across = [
            pin(drawing, *which)[0]
            for which in (("V_s", "plus"), ("R_S", "1"), ("R_S", "2"), ("Q1", "base"))
        ]
        assert across == sorted(across)
        assert pin(drawing, "Q1", "base")[0] < pin(drawing, "Q1", "collector")[0]

    def test_the_arrow_of_a_pnp_is_at_the_emitter_above(self):
        drawing = drawn(KINDS)
        for name, lower in (("Q1", "emitter"), ("Q2", "collector")):
            upper = "collector" if lower == "emitter" else "emitter"
            assert pin(drawing, name, upper)[1] < pin(drawing, name, lower)[1]
            arrow = next(
                shape for shape in symbol(drawing, name).shapes if getattr(shape, "filled", False)
            )
            tip = arrow.points[0][1]
            middle = (pin(drawing, name, upper)[1] + pin(drawing, name, lower)[1]) / 2
            assert (tip > middle) == (lower == "emitter")

    def test_coupled_coils_have_dots_at_their_first_nodes_and_a_note(self):
        drawing = drawn(KINDS)
        for coil in ("L_1", "L_2"):
            (dot,) = [s for s in symbol(drawing, coil).shapes if isinstance(s, Ring) and s.filled]
            first, second = pin(drawing, coil, "1"), pin(drawing, coil, "2")

            def far(point, centre=dot.centre):
                return abs(point[0] - centre[0]) + abs(point[1] - centre[1])

            assert far(first) < far(second)
        notes = [as_text(label.words) for label in drawing.labels if label.kind == "note"]
        assert notes == ["K_1 = 0.9 couples L_1 and L_2; dots at their first ends"]

    def test_every_controlled_source_is_marked_in_a_colour_of_its_own(self):
        marks = drawn(KINDS).marks
        assert {(mark.source, mark.sign) for mark in marks} == {
            *(("G_1", "+"), ("G_1", "-"), ("A_1", "+"), ("A_1", "-"), ("F_1", "arrow"), ("H_1", "arrow"))
        }
        assert len({(mark.source, mark.colour) for mark in marks}) == 4

    def test_a_source_is_labelled_with_what_it_follows(self):
        topology = parse(
            STAGE.replace('emitter = "gnd", beta = 180', 'emitter = "gnd", g_m = "40 mS"'), "a.toml"
        )
        drawing = draw_circuit(linearise(topology))
        label = next(label for label in drawing.labels if label.of == "Q1.g_m")
        assert as_text(label.words) == "g_m·v_b"


class TestHints:
    """The [drawing] table."""

    def test_rectangles_in_place_of_zigzags(self):
        plain, boxed = symbol(drawn(STAGE), "R_S"), symbol(hinted('resistors = "rectangle"'), "R_S")
        assert not any(shape.closed for shape in plain.shapes)
        assert [len(shape.points) for shape in boxed.shapes if shape.closed] == [4]

    def test_a_part_that_lies_can_stand_and_one_that_stands_can_lie(self):
        lying = drawn(STAGE)
        assert pin(lying, "R_S", "1")[1] == pin(lying, "R_S", "2")[1]
        standing = hinted('upright = ["R_S"]')
        assert pin(standing, "R_S", "1")[0] == pin(standing, "R_S", "2")[0]
        assert pin(standing, "R_S", "1")[1] < pin(standing, "R_S", "2")[1]
        assert (
            pin(hinted('level = ["R_C"]'), "R_C", "1")[1] == pin(hinted('level = ["R_C"]'), "R_C", "2")[1]
        )

    def test_a_mirrored_transistor_has_its_base_on_the_right(self):
        drawing = hinted('mirrored = ["Q1"]')
        assert pin(drawing, "Q1", "base")[0] > pin(drawing, "Q1", "collector")[0]

    def test_the_order_of_nodes_is_kept_from_left_to_right(self):
        ladder = """
        [sheet]
        title = "Ladder"
        [drives]
        V_s = { voltage = ["a", "gnd"] }
        [parts]
        R_1 = { resistor = "1k", between = ["a", "b"] }
        R_2 = { resistor = "1k", between = ["b", "c"] }
        R_3 = { resistor = "1k", between = ["c", "gnd"] }
        C_1 = { capacitor = "1n", between = ["b", "gnd"] }
        [find.H]
        voltage = "c"
        per = "V_s"
        """
        free, told = drawn(ladder), drawn(f'{ladder}\n[drawing]\norder = ["c", "b", "a"]')
        assert pin(free, "V_s", "plus")[0] < pin(free, "C_1", "1")[0] < pin(free, "R_3", "1")[0]
        assert pin(told, "V_s", "plus")[0] > pin(told, "C_1", "1")[0] > pin(told, "R_3", "1")[0]

    @pytest.mark.parametrize(
        ("lines", "message", "cure"),
        [
            ('order = ["in", "bb"]', 'order: there is no node "bb"', 'did you mean "b"'),
            ('order = ["in", "in"]', 'order names "in" twice', "take one out"),
            ('upright = ["Q1"]', 'there is no part with two ends "Q1"', "there is "),
            ('mirrored = ["R_C"]', 'there is no transistor "R_C"', "there is Q1"),
            ('level = "R_C"', "level wants a list, not the text", 'write level = ["…", "…"]'),
            (
                'upright = ["R_S"]\nlevel = ["R_S"]',
                "R_S is both upright and level",
                "one of the two lists",
            ),
            ('resistors = "box"', 'resistors cannot be drawn as "box"', 'resistors = "rectangle"'),
            ("resistors = 3", "a text is wanted, not the bare number 3", "write it in quotes"),
            ("colour = 3", 'the key "colour" is not known here', "the keys are order"),
        ],
    )
    def test_a_hint_that_cannot_be_followed_is_refused_with_its_cure(self, lines, message, cure):
        with pytest.raises(InputError) as caught:
            parse(f"{STAGE}\n[drawing]\n{lines}\n", "stage.toml")
        assert message in caught.value.what
        assert cure in caught.value.cure
        assert caught.value.where.startswith("stage.toml:")


class TestWords:
    """Words within a drawing, and the words that stand for it."""

    @pytest.mark.parametrize(
        "text", ["4.7 kΩ", "120 µF", "couples L and dots at first ends", "RCQVWM@", "0123456789−"]
    )
    @pytest.mark.parametrize("slanted", [False, True])
    def test_widths_are_those_of_the_font(self, text, slanted):
        said = run_width(Run(text, slanted), 12.0)
        assert said == pytest.approx(letters_width(text, 12.0, slanted=slanted), rel=0.012)

    def test_a_subscript_is_smaller_and_names_read_as_in_formulas(self):
        assert name_words("R_E") == (Run("R", slanted=True), Run("E", slanted=True, lowered=True))
        assert name_words("C_pi")[1] == Run("π", slanted=True, lowered=True)
        assert name_words("R_iso")[1] == Run("iso", slanted=False, lowered=True)
        assert width_of(name_words("R_E"), 12) < width_of((Run("RE", slanted=True),), 12)

    def test_a_drawing_is_told_in_words(self):
        words = words_of(drawn(STAGE))
        assert words.startswith("supply V_CC at vcc; ")
        for said in (
            "npn Q1 with base at b, collector at c and emitter at ground",
            "resistor R_C between vcc and c",
            "voltage drive V_s with plus at in and minus at ground",
        ):
            assert said in words
        follows = words_of(drawn(KINDS))
        assert "controlled current G_1 between f and ground, following the voltage from b to c" in follows
        assert "controlled current F_1 between e and ground, following the current of R_1" in follows


class TestNotDrawn:
    """Beyond its readable size a circuit is not drawn, and that is said."""

    def test_a_circuit_of_too_many_parts_says_so(self):
        rungs = "\n".join(
            f'R_{k} = {{ resistor = "1k", between = ["n{k}", "n{k + 1}"] }}\n'
            f'C_{k} = {{ capacitor = "1n", between = ["n{k + 1}", "gnd"] }}'
            for k in range(MOST_ITEMS // 2 + 1)
        )
        text = (
            '[sheet]\ntitle = "Line"\n[drives]\nV_s = { voltage = ["n0", "gnd"] }\n[parts]\n'
            f'{rungs}\n[find.H]\nvoltage = "n5"\nper = "V_s"\n'
        )
        found = draw_schematic(parse(text, "line.toml"))
        assert isinstance(found, NotDrawn)
        assert found.why == "With 29 parts and sources the circuit is too large to be drawn readably."
