"""The gain far above all corners."""

from __future__ import annotations

from road import circuit_of, derivation_of

from derive.expressions.text import to_text
from derive.readable.far_gain import far_gain
from derive.readable.vocabulary import vocabulary_of

COUPLED = (
    'C_1 = { capacitor = "1u", between = ["in", "x"] }\n'
    'R_1 = { resistor = "1k", between = ["x", "out"] }\n'
    'R_2 = { resistor = "3k", between = ["out", "gnd"] }\n'
)


def far_of(parts):
    found = far_gain(derivation_of(parts), vocabulary_of(circuit_of(parts)))
    return None if found is None else to_text(found)


def test_a_coupling_capacitor_leaves_the_divider_far_above_its_corner():
    assert far_of(COUPLED) == "R_2/(R_1 + R_2)"


def test_a_response_that_begins_at_zero_frequency_has_none():
    assert far_of(COUPLED.replace("C_1 = { capacitor", "R_3 = { resistor")) is None
    # A lead network has a gain at both ends.
    lead = COUPLED.replace('between = ["in", "x"]', 'between = ["in", "out"]')
    assert far_of(lead.replace('between = ["x", "out"]', 'between = ["in", "out"]')) is None


def test_a_response_that_falls_again_has_none():
    band_pass = COUPLED + 'C_2 = { capacitor = "1n", between = ["out", "gnd"] }\n'
    assert far_of(band_pass) is None


def test_a_zero_response_has_none():
    assert far_of(COUPLED.replace('between = ["x", "out"]', 'between = ["x", "gnd"]')) is None
