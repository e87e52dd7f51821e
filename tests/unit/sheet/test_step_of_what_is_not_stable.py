"""A circuit that is not stable has no step response to draw; the sheet says so."""

from derive.pipeline import derive
from derive.reading.read import parse
from derive.sheet.compose import compose
from derive.sheet.document import Paragraph, Plot, Text

STAGE = """
[sheet]
title = "Feedback of the wrong sign"
plots = ["step"]
[drives]
V_s = { voltage = ["in", "gnd"] }
[parts]
R_1 = { resistor = "1k", between = ["in", "out"] }
C_1 = { capacitor = "1n", between = ["out", "gnd"] }
R_2 = { resistor = "1k", between = ["out", "slow"] }
C_2 = { capacitor = "100u", between = ["slow", "gnd"] }
g_1 = { transconductance = "GAIN", flows = ["gnd", "out"], senses = ["out", "gnd"] }
[find.A_v]
voltage = "out"
per = "V_s"
"""


def blocks_of(gain):
    # The current of g_1 flows into the node that it follows: from 1/R_1 + 1/R_2 on the conductance is negative.
    outcome = derive(parse(STAGE.replace("GAIN", gain), "stage.toml"), other_engine=False).outcome
    (section,) = [s for s in compose(outcome, "stage").sections if s.title == "Response"]
    return section.blocks


def words_of(blocks):
    lines = [block.line for block in blocks if isinstance(block, Paragraph)]
    return " ".join(part.text for line in lines for part in line if isinstance(part, Text))


def test_what_grows_without_end_is_not_drawn_and_that_is_said():
    blocks = blocks_of("50 mS")
    assert not any(isinstance(block, Plot) for block in blocks)
    assert "right half-plane" in words_of(blocks)


def test_what_settles_is_drawn():
    blocks = blocks_of("0.1 mS")
    assert any(isinstance(block, Plot) for block in blocks)
    assert "right half-plane" not in words_of(blocks)
