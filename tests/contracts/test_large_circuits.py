"""Circuits too large to write out, as a user meets them: the form chosen, forced, and the ends of forcing it."""

import json
import os
import random
import subprocess
import sys
import time
from pathlib import Path

import pytest
from ledger_contract import check_ledger

from derive.pipeline import derive
from derive.reading.read import parse
from derive.sheet.ledger import ledger_text
from derive.sheet.plain import plain_outcome

FOLDER = Path(__file__).parents[1] / "benchmarks" / "circuits"


def run(*arguments, **environment):
    return subprocess.run(
        [sys.executable, "-m", "derive", *map(str, arguments)],
        capture_output=True,
        text=True,
        encoding="utf-8",
        timeout=300,
        env={**os.environ, **environment},
    )


def text_of(name, form=""):
    text = (FOLDER / f"{name}.toml").read_text(encoding="utf-8")
    return text.replace("[sheet]", f'[sheet]\nform = "{form}"') if form else text


def dense(nodes, form=""):
    """Give a circuit with a part between any two of its nodes."""
    chance = random.Random(nodes)
    lines = ["[sheet]", 'title = "dense"', *([f'form = "{form}"'] if form else [])]
    lines += ["[drives]", 'V_s = { voltage = ["in", "gnd"] }', "[parts]"]
    lines.append('R_s = { resistor = "1k", between = ["in", "n1"] }')
    for one in range(1, nodes + 1):
        for other in range(one + 1, nodes + 2):
            kind, unit = chance.choice((("resistor", "k"), ("capacitor", "p")))
            far = "gnd" if other > nodes else f"n{other}"
            size = f"{chance.randint(1, 99)}{unit}"
            lines.append(
                f'{kind[0].upper()}_{one}_{other} = {{ {kind} = "{size}", between = ["n{one}", "{far}"] }}'
            )
    lines += ["[find.A_v]", f'voltage = "n{nodes}"', 'per = "V_s"']
    return "\n".join(lines)


@pytest.fixture(scope="module")
def shown():
    return run("show", FOLDER / "opamp20.toml", "--quiet")


def test_twenty_transistors_are_shown_with_the_count_and_their_poles(shown):
    assert shown.returncode == 0, shown.stderr
    assert "D has 2.4·10¹⁸ terms: nested form used" in shown.stdout
    assert "5.4139 Hz" in shown.stdout
    assert "Pass band to −3 dB: up to 5.41" in shown.stdout
    assert "✓ every step" in shown.stdout
    assert "✗" not in shown.stdout


def test_roads_that_do_not_go_say_so(shown):
    lines = [line.strip() for line in shown.stdout.splitlines()]
    (line,) = [line for line in lines if "readable form" in line and "not written" in line]
    assert line.endswith("not written")


@pytest.mark.parametrize("name", ["random8", "ladder14"])
def test_ledger_of_a_nested_form_keeps_the_contract(name):
    outcome = derive(parse(text_of(name), f"{name}.toml"), other_engine=False).outcome
    data = check_ledger(ledger_text(outcome))
    defined = [name for name, _ in data["results"][0]["definitions"]]
    assert len(defined) == len(set(defined)) > 50


def test_ledger_is_the_same_whatever_the_seed_of_hashes(tmp_path):
    file = FOLDER / "random12.toml"
    found = []
    for seed in ("1", "77"):
        out = tmp_path / seed
        ended = run("sheet", file, "--only", "json", "--out", out, "--quiet", PYTHONHASHSEED=seed)
        assert ended.returncode == 0, ended.stderr
        found.append((out / "random12.json").read_bytes())
    one, other = (json.loads(text) for text in found)
    for ledger in (one, other):
        # The other engine may or may not end in its time.
        ledger["results"][0]["checks"] = []
    assert one == other


def test_nested_form_can_be_asked_for():
    results = derive(parse(text_of("follower", "nested"), "follower.toml"), other_engine=False)
    assert results.passed
    assert "D has 18 terms: nested form used, as asked" in plain_outcome(results.outcome)


def test_expanded_form_can_be_asked_for():
    topology = parse(text_of("random8", "expanded"), "random8.toml")
    results = derive(topology, other_engine=False, explain=False)
    derivation = results.outcome.results[0].solution.derivation
    assert results.passed
    assert derivation.nested is None
    assert len(derivation.denominator) == 9612


def test_form_that_there_is_not_is_refused_with_its_line(tmp_path):
    file = tmp_path / "odd.toml"
    file.write_text(text_of("follower", "short"), encoding="utf-8")
    ended = run("show", file)
    assert ended.returncode == 2
    assert 'odd.toml:2: sheet: there is no form "short"' in ended.stderr
    assert "Traceback" not in ended.stderr


@pytest.mark.parametrize("name", ["opamp20", "random15"])
def test_expansion_beyond_counting_is_refused_at_once(tmp_path, name):
    file = tmp_path / "big.toml"
    file.write_text(text_of(name, "expanded"), encoding="utf-8")
    ended = run("show", file)
    assert ended.returncode == 2
    assert "terms: more than the 100,000 that can be worked" in ended.stderr
    assert 'take form = "expanded" out of [sheet]' in ended.stderr


def test_memory_bomb_ends_within_its_limits_with_a_message(tmp_path):
    file = tmp_path / "bomb.toml"
    file.write_text(dense(20, "expanded"), encoding="utf-8")
    begun = time.monotonic()
    ended = run("show", file, "--quiet")
    assert ended.returncode == 2
    assert "Traceback" not in ended.stderr
    assert 'take form = "expanded" out of [sheet]' in ended.stderr
    assert time.monotonic() - begun < 120


def test_dense_circuit_past_counting_is_worked_in_nested_form():
    results = derive(parse(dense(11), "dense.toml"), other_engine=False)
    assert results.passed
    printed = plain_outcome(results.outcome)
    assert "D has more terms than can be counted: nested form used" in printed
    assert "dimensions: not tried" in printed
