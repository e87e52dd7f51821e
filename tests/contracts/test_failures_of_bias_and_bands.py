"""What fails at the operating point or in one band fails the sheet, and the first page says what."""

from __future__ import annotations

import json
import re
from dataclasses import replace
from functools import partial

import pytest
from biased_stages import SMALL, in_all_bands

import derive.batch
import derive.pipeline
from derive.bias.solve import operating_point
from derive.cli import main
from derive.expressions.tree import Equation, Name, Sum
from derive.pipeline import derive as derived
from derive.reading.read import parse
from derive.sheet.compose import compose

# With a large collector resistor the transistor would need a collector below its emitter.
SATURATED = SMALL.replace('R_C = { resistor = "4k7"', 'R_C = { resistor = "22k"')
FEW = ["--only", "html,json", "--quiet"]


@pytest.fixture(autouse=True)
def alone(monkeypatch):
    """Work without the other engine, which takes its time and is not what is looked at."""
    monkeypatch.setattr(derive.batch, "derive", partial(derive.pipeline.derive, other_engine=False))


def on_file(tmp_path, text=SMALL, name="stage"):
    file = tmp_path / f"{name}.toml"
    file.write_text(text, encoding="utf-8")
    return str(file)


def newton_differs(point):
    check = replace(point.newton[0], difference=0.9, passed=False)
    return replace(point, newton=(check, *point.newton[1:]))


def newton_does_not_end(point):
    check = replace(point.newton[0], current=float("nan"), difference=float("nan"), passed=False)
    return replace(point, newton=(check, *point.newton[1:]))


def region_fails(point):
    region = replace(point.regions[0], passed=False)
    return replace(point, regions=(region, *point.regions[1:]))


def step_is_broken(point):
    found = replace(point.derivations[0], broken=((2, "does not follow"),))
    return replace(point, derivations=(found, *point.derivations[1:]))


FAILURES = {
    "operating point: current of Q1 by Newton's method": newton_differs,
    "operating point: Q1 is out of its region": region_fails,
    "operating point: proof of I_C": step_is_broken,
}
# The same in the terminal, which has its own words.
SHOWN = {
    newton_differs: "✗ Q1: by Newton's method",
    region_fails: "✗ Q1: V_CE",
    step_is_broken: "✗ I_C, step 2: does not follow",
}


def spoil(monkeypatch, change):
    monkeypatch.setattr(
        derive.pipeline, "operating_point", lambda topology: change(operating_point(topology))
    )


@pytest.mark.parametrize("words", FAILURES)
def test_a_failure_at_the_operating_point_ends_the_sheet_with_status_1_and_is_named_on_its_first_page(
    words, tmp_path, monkeypatch, capsys
):
    file = on_file(tmp_path)
    spoil(monkeypatch, FAILURES[words])
    assert main(["sheet", file, "--out", str(tmp_path), *FEW]) == 1
    out, err = capsys.readouterr()
    assert err == ""
    assert "FAILED" in out
    head = (tmp_path / "stage.html").read_text(encoding="utf-8").partition("<section")[0]
    assert words.replace("'", "&#39;") in head or words in head
    assert "not to be relied on" in head
    outcome = derived(parse(SMALL, "stage.toml"), other_engine=False).outcome
    assert outcome.passed is False
    assert all(result.passed for result in outcome.results)
    assert [failure.startswith(words) for failure in compose(outcome, "stage").failures] == [True]


@pytest.mark.parametrize("words", FAILURES)
def test_a_failure_at_the_operating_point_ends_show_with_status_1(words, tmp_path, monkeypatch, capsys):
    file = on_file(tmp_path)
    assert main(["show", file, "--quiet"]) == 0
    right = capsys.readouterr().out
    assert "✗" not in right
    spoil(monkeypatch, FAILURES[words])
    assert main(["show", file, "--quiet"]) == 1
    assert SHOWN[FAILURES[words]] in capsys.readouterr().out


def test_newton_s_method_that_does_not_end_is_said(tmp_path, monkeypatch, capsys):
    file = on_file(tmp_path)
    spoil(monkeypatch, newton_does_not_end)
    assert main(["show", file, "--quiet"]) == 1
    assert not re.search(r"\bnan\b", capsys.readouterr().out.lower())
    assert main(["sheet", file, "--out", str(tmp_path), *FEW]) == 1
    page = (tmp_path / "stage.html").read_text(encoding="utf-8")
    assert "did not converge" in page
    assert ">nan" not in page.lower()


def test_a_transistor_that_saturates_fails_its_region_with_its_voltages(tmp_path, capsys):
    file = on_file(tmp_path, SATURATED)
    assert main(["show", file, "--quiet"]) == 1
    shown = capsys.readouterr().out
    (line,) = [line for line in shown.splitlines() if "✗ Q1: V_CE" in line]
    assert "−" in line
    assert main(["sheet", file, "--out", str(tmp_path), *FEW]) == 1
    head = (tmp_path / "stage.html").read_text(encoding="utf-8").partition("<section")[0]
    assert "Q1 is out of its region (V_CE = −" in head


def test_a_step_of_the_bias_that_is_wrong_is_found_and_fails_the_sheet(tmp_path, monkeypatch, capsys):
    import derive.bias.currents as currents

    right = currents.needed

    def slipped(steps):
        *before, last = right(steps)
        wrong = Equation(last.equation.left, Sum((last.equation.right, Name("V_BE"))))
        return (*before, replace(last, equation=wrong))

    monkeypatch.setattr(currents, "needed", slipped)
    monkeypatch.setattr(currents, "with_divider", lambda *_: None)
    file = on_file(tmp_path)
    assert main(["show", file, "--quiet"]) == 1
    assert "✗ I_C, step" in capsys.readouterr().out
    assert main(["sheet", file, "--out", str(tmp_path), *FEW]) == 1
    head = (tmp_path / "stage.html").read_text(encoding="utf-8").partition("<section")[0]
    assert "operating point: proof of I_C" in head


@pytest.mark.parametrize("band", ["low", "mid", "high"])
def test_a_failure_in_one_band_is_named_with_its_band(band, tmp_path, monkeypatch, capsys):
    right = derive.pipeline.solve

    def slipped(circuit, find, **kept):
        solution = right(circuit, find, **kept)
        if circuit.band != band:
            return solution
        gain = Sum((solution.form.gain, solution.form.gain))
        return replace(solution, form=replace(solution.form, gain=gain))

    monkeypatch.setattr(derive.pipeline, "solve", slipped)
    file = on_file(tmp_path)
    assert main(["sheet", file, "--out", str(tmp_path), *FEW]) == 1
    capsys.readouterr()
    head = (tmp_path / "stage.html").read_text(encoding="utf-8").partition("<section")[0]
    outcome = derived(parse(SMALL, "stage.toml"), other_engine=False).outcome
    failures = compose(outcome, "stage").failures
    assert failures
    assert all(band in failure for failure in failures)
    assert all(failure in head for failure in failures)
    assert main(["show", file, "--band", band, "--quiet"]) == 1
    others = [other for other in ("low", "mid", "high") if other != band]
    assert [main(["show", file, "--band", other, "--quiet"]) for other in others] == [0, 0]


@pytest.mark.parametrize("band", ["low", "mid", "high"])
def test_show_gives_the_band_that_was_asked_for_alone(band, tmp_path, capsys):
    file = on_file(tmp_path)
    assert main(["show", file, "--quiet"]) == 0
    every = capsys.readouterr().out
    assert main(["show", file, "--band", band, "--quiet"]) == 0
    one = capsys.readouterr().out
    assert len(one) < len(every)
    results = derived(parse(SMALL, "stage.toml"), other_engine=False, band=band)
    assert {result["band"] for result in results.ledger()["results"]} == {band}
    assert f"{band} band" in one
    assert not any(f"A_v, {other} band" in one for other in ("low", "mid", "high") if other != band)


@pytest.mark.parametrize("band", ["nonsense", "full", "", "MID", "low,mid"])
def test_a_band_that_is_not_there_is_answered_with_those_that_are(band, tmp_path, capsys):
    file = on_file(tmp_path)
    assert main(["show", file, "--band", band]) == 2
    out, err = capsys.readouterr()
    assert out == ""
    assert err.count("\n") == 1
    assert f'"{band}"' in err
    assert "low, mid, high" in err
    assert "Traceback" not in err


def test_a_sheet_has_the_results_of_every_band(tmp_path, capsys):
    file = on_file(tmp_path, in_all_bands(SMALL))
    assert main(["sheet", file, "--out", str(tmp_path), *FEW]) == 0
    out, _ = capsys.readouterr()
    data = json.loads((tmp_path / "stage.json").read_text(encoding="utf-8"))
    bands = [result["band"] for result in data["results"]]
    assert bands == ["low", "mid", "high", "full"]
    page = (tmp_path / "stage.html").read_text(encoding="utf-8")
    for band in ("low", "mid", "high", "full"):
        assert f"{band} band" in page
        assert band in out
    assert "operating point" in out


def test_two_runs_write_the_same_bytes(tmp_path, capsys):
    written = []
    for turn in ("a", "b"):
        file = on_file(tmp_path)
        out = tmp_path / turn
        assert main(["sheet", file, "--out", str(out), *FEW]) == 0
        written.append({path.name: path.read_bytes() for path in sorted(out.iterdir())})
        shown = capsys.readouterr().out
        written[-1]["shown"] = shown.replace(str(out), "").encode()
    assert sorted(written[0]) == ["shown", "stage.html", "stage.json"]
    assert written[0] == written[1]
