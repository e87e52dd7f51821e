"""Published results of transistor circuits, with the circuits written with devices."""

from __future__ import annotations

import random
import tomllib
from dataclasses import dataclass
from functools import cache
from pathlib import Path
from typing import Any

import mpmath
import pytest
from ledger_arithmetic import (
    PRIME,
    RESIDUES,
    LedgerResult,
    calculate,
    complex_field,
    names_in,
    nominal_values,
)
from published_checks import Published, closed_form, published, quantity

from derive.pipeline import Results, derive
from derive.reading.read import parse

CHECKS = {check.id: check for check in published()}
POINTS = 3
SOURCES = ("transconductance", "voltage_gain", "current_gain", "transresistance")
DEVICES = ("bipolar", "mosfet", "jfet")


@dataclass(frozen=True)
class Stage:
    """A circuit with devices, and how the published symbols are named in it."""

    text: str
    renamed: dict[str, str]


def table() -> dict[str, Any]:
    with (Path(__file__).parent / "with_devices.toml").open("rb") as stream:
        return tomllib.load(stream)


def written(circuit: dict[str, Any]) -> Stage:
    """Write the topology; every band's parts are kept, so that the published form applies."""
    drives = f"[drives]\n{circuit['drives'].strip()}\n" if "drives" in circuit else ""
    more = circuit.get("more", "").strip()
    per = f'per = "{circuit["per"]}"\n' if "per" in circuit else ""
    if "weights" in circuit:
        weights = ", ".join(f'{name} = "{value}"' for name, value in circuit["weights"].items())
        per = f"per = {{ {weights} }}\n"
    text = (
        f'bands = ["full"]\n[sheet]\ntitle = "{circuit["name"]}"\n{drives}'
        f"[parts]\n{circuit['parts'].strip()}\n{more}\n[find.X]\n{circuit['find']}\n{per}"
    )
    return Stage(text, circuit["renamed"])


ROWS = {
    (check, circuit["name"]): written(circuit)
    for circuit in table()["circuit"]
    for check in circuit["checks"]
}
EXACT = [row for row in ROWS if CHECKS[row[0]].exact]
each = pytest.mark.parametrize("row", ROWS, ids=" in ".join)


@cache
def results_of(text: str) -> Results:
    return derive(parse(text, "stage.toml"), other_engine=False)


@cache
def ledger_of(text: str) -> dict[str, Any]:
    return results_of(text).ledger()


def as_published(stage: Stage, values: dict[str, Any]) -> dict[str, Any]:
    """Give the values under the published names as well."""
    return values | {name: values[own] for name, own in stage.renamed.items() if own in values}


def random_values(check: Published, stage: Stage, chance: random.Random) -> dict[str, int]:
    """Give a residue for every symbol of the circuit and for s, with the ties of the source kept."""
    values = {name: chance.randrange(1, PRIME) for name in [*ledger_of(stage.text)["symbols"], "s"]}
    for name, tie in check.ties:
        known = as_published(stage, values)
        values[stage.renamed.get(name, name)] = calculate(tie, known, RESIDUES)
    return values


def result_of(stage: Stage) -> LedgerResult:
    (result,) = ledger_of(stage.text)["results"]
    assert result["band"] == "full"
    return LedgerResult(result)


@each
def test_every_published_symbol_is_in_the_circuit(row):
    check, stage = CHECKS[row[0]], ROWS[row]
    known = as_published(stage, dict.fromkeys(ledger_of(stage.text)["symbols"], 1))
    assert set(stage.renamed) <= set(known)
    assert names_in(check.closed_form) <= {*known, "s", *(name for name, _ in check.definitions)}
    assert {name for name, _ in check.ties} <= set(known)
    # And of primitive parts that the devices are to replace, none is left.
    assert not any(f"{source} =" in stage.text for source in SOURCES)
    assert any(f"{device} =" in stage.text for device in DEVICES)


@each
def test_published_value_is_what_the_ledger_gives(row):
    check, stage = CHECKS[row[0]], ROWS[row]
    mp = mpmath.MPContext()
    mp.dps = 40
    if check.kind in ("pole", "zero"):
        found = complex(*ledger_of(stage.text)["results"][0][f"{check.kind}s"][check.index])
    else:
        field = complex_field(mp)
        values = {
            name: field.number(value) for name, value in nominal_values(ledger_of(stage.text)).items()
        }
        response = result_of(stage).at(values, field)
        found = complex(quantity(check, response, mp.mpc(check.s or 0)))
    assert abs(found - check.expected) <= check.relative * abs(check.expected) + check.absolute


@each
def test_every_check_on_the_circuit_passes(row):
    outcome = results_of(ROWS[row].text).outcome
    assert outcome.passed
    for result in outcome.results:
        named = {v.name: v.passed for v in result.verdicts if v.applies}
        assert named.pop("another engine") is None
        assert all(named.values()), named


@pytest.mark.parametrize("row", EXACT, ids=" in ".join)
def test_published_closed_form_is_the_ledger_s_result_identically(row):
    check, stage = CHECKS[row[0]], ROWS[row]
    chance = random.Random(row[0])
    for _ in range(POINTS):
        values = random_values(check, stage, chance)
        found = quantity(check, result_of(stage).at(values, RESIDUES), values["s"])
        claimed = closed_form(check, as_published(stage, values), RESIDUES)
        assert found == claimed
        # The same comparison sees a form that is wrong by one part in a million million.
        assert found != claimed * (10**12 + 1) * pow(10**12, -1, PRIME) % PRIME or found == 0


@each
def test_the_response_is_that_of_the_published_circuit_of_primitive_parts(row):
    check, stage = CHECKS[row[0]], ROWS[row]
    primitive = ledger_of(check.topology)
    chance = random.Random(row[0])
    for _ in range(POINTS):
        values = {name: chance.randrange(1, PRIME) for name in [*ledger_of(stage.text)["symbols"], "s"]}
        known = as_published(stage, values)
        assert set(primitive["symbols"]) <= set(known)
        before = LedgerResult(primitive["results"][0]).at(known, RESIDUES).at(values["s"])
        assert result_of(stage).at(values, RESIDUES).at(values["s"]) == before
        for symbol in primitive["symbols"]:
            own = stage.renamed.get(symbol, symbol)
            other = result_of(stage).at(values | {own: values[own] + 1}, RESIDUES).at(values["s"])
            changed = known | {symbol: known[symbol] + 1}
            theirs = LedgerResult(primitive["results"][0]).at(changed, RESIDUES).at(values["s"])
            assert other == theirs


def test_every_published_transistor_circuit_is_in_the_table_or_excused():
    excused = {entry["check"]: entry["why"] for entry in table()["none"]}
    assert all(excused.values())
    with_sources = {
        check.id for check in CHECKS.values() if any(f"{kind} =" in check.topology for kind in SOURCES)
    }
    done = {check for check, _ in ROWS}
    assert not done & set(excused)
    assert with_sources == done | set(excused)
    assert len(done) >= 38
