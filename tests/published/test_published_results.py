"""Published results against the ledger: as numbers, and as identities in all symbols."""

from __future__ import annotations

import random
from functools import cache
from math import comb
from typing import Any

import mpmath
import pytest
from ledger_arithmetic import (
    PRIME,
    RESIDUES,
    LedgerResult,
    Response,
    calculate,
    complex_field,
    names_in,
    nominal_values,
)
from published_checks import CENTRES, Published, closed_form, published, quantity

from derive.pipeline import Results, derive
from derive.reading.read import parse

CHECKS = {check.id: check for check in published()}
EXACT = [name for name, check in CHECKS.items() if check.exact]
POINTS = 3


@cache
def results_of(topology: str) -> Results:
    return derive(parse(topology, "published.toml"), other_engine=False)


@cache
def ledger_of(topology: str) -> dict[str, Any]:
    return results_of(topology).ledger()


def response_at(check: Published, values: dict[str, Any], field: Any) -> Response:
    (result,) = ledger_of(check.topology)["results"]
    return LedgerResult(result).at(values, field)


def random_values(check: Published, chance: random.Random) -> dict[str, int]:
    """Give a residue for every symbol and for s, with the ties of the source kept."""
    (result,) = ledger_of(check.topology)["results"]
    names = [*ledger_of(check.topology)["symbols"], "s"]
    # Of primitive parts nothing is merged: only the words of a transistor may be defined.
    assert all(word.startswith(("beta", "r_e", "alpha")) for word, _ in result["definitions"])
    values = {name: chance.randrange(1, PRIME) for name in names}
    for name, tie in check.ties:
        values[name] = calculate(tie, values, RESIDUES)
    return values


@pytest.mark.parametrize("name", CHECKS)
def test_published_value_is_what_the_ledger_gives(name):
    check = CHECKS[name]
    ledger = ledger_of(check.topology)
    mp = mpmath.MPContext()
    mp.dps = 40
    if check.kind in ("pole", "zero"):
        found = complex(*ledger["results"][0][f"{check.kind}s"][check.index])
    else:
        field = complex_field(mp)
        values = {name: field.number(value) for name, value in nominal_values(ledger).items()}
        response = response_at(check, values, field)
        if check.kind == "mag":
            found = complex(abs(response.at(mp.mpc(check.s))))
        else:
            found = complex(quantity(check, response, mp.mpc(check.s or 0)))
    assert abs(found - check.expected) <= check.relative * abs(check.expected) + check.absolute


@pytest.mark.parametrize("name", CHECKS)
def test_every_check_on_a_published_circuit_passes(name):
    outcome = results_of(CHECKS[name].topology).outcome
    assert outcome.passed
    for result in outcome.results:
        named = {v.name: v.passed for v in result.verdicts if v.applies}
        assert named.pop("another engine") is None
        assert all(named.values())


@pytest.mark.parametrize("name", [name for name in EXACT if CHECKS[name].kind != "mag"])
def test_published_closed_form_is_the_ledger_s_result_identically(name):
    check = CHECKS[name]
    chance = random.Random(name)
    for _ in range(POINTS):
        values = random_values(check, chance)
        found = quantity(check, response_at(check, values, RESIDUES), values["s"])
        claimed = closed_form(check, values, RESIDUES)
        assert found == claimed
        # The same comparison sees a form that is wrong by one part in a million million.
        assert found != claimed * (10**12 + 1) * pow(10**12, -1, PRIME) % PRIME or found == 0


@pytest.mark.parametrize("name", CENTRES)
def test_published_magnitude_at_the_centre_holds_for_all_values(name):
    check = CHECKS[name]
    mp = mpmath.MPContext()
    mp.dps = 50
    field = complex_field(mp)
    chance = random.Random(name)
    for _ in range(POINTS):
        values = {
            symbol: mp.mpc(chance.randint(1, 10**6)) / 1000
            for symbol in ledger_of(check.topology)["symbols"]
        }
        for symbol, tie in check.ties:
            values[symbol] = calculate(tie, values, field)
        response = response_at(check, values, field)
        centre = calculate(CENTRES[name], values, field)
        claimed = closed_form(check, values, field)
        assert abs(abs(response.at(mp.j * centre)) - claimed) < mp.mpf(10) ** -40
        assert abs(abs(response.at(mp.j * centre * (1 + mp.mpf(10) ** -6))) - claimed) > mp.mpf(10) ** -20


def test_closed_forms_name_symbols_of_their_circuits_alone():
    for check in CHECKS.values():
        known = {*ledger_of(check.topology)["symbols"], "s", "pi"} | {
            name for name, _ in check.definitions
        }
        assert names_in(check.closed_form) <= known, check.id


def ladder(sections: int) -> str:
    """Give an RC ladder of equal sections, driven at one end and open at the other."""
    parts = []
    for index in range(1, sections + 1):
        parts.append(f'R_{index} = {{ resistor = "1k", between = ["n{index - 1}", "n{index}"] }}')
        parts.append(f'C_{index} = {{ capacitor = "1n", between = ["n{index}", "gnd"] }}')
    return "\n".join(
        [
            '[sheet]\ntitle = "RC ladder"',
            '[drives]\nV_s = { voltage = ["n0", "gnd"] }',
            "[parts]",
            *parts,
            f'[find.A_v]\nvoltage = "n{sections}"\nper = "V_s"',
        ]
    )


# The number of terms is the Fibonacci number F(2n+1); that of s^k has C(n+k, 2k) terms.
# Source: A. M. Morgan-Voyce, "Ladder-network analysis using Fibonacci numbers", IRE Trans. Circuit
# Theory CT-6 (Sept. 1959) 321-322; from memory.
@pytest.mark.parametrize(("sections", "terms"), [(1, 2), (2, 5), (3, 13), (4, 34), (5, 89), (6, 233)])
def test_denominator_of_a_ladder_has_a_fibonacci_number_of_terms(sections, terms):
    (result,) = ledger_of(ladder(sections))["results"]
    assert result["gain"]["exact"] == "1"
    assert result["numerator"] == ["1"]
    counts = [text.count(" + ") + 1 for text in result["denominator"]]
    assert counts == [comb(sections + k, 2 * k) for k in range(sections + 1)]
    assert sum(counts) == terms
    # Each term stands with the factor one: at ones the polynomial is the number of its terms.
    ones = dict.fromkeys(ledger_of(ladder(sections))["symbols"], 1)
    assert [calculate(text, ones, RESIDUES) for text in result["denominator"]] == counts
