"""The interface contract of a ledger, as assertions on its data and on its text."""

from __future__ import annotations

import hashlib
import json
import math
import re
from fractions import Fraction
from itertools import pairwise
from typing import Any

import mpmath
from ledger_arithmetic import (
    PRIME,
    RATIONALS,
    RESIDUES,
    LedgerResult,
    calculate,
    complex_field,
    names_in,
    read_user_text,
)

TOP = ["ledger", "made_by", "topology", "symbols", "results"]
SYMBOL = ["value", "unit", "origin"]
RESULT = [
    "find",
    "band",
    "per",
    "gain",
    "power_of_s",
    "numerator",
    "denominator",
    "definitions",
    "zeros",
    "poles",
    "steps",
    "readable",
    "time_constants",
    "bandwidth",
    "estimates",
    "approximations",
    "checks",
]
BANDS = ["low", "mid", "high", "full"]
STEP = ["n", "rule", "says", "before", "after", "proof"]
READABLE = ["gain", "numerator", "denominator"]
TIME_CONSTANT = ["part", "kind", "resistance", "readable", "seconds", "share"]
ESTIMATE = ["name", "value", "exact", "error"]
CHECK = ["name", "method", "passed", "measured", "limit"]
NAME = re.compile(r"[A-Za-z][A-Za-z0-9_]*")
# Names, integers, + - * / ** and parentheses: no point, no comma, no other sign.
EXPR = re.compile(r"(?:[A-Za-z][A-Za-z0-9_]*|\d+|\*\*|[-+*/()]| )+")
EXACT = re.compile(r"-?\d+(?:\.\d+)?(?:e-?\d+)?|-?\d+/\d+")
# What a part or a parameter of one can be measured in.
UNITS = {"ohm", "F", "H", "S", "1", "rad/s"}
ROOT_TOLERANCE = 1e-9
# Numbers for people, such as edges and errors, are held to this.
NUMBER_TOLERANCE = 1e-6


APPROXIMATION = [
    *(
        "that",
        "because",
        "by",
        "gain",
        "power_of_s",
        "numerator",
        "denominator",
        "ratio",
        "errors",
        "status",
    ),
]
ERRORS = ["gain", "magnitude_db", "phase_deg", "range_hz", "poles"]


def check_ledger(text: str, *, passed: bool = True) -> dict[str, Any]:
    """Assert that a ledger's text keeps the contract; give its data.

    Given: `passed` asserts as well that no check on it failed.
    """
    data = json.loads(text, parse_constant=_no_constant)
    # Written again with its keys in the order read, it is the same text: nothing hangs on hashing.
    assert json.dumps(data, ensure_ascii=False, indent=1, allow_nan=False) + "\n" == text
    assert list(data) == TOP
    assert data["ledger"] == 1
    assert list(data["made_by"]) == ["name", "version"]
    assert data["made_by"]["name"] == "nodeledger"
    topology = data["topology"]
    assert list(topology) == ["file", "sha256", "text"]
    assert topology["sha256"] == hashlib.sha256(topology["text"].encode()).hexdigest()
    for name, symbol in data["symbols"].items():
        check_symbol(name, symbol)
    check_order(data["results"])
    for result in data["results"]:
        check_result(result, data["symbols"], passed=passed)
    return data


def check_order(results: list[dict[str, Any]]) -> None:
    """Assert that each band has the same quantities in the same order, and that the bands go upwards."""
    assert results
    bands = list(dict.fromkeys(result["band"] for result in results))
    assert bands == [band for band in BANDS if band in bands]
    finds = [result["find"] for result in results if result["band"] == bands[0]]
    assert len(set(finds)) == len(finds)
    assert [(result["band"], result["find"]) for result in results] == [
        (band, find) for band in bands for find in finds
    ]


def _no_constant(name: str) -> None:
    raise AssertionError(f"{name} is no JSON")


def check_symbol(name: str, symbol: dict[str, Any]) -> None:
    """Assert what is promised of a symbol."""
    assert NAME.fullmatch(name)
    assert list(symbol) == SYMBOL
    assert symbol["value"] is None or EXACT.fullmatch(symbol["value"])
    assert symbol["unit"] in UNITS
    assert re.fullmatch(r"part [A-Za-z][A-Za-z0-9_]*", symbol["origin"])


def check_result(result: dict[str, Any], symbols: dict[str, Any], *, passed: bool) -> None:
    """Assert what is promised of a result."""
    assert list(result) == RESULT
    assert result["band"] in BANDS
    assert NAME.fullmatch(result["find"])
    check_per(result["per"])
    check_expressions(result, symbols)
    check_roots(result, symbols)
    check_readable(result, symbols)
    for row in result["time_constants"]:
        check_time_constant(row, result, symbols)
    check_bandwidth(result, symbols)
    for estimate in result["estimates"]:
        check_estimate(estimate)
    for approximation in result["approximations"]:
        check_approximation(approximation, result, symbols)
    for number, step in enumerate(result["steps"], start=1):
        check_step(step, number, passed=passed)
    assert result["checks"]
    for check in result["checks"]:
        assert list(check) == CHECK
        assert check["passed"] in ((True, None) if passed else (True, False, None))
        assert all(isinstance(check[key], str) for key in CHECK if key != "passed")


def check_per(per: Any) -> None:
    """Assert that `per` is a drive, weights, or nothing for an impedance."""
    if isinstance(per, dict):
        assert per
        assert all(NAME.fullmatch(name) and EXACT.fullmatch(weight) for name, weight in per.items())
    else:
        assert per is None or NAME.fullmatch(per)


def check_expressions(result: dict[str, Any], symbols: dict[str, Any]) -> None:
    """Assert the characters and the names of every expression, and that H is finite at a point."""
    assert list(result["gain"]) == ["exact", "value"]
    value = result["gain"]["value"]
    assert value is None or (type(value) is float and math.isfinite(value))
    assert type(result["power_of_s"]) is int
    numerator, denominator = result["numerator"], result["denominator"]
    assert numerator[0] == denominator[0] == "1"
    assert numerator[-1] != "0"
    assert denominator[-1] != "0"
    known = set(symbols)
    for name, text in result["definitions"]:
        assert NAME.fullmatch(name)
        assert name not in known
        check_expression(text, known)
        known.add(name)
    for text in (result["gain"]["exact"], *numerator, *denominator):
        check_expression(text, known)
    if result["gain"]["exact"] == "0":
        assert (numerator, denominator, result["power_of_s"]) == (["1"], ["1"], 0)
        assert value in (0.0, None)
    # Squares, so that a mutual inductance exists.
    values = {name: (3 + index) ** 2 for index, name in enumerate(symbols)}
    assert 0 <= LedgerResult(result).at(values, RESIDUES).at(2) < PRIME


def check_expression(text: str, known: set[str]) -> None:
    """Assert the characters of an expression, and that its names are known."""
    assert EXPR.fullmatch(text), text
    assert names_in(text) <= known, text
    assert "s" not in names_in(text), text


def check_readable(result: dict[str, Any], symbols: dict[str, Any]) -> None:
    """Assert that what is for reading is equal to what is exact, at residues modulo a prime."""
    readable = result["readable"]
    assert list(readable) == READABLE
    pairs = [(readable["gain"], result["gain"]["exact"])]
    for key in ("numerator", "denominator"):
        assert len(readable[key]) == len(result[key])
        assert readable[key][0] == "1"
        pairs += zip(readable[key], result[key], strict=True)
    for text, exact_text in pairs:
        check_same(text, exact_text, result, symbols)


def check_same(text: str, exact_text: str, result: dict[str, Any], symbols: dict[str, Any]) -> None:
    """Assert that text in the user's language uses known names only and equals an expression."""
    program = read_user_text(text)
    names = {detail for what, detail in program if what == "name"}
    assert names <= {*symbols, *(name for name, _ in result["definitions"])}, text
    # Squares, so that a mutual inductance exists.
    values = {name: (3 + index) ** 2 for index, name in enumerate(symbols)}
    known = LedgerResult(result).known(values, RESIDUES)
    assert calculate(program, known, RESIDUES) == calculate(exact_text, known, RESIDUES) % PRIME


def check_time_constant(row: dict[str, Any], result: dict[str, Any], symbols: dict[str, Any]) -> None:
    """Assert what is promised of a time constant: its forms are equal, and its seconds are R·C or L/R."""
    assert list(row) == TIME_CONSTANT
    assert row["kind"] in ("open-circuit", "short-circuit")
    assert row["part"] in {*symbols, *(name for name, _ in result["definitions"])}
    assert (row["resistance"] is None) == (row["readable"] is None)
    assert all(row[key] is None or type(row[key]) is float for key in ("seconds", "share"))
    if row["resistance"] is None:
        return
    check_expression(row["resistance"], {*symbols, *(name for name, _ in result["definitions"])})
    check_same(row["readable"], row["resistance"], result, symbols)
    if row["seconds"] is not None:
        values = {name: exact(symbol["value"]) for name, symbol in symbols.items()}
        try:
            known = LedgerResult(result).known(values, RATIONALS)
        except ArithmeticError:
            # A mutual inductance need not be rational; then its square root has no exact value here.
            return
        ohms, value = calculate(row["resistance"], known, RATIONALS), known[row["part"]]
        inductor = symbols.get(row["part"], {}).get("unit") == "H"
        seconds = value / ohms if inductor else value * ohms
        assert math.isclose(row["seconds"], seconds, rel_tol=ROOT_TOLERANCE)


def check_bandwidth(result: dict[str, Any], symbols: dict[str, Any]) -> None:
    """Assert that the response is 3 dB off at the edges of the pass band."""
    edges = result["bandwidth"]
    assert list(edges) == ["low_hz", "high_hz"]
    assert all(edge is None or (type(edge) is float and edge > 0) for edge in edges.values())
    low, high = edges["low_hz"], edges["high_hz"]
    if low is None and high is None:
        return
    mp = mpmath.MPContext()
    mp.dps = 40
    field = complex_field(mp)
    values = {name: field.number(exact(symbol["value"])) for name, symbol in symbols.items()}
    try:
        response = LedgerResult(result).at(values, field)
    except ZeroDivisionError:
        # The normal form's own lowest coefficient vanishes at these values; the road still judges the edges.
        return

    def level(hertz: float) -> float:
        return float(abs(response.at(mp.mpc(0, 2 * mp.pi * hertz))))

    if low is not None and high is not None:
        assert low < high
        assert math.isclose(level(low), level(high), rel_tol=NUMBER_TOLERANCE)
        return
    # An edge by itself counts from the far end on its other side.
    edge, far = (low, low * 1e18) if high is None else (high, high * 1e-18)
    off = level(edge) / level(far)
    ratios = (2**-0.5, 2**0.5) if result["per"] is None else (2**-0.5,)
    assert any(math.isclose(off, ratio, rel_tol=NUMBER_TOLERANCE) for ratio in ratios)


def check_estimate(estimate: dict[str, Any]) -> None:
    """Assert that an estimate's error is the one of its numbers."""
    assert list(estimate) == ESTIMATE
    assert all(math.isfinite(estimate[key]) for key in ESTIMATE[1:])
    error = (estimate["value"] - estimate["exact"]) / estimate["exact"]
    assert math.isclose(estimate["error"], error, rel_tol=NUMBER_TOLERANCE, abs_tol=1e-9)


def check_approximation(
    approximation: dict[str, Any], result: dict[str, Any], symbols: dict[str, Any]
) -> None:
    """Assert what is promised of a result under an assumption."""
    assert list(approximation)[: len(APPROXIMATION)] == APPROXIMATION
    assert approximation["by"] in ("user", "tool")
    assert approximation["status"] in ("holds", "fails at a corner", "fails", "not checked")
    known = {*symbols, *(name for name, _ in result["definitions"])}
    check_expression(approximation["gain"]["exact"], known)
    for polynomial in (approximation["numerator"], approximation["denominator"]):
        assert polynomial[0] == "1"
        for entry in polynomial:
            check_expression(entry, known)
    errors = approximation["errors"]
    if errors is None:
        assert approximation["status"] in ("fails", "not checked")
        return
    assert list(errors)[: len(ERRORS)] == ERRORS
    low, high = errors["range_hz"]
    assert 0 < low <= high
    assert all(isinstance(error, float | int | None) for error in errors["poles"])


def check_roots(result: dict[str, Any], symbols: dict[str, Any]) -> None:
    """Assert that the roots are those of the coefficients, by rising magnitude, in conjugate pairs.

    What power_of_s says is at the origin stands there alone and in no list.
    """
    if any(symbol["value"] is None for symbol in symbols.values()):
        assert result["zeros"] == result["poles"] == []
        return
    mp = mpmath.MPContext()
    mp.dps = 60
    field = complex_field(mp)
    values = {name: field.number(exact(symbol["value"])) for name, symbol in symbols.items()}
    try:
        response = LedgerResult(result).at(values, field)
    except ZeroDivisionError:
        return
    for roots, coefficients in (
        (result["zeros"], response.numerator),
        (result["poles"], response.denominator),
    ):
        degree = max(k for k, coefficient in enumerate(coefficients) if coefficient)
        assert len(roots) == degree
        for root in roots:
            assert len(root) == 2
            assert all(type(part) is float and math.isfinite(part) for part in root)
            terms = [coefficient * mp.mpc(*root) ** k for k, coefficient in enumerate(coefficients)]
            assert abs(sum(terms)) <= ROOT_TOLERANCE * sum(map(abs, terms))
        magnitudes = [math.hypot(*root) for root in roots]
        for lower, higher in pairwise(magnitudes):
            assert lower <= higher * (1 + ROOT_TOLERANCE)
        assert sorted(roots) == sorted([real, -imaginary + 0.0] for real, imaginary in roots)


def check_step(step: dict[str, Any], number: int, *, passed: bool) -> None:
    """Assert what is promised of a step."""
    assert list(step) == STEP
    assert step["n"] == number
    assert step["rule"]
    assert step["says"]
    assert isinstance(step["before"], list)
    assert len(step["after"]) == 1
    for equation in (*step["before"], *step["after"]):
        left, equals, right = equation.partition(" = ")
        assert equals
        assert EXPR.fullmatch(left)
        assert EXPR.fullmatch(right)
    assert list(step["proof"])[:2] == ["method", "passed"]
    assert type(step["proof"]["passed"]) is bool
    assert step["proof"]["passed"] or not passed


def exact(value: str) -> Fraction:
    """Give an exact value as it stands in a ledger."""
    return Fraction(value)
