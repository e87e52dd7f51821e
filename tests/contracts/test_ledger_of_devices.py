"""The ledger of a stage with devices: bands, merged names, and the parameters' origins."""

from __future__ import annotations

import json
import tomllib
from functools import cache

import pytest
from biased_stages import STAGES, in_all_bands
from ledger_arithmetic import RATIONALS, LedgerResult, calculate, names_in, nominal_values
from ledger_contract import check_ledger

from derive.pipeline import Results, derive
from derive.reading.read import parse
from derive.sheet.ledger import ledger_text

BANDS = ("low", "mid", "high", "full")
PARASITIC = ("C_pi", "C_mu", "C_gs", "C_gd")


@cache
def worked(name: str) -> Results:
    return derive(parse(in_all_bands(STAGES[name]), "stage.toml"), other_engine=False)


@cache
def written(name: str) -> str:
    return ledger_text(worked(name).outcome)


def results(name, find=None):
    data = json.loads(written(name))
    return {
        result["band"]: result for result in data["results"] if find is None or result["find"] == find
    }


@pytest.mark.parametrize("name", STAGES)
def test_every_stage_passes_in_every_band(name):
    # The stages are worked once, in this file; what `show` prints is this text.
    assert worked(name).passed
    shown = str(worked(name))
    assert "✗" not in shown
    for band in BANDS:
        assert f"{band} band" in shown


@pytest.mark.parametrize("name", STAGES)
def test_ledger_keeps_its_contract_in_every_band(name):
    data = check_ledger(written(name))
    assert [band for band in BANDS if band in {r["band"] for r in data["results"]}] == list(BANDS)
    parts = tomllib.loads(data["topology"]["text"])["parts"]
    for symbol in data["symbols"].values():
        assert symbol["origin"].removeprefix("part ") in parts


@pytest.mark.parametrize("name", STAGES)
def test_what_a_band_took_out_stands_in_none_of_its_expressions(name):
    parts = tomllib.loads(STAGES[name])["parts"]
    low = {part for part, entries in parts.items() if entries.get("role") in ("coupling", "bypass")}
    symbols = json.loads(written(name))["symbols"]
    own = {symbol for symbol in symbols if symbol.rstrip("12").startswith(PARASITIC)}
    gone = {"low": own, "mid": own | low, "high": low, "full": set()}
    for result in json.loads(written(name))["results"]:
        texts = [result["gain"]["exact"], *result["numerator"], *result["denominator"]]
        texts += [text for _, text in result["definitions"]]
        named = {found for text in texts for found in names_in(text)}
        assert not named & gone[result["band"]]
        if result["band"] == "mid":
            assert result["numerator"] == result["denominator"] == ["1"]
    # And there is something to take out.
    assert own | low or name == "mirror"


def test_merged_names_are_defined_by_parts_and_by_earlier_merged_names():
    result = results("common emitter", "A_v")["mid"]
    symbols = json.loads(written("common emitter"))["symbols"]
    definitions = dict(result["definitions"])
    assert definitions
    assert not set(definitions) & set(symbols)
    text = definitions[min(definitions)]
    assert names_in(text) == {"R_1", "R_2"}
    values = {"R_1": 68000, "R_2": 22000}
    assert calculate(text, values, RATIONALS) == calculate("68000*22000/90000", {}, RATIONALS)
    used = names_in(result["gain"]["exact"])
    assert used & set(definitions)
    assert used <= set(definitions) | set(symbols)


def test_expanded_definitions_give_the_gain_that_is_printed():
    for band, result in results("common emitter", "A_v").items():
        if band in ("mid", "high"):
            data = json.loads(written("common emitter"))
            response = LedgerResult(result).at(nominal_values(data), RATIONALS)
            assert float(response.gain) == pytest.approx(result["gain"]["value"], rel=1e-12)


def test_a_device_s_parameters_are_symbols_with_the_device_as_their_origin():
    symbols = json.loads(written("mirror"))["symbols"]
    assert {name: symbols[name]["origin"] for name in symbols if name.startswith("g_m")} == {
        "g_m1": "part Q1",
        "g_m2": "part Q2",
    }
    one = json.loads(written("common emitter"))["symbols"]
    assert one["g_m"]["unit"] == "S"
    assert one["r_pi"]["unit"] == one["r_o"]["unit"] == "ohm"
    assert one["C_pi"]["unit"] == one["C_mu"]["unit"] == "F"


def test_the_mid_band_gain_is_that_of_the_textbook():
    # Common emitter with 47 Ω of its emitter resistor not bypassed, r_o present: two node equations,
    # solved here by hand for the collector and the emitter.
    data = json.loads(written("common emitter"))
    v = {name: float(value) for name, value in nominal_values(data).items()}
    load = 1 / (1 / v["R_C"] + 1 / v["R_L"])
    g_m, g_pi, g_o, g_e = v["g_m"], 1 / v["r_pi"], 1 / v["r_o"], 1 / v["R_E1"]
    # At the emitter: (g_e + g_pi + g_m + g_o)·e - g_o·c = (g_pi + g_m)·b; at the collector:
    # (1/load + g_o)·c - (g_m + g_o)·e = -g_m·b.
    a11, a12, b1 = g_e + g_pi + g_m + g_o, -g_o, g_pi + g_m
    a21, a22, b2 = -(g_m + g_o), 1 / load + g_o, -g_m
    det = a11 * a22 - a12 * a21
    e, c = (b1 * a22 - a12 * b2) / det, (a11 * b2 - a21 * b1) / det
    into_base = (1 - e) * g_pi
    source = 1 / (1 + v["R_S"] * (into_base + 1 / v["R_1"] + 1 / v["R_2"]))
    assert results("common emitter", "A_v")["mid"]["gain"]["value"] == pytest.approx(c * source, rel=1e-9)


def first(data):
    return next(result for result in data["results"] if result["band"] == "mid")


BREAKS = {
    "a band that is none": lambda data: first(data).update(band="audio"),
    "two results of one band": lambda data: first(data).update(band="low"),
    "bands out of order": lambda data: data["results"].reverse(),
    "a merged name without its definition": lambda data: first(data).update(definitions=[]),
    "a definition by a later name": lambda data: first(data)["definitions"].insert(
        0, ["R_A", first(data)["definitions"][0][0]]
    ),
    "a definition in the user's words": lambda data: first(data)["definitions"][0].__setitem__(
        1, "R_1 || R_2"
    ),
    "a merged name that is a part": lambda data: first(data)["definitions"].append(["R_1", "R_2"]),
    "a parameter of no part": lambda data: data["symbols"]["g_m"].update(origin="the operating point"),
    "a unit of volts": lambda data: data["symbols"]["g_m"].update(unit="V"),
}


@pytest.mark.parametrize("name", BREAKS)
def test_contract_notices(name):
    data = json.loads(written("common emitter"))
    BREAKS[name](data)
    assert json.dumps(data) != json.dumps(json.loads(written("common emitter")))
    with pytest.raises(AssertionError):
        check_ledger(json.dumps(data, ensure_ascii=False, indent=1) + "\n")


def test_a_wrong_definition_would_give_another_gain():
    data = json.loads(written("common emitter"))
    result = first(data)
    values = nominal_values(data)
    right = LedgerResult(result).at(values, RATIONALS).gain
    name, text = result["definitions"][0]
    result["definitions"][0] = [name, f"2*({text})"]
    assert LedgerResult(result).at(values, RATIONALS).gain != right


def test_a_mirror_has_one_response_in_every_band_but_for_its_capacitances():
    found = results("mirror")
    assert found["low"]["gain"] == found["mid"]["gain"]
    assert found["high"]["denominator"] == found["full"]["denominator"]
    assert len(found["high"]["denominator"]) > 1
