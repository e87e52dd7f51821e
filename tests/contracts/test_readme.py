"""README.md says what is so: the example, the libraries, the commands, the picture."""

from __future__ import annotations

import re
import tomllib
from pathlib import Path

import pytest

import derive.cli
import derive.render.pdf
from derive.topology.kinds import KINDS

ROOT = Path(__file__).parents[2]
README = (ROOT / "README.md").read_text(encoding="utf-8")
SETUP = (ROOT / ".ci" / "setup").read_text(encoding="utf-8")
COMMAND = re.compile(r"^```sh\n(.*)\n```$", re.MULTILINE)


def test_example_is_the_case_without_its_remarks():
    (shown,) = re.findall(r"^```toml\n(.*?)^```$", README, re.DOTALL | re.MULTILINE)
    case = tomllib.loads((ROOT / "cases/line_buffer/topology.toml").read_text(encoding="utf-8"))
    short = tomllib.loads(shown)
    assert [short[key] for key in ("drives", "parts", "find")] == [
        case[key] for key in ("drives", "parts", "find")
    ]
    assert short["sheet"].items() <= case["sheet"].items()
    assert short["nodes"].items() <= case["nodes"].items()


def test_one_command_sets_up_and_makes_a_sheet_and_one_tests():
    assert COMMAND.findall(README) == [
        "sh .ci/setup && .venv/bin/nodeledger sheet cases/line_buffer/topology.toml",
        "sh .ci/setup && .venv/bin/python -m pytest",
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


def test_picture_stands_beside_its_case_and_is_small():
    (picture,) = re.findall(r"!\[[^]]+\]\((.+?)\)", README)
    assert (ROOT / picture).read_bytes().startswith(b"\x89PNG")
    assert (ROOT / picture).stat().st_size <= 250_000


def test_pages_that_are_linked_are_there():
    for target in re.findall(r"\]\(([^)]+)\)", README):
        assert (ROOT / target).exists(), target
