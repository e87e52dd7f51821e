"""Short forms on the sheet, in the ledger and in the terminal."""

from __future__ import annotations

import json
from dataclasses import replace

import pytest

from derive.approximate.questions import with_short_forms
from derive.cli import main
from derive.errors import InputError
from derive.pipeline import derive
from derive.reading.read import parse
from derive.sheet.plain import plain_outcome

STAGE = """
[sheet]
title = "Common emitter"
[drives]
V_s = { voltage = ["in", "gnd"] }
[parts]
R_S = { resistor = "600 Ω", between = ["in", "b"] }
r_pi = { resistor = "2k5", between = ["b", "gnd"] }
g_m = { transconductance = "40 mS", flows = ["out", "gnd"], senses = ["b", "gnd"] }
r_o = { resistor = "2M", between = ["out", "gnd"] }
R_C = { resistor = "4k7", between = ["out", "gnd"] }
C_L = { capacitor = "100p", between = ["out", "gnd"] }
[find.A_v]
voltage = "out"
per = "V_s"
"""
BUDGET = '[budget]\nsimplify = true\nrange = ["1 kHz", "1 MHz"]\n'


def results_of(text):
    return derive(parse(text, "stage.toml"), other_engine=False)


def test_without_being_asked_for_there_are_no_short_forms():
    results = results_of(STAGE)
    assert "simplified" not in results.ledger()["results"][0]
    assert "Short forms" not in plain_outcome(results.outcome)


def test_the_budget_asks_for_short_forms_and_the_ledger_holds_them():
    results = results_of(STAGE + BUDGET)
    assert results.passed
    entry = results.ledger()["results"][0]
    answers = {answer["question"]: answer for answer in entry["simplified"]}
    assert set(answers) == {
        *("low-frequency gain", "dominant pole", "unity-gain frequency", "second pole"),
        "response in a band",
    }
    gain = answers["low-frequency gain"]
    assert gain["status"] == "found"
    assert [made["that"] for made in gain["assumptions"]] == ["r_o -> inf"]
    assert all(made["by"] == "tool" for made in gain["assumptions"])
    # −β·R_C/(R_S + r_π), and with r_o beside R_C; β = 100.
    short = -100 * 4700 / 3100
    assert gain["value"] == pytest.approx(short, rel=1e-5)
    assert gain["errors"]["relative"] == pytest.approx(4700 / 2e6, rel=1e-4)
    assert answers["second pole"]["status"] == "refused"
    assert answers["second pole"]["form"] is None
    assert answers["response in a band"]["range_hz"] == [1000, 1000000]
    assert json.loads(json.dumps(entry)) == entry


def test_the_exact_result_is_the_same_with_and_without_short_forms():
    one, other = (results_of(text).ledger()["results"][0] for text in (STAGE, STAGE + BUDGET))
    other.pop("simplified")
    # The road that judges the short forms is the one that differs.
    for entry in (one, other):
        judged = [check for check in entry["checks"] if check["name"] == "short forms"]
        assert [check["passed"] for check in judged] == [None if entry is one else True]
        entry["checks"] = [check for check in entry["checks"] if check not in judged]
    assert one == other


def test_the_terminal_shows_the_form_and_what_it_is_off_by(tmp_path, capsys):
    file = tmp_path / "stage.toml"
    file.write_text(STAGE, encoding="utf-8")
    assert main(["show", str(file), "--simplify", "--quiet"]) == 0
    shown = capsys.readouterr().out
    assert "Short forms" in shown
    assert "K ≈ " in shown
    assert "off by +0.235 %" in shown
    assert "no short form; the response has one pole" in shown
    assert main(["show", str(file), "--quiet"]) == 0
    assert "Short forms" not in capsys.readouterr().out


def test_a_sheet_shows_short_forms_with_their_assumptions(tmp_path):
    file = tmp_path / "stage.toml"
    file.write_text(STAGE, encoding="utf-8")
    folder = str(tmp_path / "sheets")
    arguments = ["sheet", str(file), "--out", folder, "--only", "html,json", "--simplify", "--quiet"]
    assert main(arguments) == 0
    page = (tmp_path / "sheets" / "stage.html").read_text(encoding="utf-8")
    assert "Short forms" in page
    assert "r_o -&gt; inf" in page
    ledger = json.loads((tmp_path / "sheets" / "stage.json").read_text(encoding="utf-8"))
    assert ledger["results"][0]["simplified"]


def test_an_open_value_leaves_a_sheet_that_says_why_there_is_no_short_form():
    results = results_of((STAGE + BUDGET).replace('"2M"', '"?"'))
    answers = results.outcome.results[0].solution.simplified
    assert answers
    assert all(answer.status == "refused" for answer in answers)
    assert "left open" in answers[0].reason
    assert "left open" in plain_outcome(results.outcome)


def test_simplify_wants_true_or_false():
    with pytest.raises(InputError, match="true or false"):
        parse(STAGE + '[budget]\nsimplify = "yes"\n', "stage.toml")


def test_asking_for_short_forms_changes_nothing_else_of_a_topology():
    topology = parse(STAGE, "stage.toml")
    asked = with_short_forms(topology)
    assert asked.budget.simplify
    assert replace(asked, budget=topology.budget) == topology
