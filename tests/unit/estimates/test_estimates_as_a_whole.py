"""What is said where there is little to say, and that it is said the same twice."""

from itertools import pairwise

import numpy as np
import pytest
from estimated import COMMON_EMITTER, said_of, sections, solution_of

from derive.expressions.walk import names_of


def test_a_zero_response_says_so():
    parts = 'R_1 = { resistor = "1k", between = ["in", "gnd"] }\nR_2 = { resistor = "1k", between = ["out", "gnd"] }'
    said = said_of(parts)
    assert said.remark.startswith("the response is zero")
    assert (said.closed_forms, said.estimates, said.bandwidth, said.limits) == ((), (), None, ())


def test_a_response_that_vanishes_at_these_values_only_keeps_its_symbols():
    bridge = "\n".join(
        f'R_{k} = {{ resistor = "1k", between = ["{a}", "{b}"] }}'
        for k, (a, b) in enumerate([("in", "p"), ("p", "gnd"), ("in", "m"), ("m", "gnd")], 1)
    )
    said = said_of(bridge, find='voltage = ["p", "m"]\nper = "V_s"')
    assert said.remark.startswith("no bandwidth")
    assert said.limits


def test_open_values_leave_symbols_alone():
    said = said_of(COMMON_EMITTER.replace('"4k7"', '"?"'))
    assert said.bandwidth is None
    assert said.estimates == ()
    assert said.sensitivities == ()
    assert "left open" in said.remark
    assert [one.value for one in said.closed_forms] == [None] * 3


def test_every_name_in_a_readable_form_is_known():
    solution = solution_of(COMMON_EMITTER)
    said = solution.estimates
    known = {symbol.name for symbol in solution.derivation.system.small_signal.symbols}
    known |= {name for name, _ in said.definitions}
    shown = [one.readable for one in said.closed_forms]
    shown += [one.limit for one in said.limits if one.limit is not None]
    assert {name for expression in shown for name in names_of(expression)} <= known


def test_the_same_circuit_is_described_in_the_same_words_twice():
    assert said_of(COMMON_EMITTER) == said_of(COMMON_EMITTER)
    assert said_of(sections(1, 3, 2)) == said_of(sections(1, 3, 2))


def test_a_response_that_does_not_come_apart_still_has_its_corners():
    nodes = ["in", "a", "b", "c", "d", "out"]
    ladder = "\n".join(
        f'R_{k} = {{ resistor = "1k", between = ["{one}", "{two}"] }}\n'
        f'C_{k} = {{ capacitor = "1 nF", between = ["{two}", "gnd"] }}'
        for k, (one, two) in enumerate(pairwise(nodes), 1)
    )
    said = said_of(ladder)
    assert said.closed_forms == ()
    # n equal RC sections: poles at −(4/RC)·sin²((2k − 1)·π/(4n + 2)) (textbook); b_1 = 15·RC by Elmore's sum.
    sizes = [root.root.real for root in said.sensitivities if root.of == "pole"]
    exact = [-4e6 * np.sin((2 * k - 1) * np.pi / 22) ** 2 for k in range(1, 6)]
    assert sizes == pytest.approx(exact, rel=1e-9)
    dominant = next(one for one in said.estimates if one.name == "dominant pole")
    assert dominant.value == pytest.approx(-1e6 / 15)


def test_a_gain_too_long_to_read_has_no_line_of_limits(monkeypatch):
    assert said_of(COMMON_EMITTER).limits
    monkeypatch.setattr("derive.estimates.limits.MOST_TERMS", 2)
    assert said_of(COMMON_EMITTER).limits == ()


def test_a_root_too_long_to_read_has_no_closed_form(monkeypatch):
    monkeypatch.setattr("derive.estimates.closed_forms.MOST_TERMS", 5)
    assert [one.of for one in said_of(COMMON_EMITTER).closed_forms] == ["zero"]
