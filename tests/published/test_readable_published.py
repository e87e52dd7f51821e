"""What textbooks print of the basic stages, found by the program without hints, letter for letter.

Sources, from memory: Gray, Hurst, Lewis and Meyer, Analysis and Design of Analog Integrated Circuits (Wiley),
chapters 3 and 7; Sedra and Smith, Microelectronic Circuits (Oxford), the high-frequency chapter; for time
constants Gray and Searle, Electronic Principles (Wiley, 1969). The forms are those of the books with r_o and r_b
left out.
"""

from __future__ import annotations

from functools import cache

import pytest

import derive
from derive.expressions.text import to_text
from derive.reading.read import parse
from derive.sheet.plain import plain_outcome

STAGE = """
[sheet]
title = "{title}"
[supplies]
V_CC = {{ node = "vcc", dc = "12 V" }}
[drives]
V_s = {{ voltage = ["in", "gnd"] }}
[parts]
{parts}
[models.npn]
beta = 180
I_C = "1 mA"
C_pi = "12 pF"
C_mu = "2 pF"
[find.A_v]
voltage = "out"
per = "V_s"
"""
FOLLOWER = """
R_S = { resistor = "1k", between = ["in", "b"] }
Q1 = { bipolar = "npn", base = "b", collector = "vcc", emitter = "out" }
R_E = { resistor = "2k2", between = ["out", "gnd"] }
"""
COMMON_EMITTER = """
R_S = { resistor = "1k", between = ["in", "b"] }
Q1 = { bipolar = "npn", base = "b", collector = "out", emitter = "gnd" }
R_L = { resistor = "4k7", between = ["vcc", "out"] }
"""
COMMON_BASE = """
R_S = { resistor = "600R", between = ["in", "e"] }
Q1 = { bipolar = "npn", base = "gnd", collector = "out", emitter = "e" }
R_C = { resistor = "4k7", between = ["vcc", "out"] }
"""
CASCODE = """
R_S = { resistor = "1k", between = ["in", "b"] }
Q1 = { bipolar = "npn", base = "b", collector = "m", emitter = "gnd" }
Q2 = { bipolar = "npn", base = "gnd", collector = "out", emitter = "m" }
R_L = { resistor = "4k7", between = ["vcc", "out"] }
"""
DEGENERATED = """
R_S = { resistor = "1k", between = ["in", "b"] }
Q1 = { bipolar = "npn", base = "b", collector = "out", emitter = "e" }
R_E = { resistor = "100R", between = ["e", "gnd"] }
R_C = { resistor = "4k7", between = ["vcc", "out"] }
"""


@cache
def outcome_of(parts):
    topology = parse(STAGE.format(title="Stage", parts=parts), "stage.toml")
    results = derive.derive(topology, other_engine=False)
    assert results.passed
    return results.outcome


def high_band(parts):
    results = outcome_of(parts).results
    return next(result.solution for result in results if result.solution.band.band == "high")


def sheet_of(parts):
    """Give every line of the sheet as plain text."""
    return plain_outcome(outcome_of(parts), steps=True)


def resistance_seen_by(parts, symbol):
    constants = high_band(parts).time_constants.open_circuit
    return to_text(next(c.readable for c in constants if c.symbol == symbol))


def coefficient(parts, letter, power):
    readable = high_band(parts).readable
    return to_text((readable.numerator if letter == "a" else readable.denominator)[power])


def zero(parts):
    return next(form for form in high_band(parts).estimates.closed_forms if form.of == "zero")


def test_follower():
    assert resistance_seen_by(FOLLOWER, "C_mu") == "R_S || (r_pi + (1 + beta)*R_E)"
    assert resistance_seen_by(FOLLOWER, "C_pi") == "r_pi || ((R_S + R_E)/(1 + g_m*R_E))"
    assert to_text(zero(FOLLOWER).readable) in ("(1 + 1/beta)*g_m/C_pi", "-(1 + 1/beta)*g_m/C_pi")
    # A gain that is seen to be near one.
    assert to_text(high_band(FOLLOWER).readable.gain) == "1/(1 + (R_S + r_pi)/((1 + beta)*R_E))"


def test_common_emitter_stage():
    assert resistance_seen_by(COMMON_EMITTER, "C_pi") == "R_S || r_pi"
    assert resistance_seen_by(COMMON_EMITTER, "C_mu") == "(R_S || r_pi)*(1 + g_m*R_L) + R_L"
    # The order of the two follows their size at the nominal values.
    assert coefficient(COMMON_EMITTER, "b", 1) == (
        "C_mu*((R_S || r_pi)*(1 + g_m*R_L) + R_L) + C_pi*(R_S || r_pi)"
    )
    assert to_text(high_band(COMMON_EMITTER).readable.gain) == "-r_pi/(R_S + r_pi)*g_m*R_L"
    assert coefficient(COMMON_EMITTER, "a", 1) == "-C_mu/g_m"
    assert to_text(zero(COMMON_EMITTER).readable) == "g_m/C_mu"
    assert "right" in zero(COMMON_EMITTER).says
    assert zero(COMMON_EMITTER).value > 0


def test_common_base_stage_in_r_e():
    assert resistance_seen_by(COMMON_BASE, "C_pi") == "R_S || r_e"
    assert resistance_seen_by(COMMON_BASE, "C_mu") == "R_C"
    assert to_text(high_band(COMMON_BASE).readable.gain) == "alpha*R_C/(R_S + r_e)"
    names = [name for name, _ in high_band(COMMON_BASE).readable.definitions]
    assert names == ["beta", "r_e", "alpha"]


def test_cascode_has_no_miller_factor_of_the_full_gain():
    seen = resistance_seen_by(CASCODE, "C_mu1")
    assert seen == "(R_S || r_pi1)*(1 + g_m1*r_e2) + r_e2"
    assert "R_L" not in seen
    assert resistance_seen_by(CASCODE, "C_mu2") == "R_L"
    assert resistance_seen_by(CASCODE, "C_pi2") == "r_e2"


def test_degenerated_stage_shows_what_the_emitter_resistance_does():
    gain = to_text(high_band(DEGENERATED).readable.gain)
    assert gain == "-beta*R_C/(R_S + r_pi + (1 + beta)*R_E)"


# The same, as the sheet prints it.
PRINTED = {
    FOLLOWER: (
        "R_S ∥ (r_π + (1 + β)·R_E)",
        "r_π ∥ ((R_S + R_E)/(1 + g_m·R_E))",
        "(1 + 1/β)·g_m/C_π",
        "A_v = 1/(1 + (R_S + r_π)/((1 + β)·R_E))",
    ),
    COMMON_EMITTER: (
        "C_μ·((R_S ∥ r_π)·(1 + g_m·R_L) + R_L) + C_π·(R_S ∥ r_π)",
        "ω_z1 = g_m/C_μ",
        "right half-plane",
        "A_v = −r_π/(R_S + r_π)·g_m·R_L",
    ),
    COMMON_BASE: ("R_S ∥ r_e", "A_v = α·R_C/(R_S + r_e)", "r_e = r_π/(1 + β)"),
    CASCODE: ("(R_S ∥ r_π1)·(1 + g_m1·r_e2) + r_e2",),
}


@pytest.mark.parametrize("parts", PRINTED, ids=("follower", "common emitter", "common base", "cascode"))
def test_sheet_prints_the_textbook_forms(parts):
    sheet = sheet_of(parts)
    for words in PRINTED[parts]:
        assert words in sheet
