"""Numerator and denominator share no factor, and parts that cannot matter leave no trace."""

from __future__ import annotations

import random
from typing import Any

import pytest
import sympy
from circuits import accepted_circuit
from ledger_arithmetic import names_in, read_expression

from derive.errors import SingularError
from derive.pipeline import derive
from derive.reading.read import parse

FIRST_SEED, COUNT = 3_000_000, 40
LONGEST = 1500


def ledger_of(text: str) -> dict[str, Any]:
    results = derive(parse(text, "stage.toml"), other_engine=False, explain=False)
    assert results.passed
    return results.ledger()


def sympy_value(text: str) -> Any:
    """Give an expression to sympy by its own arithmetic; its text is never evaluated."""
    stack: list[Any] = []
    for what, detail in read_expression(text):
        if what == "number":
            stack.append(sympy.Rational(detail.numerator, detail.denominator))
        elif what == "name":
            stack.append(sympy.Symbol(detail))
        elif what == "negate":
            stack.append(-stack.pop())
        elif what == "power":
            stack.append(stack.pop() ** detail)
        else:
            right = stack.pop()
            left = stack.pop()
            stack.append(
                {
                    "add": lambda a, b: a + b,
                    "subtract": lambda a, b: a - b,
                    "multiply": lambda a, b: a * b,
                    "divide": lambda a, b: a / b,
                }[what](left, right)
            )
    (value,) = stack
    return value


def polynomials(result: dict[str, Any]) -> tuple[Any, Any]:
    """Give gain·numerator and denominator over their common divisor, as polynomials in all names."""
    s = sympy.Symbol("s")
    gain = sympy_value(result["gain"]["exact"])
    above = sum(sympy_value(text) * s**k for k, text in enumerate(result["numerator"]))
    below = sum(sympy_value(text) * s**k for k, text in enumerate(result["denominator"]))
    top = sympy.together(gain * above)
    bottom = sympy.together(below)
    return sympy.fraction(top), sympy.fraction(bottom)


def shared_factor_in_s(result: dict[str, Any]) -> Any:
    """Give the greatest common divisor of the two sides as far as s is in it."""
    (top, _), (bottom, _) = polynomials(result)
    s = sympy.Symbol("s")
    common = sympy.gcd(sympy.expand(top), sympy.expand(bottom))
    return sympy.degree(common, s) if common.has(s) else 0


def size(result: dict[str, Any]) -> int:
    return sum(map(len, (result["gain"]["exact"], *result["numerator"], *result["denominator"])))


@pytest.mark.parametrize("seed", range(FIRST_SEED, FIRST_SEED + COUNT))
def test_numerator_and_denominator_of_a_random_circuit_share_no_root(seed):
    topology, _ = accepted_circuit(random.Random(seed))
    try:
        ledger = derive(topology, other_engine=False, explain=False).ledger()
    except SingularError:
        return
    for result in ledger["results"]:
        if size(result) <= LONGEST:
            assert shared_factor_in_s(result) == 0, topology.text
            check_coefficients(result)


def check_coefficients(result: dict[str, Any]) -> None:
    """Assert that every coefficient is written in lowest terms: its own two sides share nothing."""
    for text in (result["gain"]["exact"], *result["numerator"], *result["denominator"]):
        above, below = sides(text)
        common = sympy.gcd(sympy.expand(above), sympy.expand(below))
        assert common.is_number, text
        assert abs(common) == 1, text


def sides(text: str) -> tuple[Any, Any]:
    """Split at the quotient that stands outermost, where there is one."""
    depth = 0
    for index, letter in enumerate(text):
        depth += (letter == "(") - (letter == ")")
        if letter == "/" and depth == 0:
            return sympy_value(text[:index]), sympy_value(text[index + 1 :])
    return sympy_value(text), sympy.Integer(1)


def test_common_root_would_be_seen():
    result = {
        "gain": {"exact": "R_1"},
        "numerator": ["1", "R_1*C_1 + R_2*C_2", "R_1*R_2*C_1*C_2"],
        "denominator": ["1", "R_1*C_1"],
    }
    assert shared_factor_in_s(result) == 1


HEAD = '[sheet]\ntitle = "Stage"\n[drives]\nV_s = { voltage = ["in", "gnd"] }\n[parts]\n'
FIND = '[find.A_v]\nvoltage = "out"\nper = "V_s"\n'
LOW_PASS = (
    'R_1 = { resistor = "1k", between = ["in", "out"] }\n'
    'C_1 = { capacitor = "1n", between = ["out", "gnd"] }\n'
)
IDLE = {
    "a resistor across the source": 'R_9 = { resistor = "2k", between = ["in", "gnd"] }\n',
    "a capacitor across the source": 'R_9 = { capacitor = "1n", between = ["gnd", "in"] }\n',
    "a divider across the source": 'R_8 = { resistor = "1k", between = ["in", "x"] }\n'
    'R_9 = { resistor = "2k", between = ["x", "gnd"] }\n',
    "a resonant circuit across the source": 'R_8 = { inductor = "1 mH", between = ["in", "x"] }\n'
    'R_9 = { capacitor = "2n", between = ["x", "gnd"] }\n',
    "a load behind a buffer": 'A_9 = { voltage_gain = "1", output = ["x", "gnd"], '
    'senses = ["out", "gnd"] }\nR_9 = { resistor = "2k", between = ["x", "gnd"] }\n',
    "a stage driven from the output": 'g_9 = { transconductance = "1 mS", flows = ["x", "gnd"], '
    'senses = ["out", "gnd"] }\nR_9 = { resistor = "2k", between = ["x", "gnd"] }\n',
    "a stage driven from the source, with its output left alone": 'g_9 = { transconductance = "1 mS", '
    'flows = ["x", "gnd"], senses = ["in", "gnd"] }\nR_9 = { resistor = "2k", between = ["x", "gnd"] }\n',
}


@pytest.mark.parametrize("name", IDLE)
def test_part_that_cannot_matter_leaves_no_trace_in_the_result(name):
    bare = ledger_of(HEAD + LOW_PASS + FIND)["results"][0]
    result = ledger_of(HEAD + LOW_PASS + IDLE[name] + FIND)["results"][0]
    for key in ("gain", "power_of_s", "numerator", "denominator", "poles", "zeros"):
        assert result[key] == bare[key]
    assert result["denominator"] == ["1", "R_1*C_1"]


def test_part_that_does_matter_leaves_its_trace():
    result = ledger_of(HEAD + LOW_PASS + 'R_9 = { resistor = "2k", between = ["out", "gnd"] }\n' + FIND)[
        "results"
    ][0]
    assert "R_9" in names_in(result["gain"]["exact"])


def test_resistor_in_series_with_a_current_drive_drops_out():
    text = (
        '[sheet]\ntitle = "Current into a load"\n[drives]\nI_s = { current = ["gnd", "in"] }\n[parts]\n'
        'R_9 = { resistor = "1k", between = ["in", "out"] }\n'
        'R_L = { resistor = "2k", between = ["out", "gnd"] }\n'
        '[find.Z_t]\nvoltage = "out"\nper = "I_s"\n'
    )
    assert ledger_of(text)["results"][0]["gain"]["exact"] == "R_L"


def test_matched_time_constants_cancel_only_where_they_are_the_same_symbols():
    # A lag and a lead of the same parts: (1 + s·R·C)/(1 + s·R·C) is one, identically.
    text = HEAD + (
        'R_1 = { resistor = "1k", between = ["in", "x"] }\n'
        'C_1 = { capacitor = "1n", between = ["x", "gnd"] }\n'
        'A_1 = { voltage_gain = "1", output = ["y", "gnd"], senses = ["x", "gnd"] }\n'
        'A_2 = { voltage_gain = "1", output = ["z", "y"], senses = ["in", "x"] }\n'
        'R_2 = { resistor = "1k", between = ["z", "gnd"] }\n'
        '[find.A_v]\nvoltage = "z"\nper = "V_s"\n'
    )
    result = ledger_of(text)["results"][0]
    # z = A_1·x + A_2·(in - x) with x = in/(1 + s·R_1·C_1): one pole, one zero, and no R_2.
    assert result["gain"]["exact"] == "A_1"
    assert result["denominator"] == ["1", "R_1*C_1"]
    assert names_in(result["numerator"][1]) == {"R_1", "C_1", "A_1", "A_2"}
