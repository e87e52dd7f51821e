"""The ledger's promises, on circuits of every kind; and each promise broken on purpose."""

from __future__ import annotations

import copy
import json
import re
import subprocess
import sys
from pathlib import Path

import pytest
from ledger_contract import check_ledger

from derive.pipeline import derive
from derive.reading.read import parse
from derive.sheet.ledger import ledger_text

HEAD = '[sheet]\ntitle = "Stage"\n[drives]\nV_s = { voltage = ["in", "gnd"] }\n[parts]\n'
VOLTAGE = '[find.A_v]\nvoltage = "out"\nper = "V_s"\n'
LOW_PASS = (
    'R_1 = { resistor = "1k", between = ["in", "out"] }\n'
    'C_1 = { capacitor = "1u", between = ["out", "gnd"] }\n'
)
CIRCUITS = {
    "low-pass": HEAD + LOW_PASS + VOLTAGE + '[find.Z_out]\nimpedance = "out"\n',
    "divider": HEAD + LOW_PASS + 'R_2 = { resistor = "2k", between = ["out", "gnd"] }\n' + VOLTAGE,
    "common collector": HEAD
    + 'R_S = { resistor = "600R", between = ["in", "b"] }\n'
    + 'Q1 = { bipolar = true, base = "b", collector = "gnd", emitter = "out", '
    + 'g_m = "40 mS", r_pi = "4.5k", C_pi = "20 pF" }\n'
    + 'R_E = { resistor = "1k", between = ["out", "gnd"] }\n'
    + VOLTAGE,
    "open value": HEAD + LOW_PASS.replace("1k", "?") + VOLTAGE,
    "series resonance": HEAD
    + 'R_1 = { resistor = "10R", between = ["in", "a"] }\n'
    + 'L_1 = { inductor = "1 mH", between = ["a", "out"] }\n'
    + 'C_1 = { capacitor = "1u", between = ["out", "gnd"] }\n'
    + VOLTAGE
    + '[find.Y]\ncurrent = "L_1"\nper = "V_s"\n',
    "transformer": HEAD
    + 'L_1 = { inductor = "1 mH", between = ["in", "gnd"] }\n'
    + 'L_2 = { inductor = "4 mH", between = ["out", "gnd"] }\n'
    + 'k_1 = { coupling = "0.5", coils = ["L_1", "L_2"] }\n'
    + 'R_L = { resistor = "1k", between = ["out", "gnd"] }\n'
    + VOLTAGE,
    "op amp with everything": HEAD
    + 'R_1 = { resistor = "1k", between = ["in", "m"] }\n'
    + 'R_2 = { resistor = "10k", between = ["m", "out"] }\n'
    + 'U_1 = { opamp = true, output = "out", inputs = ["gnd", "m"], A_0 = "100000", '
    + 'f_unity = "1 MHz", R_in = "1M", R_out = "75R" }\n'
    + VOLTAGE,
    "two equal sections": HEAD
    + 'R_1 = { resistor = "1k", between = ["in", "a"] }\n'
    + 'C_1 = { capacitor = "1n", between = ["a", "gnd"] }\n'
    + 'A_1 = { voltage_gain = "1", output = ["b", "gnd"], senses = ["a", "gnd"] }\n'
    + 'R_2 = { resistor = "1k", between = ["b", "out"] }\n'
    + 'C_2 = { capacitor = "1n", between = ["out", "gnd"] }\n'
    + VOLTAGE,
    "weights": HEAD.replace("[parts]", 'V_t = { voltage = ["b", "gnd"] }\n[parts]')
    + 'R_1 = { resistor = "1k", between = ["in", "out"] }\n'
    + 'R_2 = { resistor = "3k", between = ["b", "out"] }\n'
    + '[find.A_d]\nvoltage = "out"\nper = { V_s = "1/2", V_t = "-1/3" }\n',
    "nothing comes through": HEAD
    + 'R_1 = { resistor = "1k", between = ["in", "gnd"] }\n'
    + 'R_2 = { resistor = "1k", between = ["out", "gnd"] }\n'
    + 'C_2 = { capacitor = "1n", between = ["out", "gnd"] }\n'
    + VOLTAGE,
}


def ledger_of(name: str) -> str:
    return ledger_text(derive(parse(CIRCUITS[name], "stage.toml"), other_engine=False).outcome)


@pytest.mark.parametrize("name", CIRCUITS)
def test_ledger_keeps_its_contract(name):
    data = check_ledger(ledger_of(name))
    assert data["topology"]["text"] == CIRCUITS[name]
    assert data["topology"]["file"] == "stage.toml"


def test_second_order_stage_has_its_conjugate_pair_of_poles():
    data = check_ledger(ledger_of("series resonance"))
    lower, upper = data["results"][0]["poles"]
    # R/2L = 5000 rad/s, 1/LC = 10^9.
    assert sorted([lower, upper]) == [
        [pytest.approx(-5000), pytest.approx(-(975e6**0.5))],
        [pytest.approx(-5000), pytest.approx(975e6**0.5)],
    ]


def test_double_pole_is_listed_twice():
    (result,) = check_ledger(ledger_of("two equal sections"))["results"]
    assert result["poles"] == [[-1e6, 0.0], [-1e6, 0.0]]


def test_zero_response_is_written_as_the_contract_says():
    (result,) = check_ledger(ledger_of("nothing comes through"))["results"]
    assert result["gain"] == {"exact": "0", "value": 0.0}
    assert (result["numerator"], result["denominator"]) == (["1"], ["1"])
    assert (result["zeros"], result["poles"]) == ([], [])


def test_weights_stand_as_exact_text():
    (result,) = check_ledger(ledger_of("weights"))["results"]
    assert result["per"] == {"V_s": "0.5", "V_t": "-1/3"}


def test_a_resistance_that_a_capacitor_sees_its_time_constant_and_the_bandwidth_stand_in_the_ledger():
    gain, impedance = check_ledger(ledger_of("low-pass"))["results"]
    # R = 1 kΩ, C = 1 µF: τ = 1 ms, 1/(2π·τ) = 159.155 Hz.
    (row,) = gain["time_constants"]
    assert row == {
        "part": "C_1",
        "kind": "open-circuit",
        "resistance": "R_1",
        "readable": "R_1",
        "seconds": pytest.approx(1e-3),
        "share": pytest.approx(1.0),
    }
    assert impedance["time_constants"] == [row]
    assert gain["bandwidth"] == {"low_hz": None, "high_hz": pytest.approx(159.15494309)}
    assert gain["readable"] == {"gain": "1", "numerator": ["1"], "denominator": ["1", "R_1*C_1"]}


def test_what_is_read_uses_parallel_parts():
    # With the drive at zero R_1 and R_2 of this divider are in parallel for the capacitor.
    (result,) = check_ledger(ledger_of("divider"))["results"]
    (row,) = result["time_constants"]
    assert row["readable"] == "R_1 || R_2"
    assert row["resistance"] == "R_1*R_2/(R_1 + R_2)"


def test_words_of_a_transistor_are_defined_before_they_are_used():
    data = check_ledger(ledger_of("common collector"))
    result = next(result for result in data["results"] if result["band"] == "high")
    assert ["beta", "g_m*r_pi"] in result["definitions"]
    used = " ".join([result["readable"]["gain"], *result["readable"]["denominator"]])
    assert re.search(r"\bbeta\b", used)


def test_open_value_is_null_and_so_is_the_gain_where_it_counts():
    data = check_ledger(ledger_of("open value"))
    assert data["symbols"]["R_1"]["value"] is None
    assert data["results"][0]["poles"] == []


def test_numbers_of_a_result_with_an_open_value_are_null_and_its_forms_are_there():
    (result,) = check_ledger(ledger_of("open value"))["results"]
    assert result["bandwidth"] == {"low_hz": None, "high_hz": None}
    assert result["estimates"] == []
    assert [(row["readable"], row["seconds"]) for row in result["time_constants"]] == [("R_1", None)]
    assert result["readable"]["denominator"] == ["1", "R_1*C_1"]


def test_impedance_is_per_nothing():
    data = check_ledger(ledger_of("low-pass"))
    assert [result["per"] for result in data["results"]] == ["V_s", None]


SCRIPT = (
    "import sys; from derive.pipeline import derive; from derive.sheet.ledger import ledger_text; "
    "from derive.reading.read import parse; "
    "topology = parse(sys.stdin.read(), 'stage.toml'); "
    "sys.stdout.write(ledger_text(derive(topology, other_engine=False).outcome))"
)


@pytest.mark.parametrize("name", ["op amp with everything", "weights"])
def test_ledger_is_the_same_to_the_byte_whatever_the_order_of_hashes(name):
    written = []
    for seed in ("1", "2"):
        run = subprocess.run(
            [sys.executable, "-c", SCRIPT],
            input=CIRCUITS[name].encode(),
            env={"PYTHONHASHSEED": seed, "PYTHONPATH": str(Path(__file__).parents[2])},
            capture_output=True,
            check=True,
        )
        written.append(run.stdout.decode())
    assert written[0] == written[1] == ledger_of(name)


def first(data):
    return data["results"][0]


def row(data):
    return first(data)["time_constants"][0]


BREAKS = {
    "a decimal in an expression": lambda data: first(data)["gain"].update(exact="0.5"),
    "a name that nothing defines": lambda data: first(data)["gain"].update(exact="R_9"),
    "s within a coefficient": lambda data: first(data)["denominator"].append("s*C_1"),
    "the user's parallel sign": lambda data: first(data)["gain"].update(exact="R_1 || R_1"),
    "a denominator that does not begin with one": lambda data: first(data)["denominator"].insert(0, "2"),
    "a key out of its place": lambda data: first(data).update(per=first(data).pop("per")),
    "a pole that is none": lambda data: first(data)["poles"][0].__setitem__(0, -999.0),
    "a pole too many": lambda data: first(data)["poles"].append([-1000.0, 0.0]),
    "half of a conjugate pair": lambda data: first(data)["poles"][0].__setitem__(1, 1e-9),
    "a value that is a float": lambda data: data["symbols"]["R_1"].update(value="1e+3x"),
    "a unit of nothing": lambda data: data["symbols"]["R_1"].update(unit="kohm"),
    "another text than the digest's": lambda data: data["topology"].update(text="[sheet]"),
    "a readable gain that is another": lambda data: first(data)["readable"].update(gain="R_1/R_1*2"),
    "a readable name that nothing defines": lambda data: first(data)["readable"].update(gain="beta/beta"),
    "a readable coefficient too few": lambda data: first(data)["readable"]["denominator"].pop(),
    "a resistance read as another": lambda data: row(data).update(readable="R_1 || R_1"),
    "a resistance that is read and not given": lambda data: row(data).update(resistance=None),
    "a time constant of another part": lambda data: row(data).update(seconds=1.001e-3),
    "a kind of time constant that there is not": lambda data: row(data).update(kind="open"),
    "a bandwidth that is not 3 dB down": lambda data: first(data)["bandwidth"].update(high_hz=159.2),
    "a bandwidth on the wrong side": lambda data: first(data)["bandwidth"].update(
        low_hz=first(data)["bandwidth"]["high_hz"], high_hz=None
    ),
    "an error that is not the estimate's": lambda data: first(data)["estimates"][0].update(error=0.5),
    "a step without its number": lambda data: first(data)["steps"][1].update(n=7),
    "a step that is not proved": lambda data: first(data)["steps"][1]["proof"].update(passed=False),
    "a check that failed": lambda data: first(data)["checks"][0].update(passed=False),
}


@pytest.mark.parametrize("name", BREAKS)
def test_contract_notices(name):
    data = json.loads(ledger_of("low-pass"))
    broken = copy.deepcopy(data)
    BREAKS[name](broken)
    assert json.dumps(broken) != json.dumps(data)
    with pytest.raises(AssertionError):
        check_ledger(json.dumps(broken, ensure_ascii=False, indent=1) + "\n")
