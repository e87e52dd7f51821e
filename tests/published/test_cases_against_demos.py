"""Cases that start from a schematic against the numbers of another solver for the same stages.

The numbers stand in the demos' comments (see test_demos). There the small-signal values are given, so the
case is given the same ones in place of its model, and loses its base divider where the demo has none; all
else is the case as it is. What is compared comes by the whole road from schematic to bands.
"""

from __future__ import annotations

import cmath
import math
from dataclasses import dataclass
from fractions import Fraction
from functools import cache
from pathlib import Path

import mpmath
import pytest
from ledger_arithmetic import LedgerResult, complex_field, nominal_values
from test_demos import check_roots, numbers_of, without_common

from derive.pipeline import derive
from derive.reading.read import parse

CASES = Path(__file__).parents[2] / "cases"
DEMOS = Path(__file__).parent / "demos"
RESPONSE_TOLERANCE = 1e-8
# A resistor that is not in the demo: it moves a gain by less than the tolerance.
NO_RESISTOR = '"1E15 Ω"'

BIPOLAR = (('beta = 180\nf_T  = "190 MHz"\n', 'g_m = "38.7 mS"\nr_pi = "4.65 kΩ"\nC_pi = "30 pF"\n'),)
FOLLOWER = (
    ('beta = 180\nf_T  = "250 MHz"\n', 'g_m = "77.4 mS"\nr_pi = "2.33 kΩ"\nC_pi = "45 pF"\n'),
    ('"68k"', NO_RESISTOR),
    ('"82k"', NO_RESISTOR),
)
CASCODE = (
    ("beta = 180\n", 'g_m = "38.7 mS"\nr_pi = "4.65 kΩ"\n'),
    ('"22k"', NO_RESISTOR),
    ('"18k"', NO_RESISTOR),
)
JFET = (
    ('I_DSS    = "4.5 mA"', 'g_m = "3 mS"'),
    ('V_P      = "-2 V"', 'r_o = "50 kΩ"'),
    ('lambda   = "0.01 1/V"', ""),
)
PAIR = (
    ("beta = 180\n", 'g_m = "19.35 mS"\nr_pi = "9.3 kΩ"\n'),
    ('"11k3"', '"1 MΩ"'),
)
PAIR_WITH_CAPACITANCES = (
    ("beta = 180\n", 'g_m = "19.35 mS"\nr_pi = "9.3 kΩ"\nC_pi = "20 pF"\nC_mu = "3 pF"\n'),
    ('"11k3"', '"1 MΩ"'),
    (
        "\n[models.",
        '\nC_EE = { capacitor = "2p0", between = ["e", "gnd"], role = "parasitic" }\n[models.',
    ),
)


@dataclass(frozen=True)
class Pairing:
    """A quantity of a case in one band, and the demo that has the same circuit."""

    case: str
    edits: tuple[tuple[str, str], ...]
    find: str
    band: str
    demo: str

    @property
    def numbers(self):
        return numbers_of(DEMOS / f"{self.demo}.toml")

    @property
    def result(self):
        (found,) = [
            entry
            for entry in ledger_of(self.case, self.edits, self.band)["results"]
            if (entry["find"], entry["band"]) == (self.find, self.band)
        ]
        return found

    def at(self, hertz: float) -> complex:
        """Give the response of the ledger's own expressions."""
        mp = mpmath.MPContext()
        mp.dps = 60
        field = complex_field(mp)
        ledger = ledger_of(self.case, self.edits, self.band)
        values = {name: field.number(value) for name, value in nominal_values(ledger).items()}
        response = LedgerResult(self.result).at(values, field)
        return complex(response.at(2j * mp.pi * mp.mpf(hertz)))


RESPONSES = [
    Pairing("echo_preamp", BIPOLAR, "A_v", "low", "d02_ce_low"),
    Pairing("echo_preamp", BIPOLAR, "A_v", "high", "d03_ce_high"),
    Pairing("line_buffer", FOLLOWER, "A_v", "high", "d04_follower"),
    Pairing("echo_cascode", CASCODE, "A_v", "high", "d05_cascode_tank"),
    Pairing("transducer_buffer", JFET, "A_v", "high", "d07_jfet"),
    Pairing("line_receiver", PAIR_WITH_CAPACITANCES, "A_dm", "high", "d08_diff_rx"),
    Pairing("line_receiver", PAIR_WITH_CAPACITANCES, "A_cm", "high", "d08b_diff_cm"),
]
# At mid-band the gain is what the high band's circuit has at zero frequency.
GAINS = [
    Pairing("echo_preamp", BIPOLAR, "A_v", "mid", "d03_ce_high"),
    Pairing("line_buffer", FOLLOWER, "A_v", "mid", "d04_follower"),
    Pairing("transducer_buffer", JFET, "A_v", "mid", "d07_jfet"),
    Pairing("line_receiver", PAIR, "A_dm", "full", "d08_diff_rx"),
    Pairing("line_receiver", PAIR, "A_cm", "full", "d08b_diff_cm"),
]


def words(pairing):
    return f"{pairing.case}-{pairing.find}-{pairing.band}"


@cache
def edited(case, edits):
    """Give the case's text with the demo's values; each is to be found exactly once."""
    text = (CASES / case / "topology.toml").read_text(encoding="utf-8")
    for old, new in edits:
        assert text.count(old) == 1, old
        text = text.replace(old, new)
    return text


@cache
def ledger_of(case, edits, band):
    results = derive(parse(edited(case, edits), f"{case}.toml"), other_engine=False, band=band, explain=False)
    assert results.passed
    return results.ledger()


@pytest.mark.parametrize("pairing", RESPONSES, ids=words)
def test_poles_and_zeros_of_the_band_are_those_of_the_other_solver(pairing):
    result = pairing.result
    zeros = [root for root in result["zeros"] if root != [0.0, 0.0]]
    poles, zeros = without_common(result["poles"], zeros)
    check_roots(poles, pairing.numbers["poles_Hz"])
    check_roots(zeros, pairing.numbers["zeros_Hz"])
    assert result["power_of_s"] == pairing.numbers["zeros_at_origin"]


@pytest.mark.parametrize("pairing", RESPONSES, ids=words)
def test_response_of_the_band_is_that_of_the_other_solver(pairing):
    for hertz, row in pairing.numbers["at"].items():
        expected = cmath.rect(row["mag"], math.radians(row["deg"]))
        assert abs(pairing.at(float(hertz)) - expected) <= RESPONSE_TOLERANCE * row["mag"]


@pytest.mark.parametrize("pairing", GAINS, ids=words)
def test_mid_band_gain_is_that_of_the_other_solver(pairing):
    expected = pairing.numbers["dc"]
    assert pairing.result["gain"]["value"] == pytest.approx(float(expected), rel=RESPONSE_TOLERANCE)


def test_impedance_at_the_emitter_is_that_of_the_other_solver():
    pairing = Pairing("line_buffer", FOLLOWER, "Z_e", "high", "d04_follower")
    for key, (real, imaginary) in pairing.numbers["impedances"].items():
        expected = complex(real, imaginary)
        hertz = float(key.removeprefix("Zout@").removesuffix("Hz"))
        assert abs(pairing.at(hertz) - expected) <= RESPONSE_TOLERANCE * abs(expected)


def test_a_value_that_is_a_little_off_is_found_out():
    off = ((BIPOLAR[0][0], BIPOLAR[0][1].replace("4.65 kΩ", "4.6501 kΩ")),)
    gain = Pairing("echo_preamp", off, "A_v", "mid", "d03_ce_high")
    assert gain.result["gain"]["value"] != pytest.approx(gain.numbers["dc"], rel=RESPONSE_TOLERANCE)


@pytest.mark.parametrize("find", ["A_dm", "A_cm"])
def test_the_pair_without_capacitances_is_the_pair_with_them_at_zero_frequency(find):
    alone = Pairing("line_receiver", PAIR, find, "full", "")
    within = Pairing("line_receiver", PAIR_WITH_CAPACITANCES, find, "high", "")
    assert Fraction(alone.result["gain"]["value"]) == pytest.approx(within.result["gain"]["value"])
