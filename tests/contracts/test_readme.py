"""README.md says what is so: the example, the libraries, the commands, the picture."""

from __future__ import annotations

import re
import shlex
import tomllib
from fractions import Fraction
from pathlib import Path

import pytest

import derive.cli
import derive.reading.read as reading
import derive.render.pdf
from derive.bands.choose import state_in
from derive.devices.registry import models
from derive.pipeline import derive as derive_all
from derive.reading.kinds import KINDS
from derive.reading.roles import BANDS

ROOT = Path(__file__).parents[2]
README = (ROOT / "README.md").read_text(encoding="utf-8")
SETUP = (ROOT / ".ci" / "setup").read_text(encoding="utf-8")
COMMAND = re.compile(r"^```sh\n(.*)\n```$", re.MULTILINE)
SAMPLES = re.findall(
    r"^```text\n\$ nodeledger (\w+) ([^\n]*)\n(.*?)^```$", README, re.DOTALL | re.MULTILINE
)


def test_example_is_the_case_without_its_remarks():
    (shown,) = re.findall(r"^```toml\n(.*?)^```$", README, re.DOTALL | re.MULTILINE)
    case = tomllib.loads((ROOT / "cases/line_buffer/topology.toml").read_text(encoding="utf-8"))
    short = tomllib.loads(shown)
    shortened = ("sheet", "nodes")
    assert {key: table for key, table in short.items() if key not in shortened} == {
        key: table for key, table in case.items() if key not in shortened
    }
    for key in shortened:
        assert short[key].items() <= case[key].items()


def test_one_command_sets_up_and_makes_a_sheet_and_one_tests():
    assert COMMAND.findall(README) == [
        "sh .ci/setup && .venv/bin/nodeledger sheet cases/line_buffer/topology.toml",
        "sh .ci/setup --browser && .venv/bin/python -m pytest",
    ]


def test_ci_runs_the_test_command_that_the_readme_gives():
    run = (ROOT / ".ci" / "run").read_text(encoding="utf-8")
    assert run.rstrip().endswith("\n.venv/bin/python -m pytest")


def test_libraries_are_the_same_wherever_they_are_named():
    (libraries,) = re.findall(r'^libraries="(.*)"$', SETUP, re.MULTILINE)
    assert f"`{libraries}`" in README
    told = Path(derive.render.pdf.__file__).read_text(encoding="utf-8")
    assert libraries in told


def test_every_kind_of_part_stands_in_the_table():
    for kind in KINDS:
        assert f"`{kind}`" in README


def test_every_parameter_of_every_device_stands_in_its_row():
    rows = {kind: "" for kind in KINDS}
    for kind, row in re.findall(r"^\| `(\w+)` \|(.*)$", README, re.MULTILINE):
        rows[kind] = rows.get(kind, "") + row
    for kind, spec in KINDS.items():
        words = [parameter.name for parameter in spec.parameters]
        words += [word for key, allowed in spec.choices for word in (key, *allowed)]
        words += [key for key, _ in (*spec.wires, *spec.optional_wires) if spec.parameters]
        for word in words:
            if kind == "opamp" and word in ("output", "inputs"):
                continue  # written as "as above"
            assert re.search(rf"[` ]{word}[` ]", rows[kind]), (kind, word)


def test_defaults_of_the_dc_circuit_are_those_of_the_models():
    found = {
        (kind, key): value
        for kind, model in models().items()
        for key, value in getattr(model, "DEFAULTS", {}).items()
    }
    assert len(found) == 4
    for (kind, key), value in found.items():
        (row,) = re.findall(rf"^\| `{kind}` \|(.*\(.*)$", README, re.MULTILINE)
        shown = re.search(rf"`{key}` \(([\d.]+)", row)
        assert shown, (kind, key)
        assert Fraction(shown[1]) == value


def test_what_a_role_does_in_each_band_is_what_the_program_does():
    rows = re.findall(r"^\| (`coupling`, .*|`parasitic`; .*|none .*) \|$", README, re.MULTILINE)
    assert len(rows) == 3
    for row in rows:
        words, *told = (cell.strip() for cell in row.split("|"))
        for role in re.findall(r"`(\w+)`", words) or [""]:
            assert told == [state_in(role, band, inductor=False) for band in BANDS]


def test_every_table_of_a_topology_stands_in_the_list():
    tables = [name for name in reading._TABLES if name != "bands"]
    assert len(tables) == 14
    for name in tables:
        shown = f"{name}.NAME" if name in ("models", "find") else name
        shown = f"[{name}]" if name in ("assume", "revision", "review") else shown
        assert f"| `[{shown}]` |" in README
    assert "`bands = [" in README


def test_every_command_and_option_stands_in_the_table(capsys):
    with pytest.raises(SystemExit):
        derive.cli.main(["--help"])
    commands = re.findall(r"^    (\w+) ", capsys.readouterr().out, re.MULTILINE)
    assert commands
    for command in commands:
        assert f"`nodeledger {command} " in README
        with pytest.raises(SystemExit):
            derive.cli.main([command, "--help"])
        for option in re.findall(r"(--[a-z-]+)", capsys.readouterr().out):
            assert option == "--help" or option in README, option


def first_not_printed(shown, printed):
    """Give the first line shown that is not printed after those before it; `…` stands for lines left out."""
    rest = iter([line.rstrip() for line in printed.splitlines()])
    return next((line for line in shown.splitlines() if line != "…" and line not in rest), None)


def test_there_is_a_sample_of_each_command_that_prints():
    assert [command for command, _, _ in SAMPLES] == ["show", "handcheck", "compare"]


@pytest.mark.parametrize(("command", "rest", "shown"), SAMPLES, ids=[sample[0] for sample in SAMPLES])
def test_what_a_command_is_shown_to_print_is_what_it_prints(command, rest, shown, capsys, monkeypatch):
    monkeypatch.chdir(ROOT)
    # The derivation by hand that is shown has mistakes in it.
    assert derive.cli.main([command, *shlex.split(rest), "--quiet"]) == (command == "handcheck")
    printed = capsys.readouterr().out
    assert len(shown.splitlines()) > 15
    assert first_not_printed(shown, printed) is None
    assert first_not_printed(shown, printed.replace("1", "2")) is not None


def test_a_line_too_many_or_in_another_place_would_be_seen():
    assert first_not_printed("a\n…\nc\n", "a\nb \nc\n") is None
    assert first_not_printed("a\nd\n", "a\nb\nc\n") == "d"
    assert first_not_printed("c\na\n", "a\nb\nc\n") == "a"


def test_the_example_in_python_gives_what_stands_beside_it(capsys, monkeypatch):
    (shown,) = re.findall(r"^```python\n(.*?)^```$", README, re.DOTALL | re.MULTILINE)
    beside = re.findall(r"^print\(.+\)  # (.+)$", shown, re.MULTILINE)
    assert beside[0].startswith("as `nodeledger")
    monkeypatch.chdir(ROOT)
    exec(shown, {})  # the page's own text
    assert capsys.readouterr().out.splitlines()[1 - len(beside) :] == beside[1:]


def test_every_key_of_a_result_in_the_ledger_stands_in_the_table():
    topology = reading.read(str(ROOT / "cases/post_filter/topology.toml"))
    (result, *_) = derive_all(topology, other_engine=False).ledger()["results"]
    (rows,) = re.findall(r"^\| key \| holds \|\n(.*?)\n\n", README, re.DOTALL | re.MULTILINE)
    named = [key for row in rows.splitlines() for key in re.findall(r"`(\w+)`", row.split("|")[1])]
    assert set(named) == set(result)


def test_picture_stands_beside_its_case_and_is_small():
    (picture,) = re.findall(r"!\[[^]]+\]\((.+?)\)", README)
    assert (ROOT / picture).read_bytes().startswith(b"\x89PNG")
    assert (ROOT / picture).stat().st_size <= 250_000


def test_pages_that_are_linked_are_there():
    for target in re.findall(r"\]\(([^)]+)\)", README):
        assert (ROOT / target).exists(), target
