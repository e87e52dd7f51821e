"""A derivation that must hold: its checks, steps, ledger and sheet, and its result as an identity."""

from __future__ import annotations

import random
from typing import Any

from ledger_arithmetic import PRIME, RESIDUES, LedgerResult, calculate, modular_root
from ledger_contract import check_ledger

from derive.pipeline import derive
from derive.reading.read import parse
from derive.sheet.compose import compose

SHEET = '[sheet]\ntitle = "Stage"\n'
V_S = 'V_s = { voltage = ["in", "gnd"] }'
POINTS = 3


def stage(parts: str, *finds: str, drives: str = V_S) -> str:
    """Give a topology file; a find is "NAME: quantity = ..., per = ..."."""
    tables = []
    for find in finds:
        name, _, entries = find.partition(": ")
        tables.append(f"[find.{name}]\n" + entries.replace("; ", "\n"))
    head = f"[drives]\n{drives}\n" if drives else ""
    return f"{SHEET}{head}[parts]\n{parts}\n" + "\n".join(tables) + "\n"


GAIN = 'A_v: voltage = "out"; per = "V_s"'


def held(text: str, *, undecided: tuple[str, ...] = ()) -> dict[str, Any]:
    """Derive, and assert that checks, steps, ledger and sheet all hold; give the results by name."""
    outcome = derive(parse(text, "stage.toml"), other_engine=False).outcome
    for result in outcome.results:
        assert result.broken_steps == ()
        for verdict in result.verdicts:
            if not verdict.applies:
                assert verdict.passed is None, verdict
            elif verdict.name != "another engine" and verdict.name not in undecided:
                assert verdict.passed is True, verdict
    sheet = compose(outcome, "stage")
    assert sheet.passed
    assert sheet.failures == ()
    data = check_ledger(sheet.ledger_text)
    return {"symbols": data["symbols"]} | {result["find"]: result for result in data["results"]}


def same(results: dict[str, Any], find: str, form: str, ties: tuple[str, ...] = ()) -> None:
    """Assert that a result is a form in s and the symbols, for all values that keep the ties."""
    chance = random.Random(form)
    for _ in range(POINTS):
        values = {}
        for name in [*results["symbols"], "s"]:
            root = chance.randrange(1, PRIME)
            values[name] = root * root % PRIME if name.startswith("L_") else root
        for tie in ties:
            name, _, value = tie.partition(" = ")
            values[name] = calculate(value, values, RESIDUES)
        found = LedgerResult(results[find]).at(values, RESIDUES).at(values["s"])
        if "k_1" in values:
            values["M"] = values["k_1"] * modular_root(values["L_1"] * values["L_2"] % PRIME) % PRIME
        assert found == calculate(form, values, RESIDUES)


RC = (
    'R_1 = { resistor = "1k", between = ["in", "out"] }\n'
    'C_1 = { capacitor = "1n", between = ["out", "gnd"] }'
)
