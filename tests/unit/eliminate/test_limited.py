"""Elimination in a process with limits: the same result, or an end with a message."""

import time

import pytest
from road import derivation_of, system_of

from derive.eliminate.limited import eliminate_within_limits
from derive.eliminate.plan import plan
from derive.errors import TooLargeError

CHAIN = """R_1 = { resistor = "1k", between = ["in", "a"] }
C_1 = { capacitor = "1n", between = ["a", "gnd"] }
R_2 = { resistor = "2k", between = ["a", "out"] }
C_2 = { capacitor = "3n", between = ["out", "gnd"] }"""


def mesh(nodes):
    """Give a part between any two nodes, ground among them: its terms are past counting."""
    names = ["in", "out", *(f"n{k}" for k in range(nodes)), "gnd"]
    pairs = [(one, other) for k, one in enumerate(names) for other in names[k + 1 :]]
    kinds = (("R", "resistor", "1k"), ("C", "capacitor", "1p"))
    return "\n".join(
        f'{kinds[k % 2][0]}_{k} = {{ {kinds[k % 2][1]} = "{kinds[k % 2][2]}", between = ["{one}", "{other}"] }}'
        for k, (one, other) in enumerate(pairs)
    )


MESH = mesh(7)


def test_result_is_that_of_elimination_here():
    system = system_of(CHAIN)
    found, expected = eliminate_within_limits(system, plan(system), 20), derivation_of(CHAIN)
    assert found.steps == expected.steps
    assert found.numerator == expected.numerator
    assert found.denominator == expected.denominator


def test_count_beyond_the_limit_is_refused_at_once():
    system = system_of(CHAIN)
    begun = time.monotonic()
    with pytest.raises(TooLargeError, match=r"has 2\.4·10¹⁸ terms: more than the 100,000"):
        eliminate_within_limits(system, plan(system), 2_386_198_850_300_556_288)
    assert time.monotonic() - begun < 0.1


def test_time_is_limited():
    system = system_of(MESH)
    begun = time.monotonic()
    with pytest.raises(TooLargeError, match=r"not written out within 0\.05 s"):
        eliminate_within_limits(system, plan(system), None, seconds=0.05)
    assert time.monotonic() - begun < 5


def test_memory_is_limited():
    system = system_of(MESH)
    with pytest.raises(TooLargeError, match="and 30 MB"):
        eliminate_within_limits(system, plan(system), None, megabytes=30)


def test_refusal_of_the_process_is_passed_on():
    system = system_of(MESH)
    with pytest.raises(TooLargeError, match="more than 400,000 terms; split it into stages"):
        eliminate_within_limits(system, plan(system), None)
