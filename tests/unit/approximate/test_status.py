"""When an assumption holds, fails at a corner, or fails, and that a failed one fails the sheet."""

from __future__ import annotations

import json

import pytest
from assumed import registers_of

from derive.cli import main
from derive.pipeline import derive
from derive.reading.read import parse

DIVIDER = """[sheet]
title = "Divider"
[drives]
V_s = {{ voltage = ["in", "gnd"] }}
[parts]
R_1 = {{ resistor = "1k", between = ["in", "out"], tol = "10 %" }}
R_2 = {{ resistor = "{r_2}", between = ["out", "gnd"], tol = "10 %" }}
[find.A]
voltage = "out"
per = "V_s"
[budget]
gain = "{limit}"
[[assume]]
that = "{that}"
because = "R_2 is large"
"""


def divider(r_2="100k", limit="2 %", that="R_2 >> R_1"):
    return DIVIDER.format(r_2=r_2, limit=limit, that=that)


def only_entry(text):
    (register,) = registers_of(text)
    (entry,) = register.entries
    return entry


def test_an_assumption_within_its_limits_holds():
    entry = only_entry(divider())
    # R_2/(R_1 + R_2) becomes 1.
    assert entry.together.gain == pytest.approx(0.01)
    assert entry.status == "holds"
    assert entry.worst.gain == pytest.approx(1.1 / 0.9 / 100)


def test_one_that_is_false_at_the_nominal_values_fails():
    entry = only_entry(divider("20k"))
    assert entry.together.gain == pytest.approx(0.05)
    assert entry.status == "fails"
    assert "+5 %" in entry.reason
    assert "limit 2 %" in entry.reason


def test_one_that_is_true_at_nominal_and_false_at_a_corner_says_which():
    entry = only_entry(divider("55k"))
    assert abs(entry.together.gain) < 0.02
    assert entry.worst.gain == pytest.approx(1.1 / 0.9 / 55)
    assert entry.status == "fails at a corner"
    assert set(entry.worst.at) == {"R_1 +10 %", "R_2 −10 %"}
    assert "R_1 +10 %" in entry.reason


def test_the_limit_is_the_users():
    wide = 'gain = "{}"\nmagnitude = "9 dB"'
    for limit, status in (("6 %", "fails at a corner"), ("7 %", "holds")):
        text = divider("20k", limit).replace(f'gain = "{limit}"', wide.format(limit))
        assert only_entry(text).status == status
    # 0.5 dB is the limit of the magnitude where none is stated: 6.1 % is 0.515 dB.
    assert only_entry(divider("20k", "7 %")).status == "fails at a corner"
    assert only_entry(divider("100k", "0.5 %")).status == "fails"


def test_a_smaller_term_that_is_none_fails_whatever_it_costs():
    entry = only_entry(divider("500R", "900 %"))
    assert entry.ratio == pytest.approx(2)
    assert entry.status == "fails"
    assert "2 times the larger" in entry.reason


def test_a_smaller_term_that_is_none_at_a_corner_fails_there():
    text = divider("1.1k", "900 %").replace('gain = "900 %"', 'gain = "900 %"\nmagnitude = "90 dB"')
    entry = only_entry(text)
    assert entry.status == "fails at a corner"
    assert entry.worst.ratio == pytest.approx(1.1 / 0.9 / 1.1)


def test_matched_parts_are_tied_and_the_mismatch_is_the_ratio():
    entry = only_entry(divider("1k", "12 %", "R_2 = R_1"))
    assert entry.ratio == 0
    assert entry.together.gain == 0
    assert entry.worst.ratio == pytest.approx(1.1 / 0.9 - 1)
    # Tied parts give 1/2; the corner gives 0.9/2 and 1.1/2.
    assert entry.worst.gain == pytest.approx(0.5 / 0.45 - 1)


def test_the_price_together_may_break_a_limit_that_each_keeps_alone():
    text = divider("100k", "1.5 %").replace('tol = "10 %"', 'tol = "1 %"')
    text = text.replace(
        "[find.A]", 'R_3 = { resistor = "100k", between = ["out", "gnd"] }\n[find.A]'
    ).replace("[[assume]]", '[[assume]]\nthat = "R_3 -> inf"\n[[assume]]')
    (register,) = registers_of(text)
    first, second = register.entries
    assert first.status == "holds"
    assert second.status == "fails"
    assert second.together.gain == pytest.approx(0.02)
    assert abs(second.alone.gain) < 0.015
    assert second.reason.startswith("with those before it")


def test_an_open_value_leaves_an_assumption_unpriced():
    text = divider("?").replace(', tol = "10 %" }', " }")
    entry = only_entry(text)
    assert entry.status == "not checked"
    assert entry.together is None
    assert derive(parse(text, "d.toml"), other_engine=False).passed


def test_with_many_tolerances_the_corners_are_chosen_and_said():
    lines = "\n".join(
        f'R_{k} = {{ resistor = "1k", between = ["{"in" if k == 10 else f"n{k - 1}"}", '
        f'"{"out" if k == 19 else f"n{k}"}"], tol = "1 %" }}'
        for k in range(10, 20)
    )
    text = divider("1M").replace("[find.A]", f"{lines}\n[find.A]")
    (register,) = registers_of(text)
    assert "256 corners of those 8 of the 12 toleranced parts that matter most" in register.corners


@pytest.mark.parametrize(("r_2", "status"), [("100k", 0), ("55k", 1), ("20k", 1)])
def test_a_failed_assumption_fails_the_sheet(tmp_path, r_2, status, capsys):
    path = tmp_path / "divider.toml"
    path.write_text(divider(r_2), encoding="utf-8")
    command = ["sheet", str(path), "--out", str(tmp_path / "out"), "--only", "json", "--quiet"]
    assert main(command) == status
    said = capsys.readouterr().out
    assert ("assumption 1 (R_2 >> R_1)" in said) == bool(status)
    (found,) = json.loads((tmp_path / "out" / "divider.json").read_text("utf-8"))["results"]
    (entry,) = found["approximations"]
    assert entry["that"] == "R_2 >> R_1"
    assert entry["because"] == "R_2 is large"
    assert entry["by"] == "user"
    assert entry["gain"] == {"exact": "1", "value": 1.0}
    assert entry["power_of_s"] == 0
    assert entry["numerator"] == entry["denominator"] == ["1"]
    assert entry["status"] == {"100k": "holds", "55k": "fails at a corner", "20k": "fails"}[r_2]
    assert found["gain"]["exact"] == "R_2/(R_1 + R_2)"


def test_an_assumption_that_unbalances_a_bridge_has_no_price_and_fails():
    lines = "\n".join(
        f'{name} = {{ resistor = "1k", between = ["{one}", "{other}"] }}'
        for name, one, other in (
            ("R_1", "in", "a"),
            ("R_2", "a", "gnd"),
            ("R_3", "in", "b"),
            ("R_4", "b", "gnd"),
        )
    )
    text = f"""[sheet]
title = "Bridge"
[drives]
V_s = {{ voltage = ["in", "gnd"] }}
[parts]
{lines}
[find.A]
voltage = ["a", "b"]
per = "V_s"
[[assume]]
that = "R_2 >> R_1"
"""
    entry = only_entry(text)
    assert entry.status == "fails"
    assert "zero" in entry.reason
    assert not derive(parse(text, "bridge.toml"), other_engine=False).passed
