"""What one search found is taken over by others only where they would have found the same."""

import pytest

from derive.devices.linearise import linearise
from derive.eliminate.eliminate import eliminate
from derive.eliminate.plan import plan
from derive.nodal.write import write_equations
from derive.normalise.normalise import normalise
from derive.readable import readable
from derive.readable.memory import Record, memory_of
from derive.readable.readable import read_expression
from derive.readable.vocabulary import vocabulary_of
from derive.reading.read import parse

STAGE = """
[sheet]
title = "Stage"
[drives]
V_s = { voltage = ["in", "gnd"] }
[parts]
R_S = { resistor = "1k", between = ["in", "b"] }
R_B = { resistor = "47k", between = ["b", "gnd"] }
r_pi = { resistor = "2k", between = ["b", "e"] }
g_m = { transconductance = "40 mS", flows = ["c", "e"], senses = ["b", "e"] }
R_E = { resistor = "100R", between = ["e", "gnd"] }
R_C = { resistor = "4k7", between = ["c", "gnd"] }
C_mu = { capacitor = "3p", between = ["b", "c"] }
C_E = { capacitor = "1n", between = ["e", "gnd"] }
[find.A_v]
voltage = "c"
per = "V_s"
"""


@pytest.fixture
def entries():
    circuit = linearise(parse(STAGE, "stage.toml"), {})
    system = write_equations(circuit, circuit.topology.finds[0])
    form, derivation = normalise(eliminate(system, plan(system)))
    asked = (form.gain, *form.numerator[1:], *form.denominator[1:])
    return asked, derivation.system.ring.plain(), vocabulary_of(circuit)


def forget():
    readable._worked.cache_clear()
    memory_of.cache_clear()


def test_no_form_hangs_on_what_was_asked_before(entries):
    asked, ring, vocabulary = entries
    alone = []
    for entry in asked:
        forget()
        alone.append(read_expression(entry, ring, vocabulary))
    forget()
    assert [read_expression(entry, ring, vocabulary) for entry in asked] == alone
    forget()
    assert [read_expression(entry, ring, vocabulary) for entry in asked[::-1]] == alone[::-1]


def test_there_is_something_to_take_over(entries):
    asked, ring, vocabulary = entries
    forget()
    for entry in asked:
        read_expression(entry, ring, vocabulary)
    assert memory_of.cache_info().currsize == 1
    assert memory_of.cache_info().hits == len(asked) - 1


def test_a_form_needs_all_that_was_looked_at_for_its_parts():
    record = Record()
    record.begin("whole")
    record.begin("part")
    assert record.end("part") == {"part"}
    record.begin("other")
    record.used("part")
    assert record.end("other") == {"other", "part"}
    assert record.end("whole") == {"whole", "part", "other"}
    assert not record.spoilt(["whole", "part", "other", "never seen"])


def test_what_was_cut_short_is_not_kept_and_nor_is_what_used_it():
    record = Record()
    record.begin("whole")
    record.begin("cut short")
    record.spoil()
    assert record.end("cut short") is None
    assert record.end("whole") is None
    record.begin("later")
    record.used("cut short")
    assert record.end("later") is None
    record.begin("apart")
    assert record.end("apart") == {"apart"}
    assert record.spoilt(["apart", "later"])
