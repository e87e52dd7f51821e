"""Stages of a sonar receiver against the numbers of another solver, which stand in their comments.

The comment that opens each file is JSON: poles and zeros in Hz (left half-plane positive, a complex
pair with its Q), the response at zero frequency, and at other frequencies. The numbers come from a
nodal solver in floating point that shares nothing with this project.
"""

from __future__ import annotations

import cmath
import json
import math
import re
from fractions import Fraction
from functools import cache
from pathlib import Path
from typing import Any

import mpmath
import pytest
from ledger_arithmetic import LedgerResult, complex_field, nominal_values

from derive.pipeline import derive
from derive.reading.read import parse

FILES = sorted((Path(__file__).parent / "demos").glob("*.toml"))
# Roots are printed with six digits; responses with all that a double holds.
ROOT_TOLERANCE = 2e-5
RESPONSE_TOLERANCE = 1e-8
_ROOT = re.compile(r"(?P<hertz>[-+.\de]+)(?:\(Q=(?P<quality>[.\d]+)\))?")


@cache
def text_of(file: Path) -> str:
    return file.read_text(encoding="utf-8")


@cache
def numbers_of(file: Path) -> dict[str, Any]:
    lines = [line for line in text_of(file).split("\n") if line.startswith("#")]
    return json.loads("\n".join(line.removeprefix("#") for line in lines))


@cache
def ledger_of(file: Path) -> dict[str, Any]:
    return checked_ledger(text_of(file), file.name)


def checked_ledger(text: str, name: str) -> dict[str, Any]:
    results = derive(parse(text, name), other_engine=False, explain=False)
    assert results.passed
    return results.ledger()


def response_of(ledger: dict[str, Any], hertz: float) -> complex:
    mp = mpmath.MPContext()
    mp.dps = 40
    field = complex_field(mp)
    values = {name: field.number(value) for name, value in nominal_values(ledger).items()}
    return complex(LedgerResult(ledger["results"][0]).at(values, field).at(2j * mp.pi * mp.mpf(hertz)))


def without_common(poles: list[list[float]], zeros: list[list[float]]) -> tuple[list, list]:
    """Take off the roots that equal halves of a pair give to both; the other solver cancels them."""
    poles, zeros = list(poles), list(zeros)
    for pole in tuple(poles):
        for zero in tuple(zeros):
            if pole in poles and math.dist(pole, zero) <= 1e-12 * math.hypot(*pole):
                poles.remove(pole)
                zeros.remove(zero)
    return poles, zeros


def by_file(*keys: str) -> Any:
    rows = []
    for file in FILES:
        if all(numbers_of(file)[key] for key in keys):
            rows.append(pytest.param(file, id=file.stem))
    return pytest.mark.parametrize("file", rows)


def check_roots(found: list[list[float]], printed: list[str]) -> None:
    assert len(found) == len(printed)
    for (real, imaginary), text in zip(found, printed, strict=True):
        match = _ROOT.fullmatch(text)
        assert match
        hertz = float(match["hertz"])
        magnitude = math.hypot(real, imaginary) / (2 * math.pi)
        assert magnitude == pytest.approx(abs(hertz), rel=ROOT_TOLERANCE)
        assert (real > 0) == (hertz < 0)
        assert (imaginary != 0) == (match["quality"] is not None)
        if match["quality"]:
            # Q is printed with three digits.
            quality = math.pi * magnitude / abs(real)
            assert quality == pytest.approx(float(match["quality"]), rel=6e-3)


@pytest.mark.parametrize("file", [pytest.param(file, id=file.stem) for file in FILES])
def test_poles_and_zeros_are_those_of_the_other_solver(file):
    (result, *_) = ledger_of(file)["results"]
    at_origin = [root for root in result["zeros"] if root == [0.0, 0.0]]
    assert len(at_origin) in (0, result["power_of_s"])
    poles, zeros = without_common(result["poles"], result["zeros"][len(at_origin) :])
    check_roots(poles, numbers_of(file)["poles_Hz"])
    check_roots(zeros, numbers_of(file)["zeros_Hz"])
    assert len(poles) == len(result["poles"]) or file.stem.startswith("d08")


@pytest.mark.parametrize("file", [pytest.param(file, id=file.stem) for file in FILES])
def test_zeros_at_the_origin_and_response_there_are_those_of_the_other_solver(file):
    (result, *_) = ledger_of(file)["results"]
    assert max(0, result["power_of_s"]) == numbers_of(file)["zeros_at_origin"]
    expected = Fraction(numbers_of(file)["dc"])
    found = result["gain"]["value"] if result["power_of_s"] == 0 else 0.0
    assert found == pytest.approx(float(expected), rel=RESPONSE_TOLERANCE)


@by_file("at")
def test_magnitude_and_phase_are_those_of_the_other_solver(file):
    for hertz, row in numbers_of(file)["at"].items():
        expected = cmath.rect(row["mag"], math.radians(row["deg"]))
        assert (
            abs(response_of(ledger_of(file), float(hertz)) - expected) <= RESPONSE_TOLERANCE * row["mag"]
        )


def test_impedance_is_that_of_the_other_solver():
    (file,) = [file for file in FILES if numbers_of(file)["impedances"]]
    # It is the impedance at the follower's emitter, with isolator and cable in place.
    text = text_of(file).partition("[find.H]")[0] + '[find.Z_out]\nimpedance = "e"\n'
    ledger = checked_ledger(text, file.name)
    for key, (real, imaginary) in numbers_of(file)["impedances"].items():
        hertz = float(key.removeprefix("Zout@").removesuffix("Hz"))
        expected = complex(real, imaginary)
        assert abs(response_of(ledger, hertz) - expected) <= RESPONSE_TOLERANCE * abs(expected)
