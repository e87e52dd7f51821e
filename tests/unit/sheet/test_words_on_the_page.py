"""Words of the sheet that a reader would take amiss: bare names, wrong letters, a model taken beyond its device."""

from derive.expressions.tree import Name
from derive.pipeline import derive
from derive.reading.read import parse
from derive.sheet.compose import compose
from derive.sheet.document import Maths, Table, Text
from derive.sheet.sections.time_constants import _sentence
from derive.sheet.wording import plain_line, told

STAGE = """
[sheet]
title = "Stage"
[supplies]
V_CC = {{ node = "vcc", dc = "12 V" }}
[drives]
V_s = {{ voltage = ["in", "gnd"] }}
[parts]
R_B = {{ resistor = "100k", between = ["in", "b"] }}
R_C = {{ resistor = "1k", between = ["vcc", "c"] }}
Q1 = {{ bipolar = true, base = "b", collector = "c", emitter = "gnd", beta = 100, I_C = "1 mA"{more} }}
[find.A_v]
voltage = "c"
per = "V_s"
"""


def limits(more):
    outcome = derive(parse(STAGE.format(more=more), "stage.toml"), other_engine=False).outcome
    sections = compose(outcome, "stage", with_ledger=False).sections
    table = next(s for s in sections if s.title == "Limits of validity").blocks[0]
    assert isinstance(table, Table)
    return {plain_line(what): plain_line(says) for what, says in table.rows}


def test_a_model_with_capacitances_holds_well_below_the_transition_frequency_given():
    found = limits(', f_T = "250 MHz", C_mu = "3 pF"')
    assert "250 MHz" in found["Frequency, Q1"]


def test_a_model_without_capacitances_has_no_transition_frequency():
    assert "Frequency, Q1" not in limits("")


def test_a_current_gain_is_written_by_its_letter():
    assert told("from beta = 180; g_m = 40 mS") == (
        Text("from "),
        Maths(Name("beta")),
        Text(" = 180; "),
        Maths(Name("g_m")),
        Text(" = 40 mS"),
    )


def test_a_name_that_begins_a_sentence_stays_small():
    assert _sentence("b_3 and higher are left out") == "b_3 and higher are left out."
    assert _sentence("the op amp blocks DC.") == "The op amp blocks DC."
