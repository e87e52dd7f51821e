"""DEVELOPERS.md tells the truth: its journey runs, and each file to copy works as it stands there."""

from __future__ import annotations

import doctest
import os
import re
import shutil
import subprocess
import sys
from pathlib import Path

import pytest

ROOT = Path(__file__).parents[2]
PAGE = ROOT / "DEVELOPERS.md"
BLOCK = re.compile(r"^```\w+\n(.*?)^```$", re.DOTALL | re.MULTILINE)
NAME = re.compile(r"`([\w]+/[\w/]+\.[a-z]+)`")

# Lines that the page tells to add: the file, the text before which they go (or that they replace).
BEFORE = (
    ("derive/topology/kinds.py", '        Kind(\n            "coupling",'),
    ("derive/sheet/wording.py", "SENTENCES: Mapping"),
)
FURTHER = (
    (
        "derive/topology/network.py",
        'if part.kind in ("resistor", "capacitor", "inductor"):',
        'if part.kind in ("conductance", "resistor", "capacitor", "inductor"):',
    ),
    ("derive/sheet/wording.py", "    cancel,\n", "    cancel,\n    swap_sides,\n"),
    (
        "derive/sheet/wording.py",
        "    cancel.NAME: _cancel,\n",
        "    cancel.NAME: _cancel,\n    swap_sides.NAME: _swap_sides,\n",
    ),
    ("derive/eliminate/eliminate.py", "    cancel,\n", "    cancel,\n    swap_sides,\n"),
    (
        "derive/eliminate/eliminate.py",
        "    found = form_ratio.apply(",
        "    swap_sides.apply(scribe, last.number)\n    found = form_ratio.apply(",
    ),
    ("tests/contracts/test_roads.py", '"generic",\n', '"generic",\n        "small_numbers",\n'),
    (
        "cases/level_divider/topology.toml",
        "C_1 = { capacitor",
        'G_1 = { conductance = "50 uS", between = ["out", "gnd"] }\nC_1 = { capacitor',
    ),
)


def replace(path, old, new):
    text = path.read_text(encoding="utf-8")
    assert text.count(old) >= 1, (path, old)
    path.write_text(text.replace(old, new, 1), encoding="utf-8")


def told():
    """Give what the page shows, by the file's name: whole files, and lines to add."""
    text = PAGE.read_text(encoding="utf-8")
    text = text[text.index("## To add something") : text.index("## Where not to put things")]
    found = {}
    for block in BLOCK.finditer(text):
        before = text[: block.start()].rstrip().rpartition("\n\n")[2]
        found[NAME.findall(before)[-1]] = block[1]
    return found


@pytest.fixture(scope="module")
def copy(tmp_path_factory):
    """Copy the project and do what the page says."""
    place = tmp_path_factory.mktemp("copy")
    leave = shutil.ignore_patterns("__pycache__")
    for folder in ("derive", "report_templates", "tests", "cases"):
        shutil.copytree(ROOT / folder, place / folder, ignore=leave)
    shutil.copy(ROOT / "pyproject.toml", place)
    texts = told()
    for name, anchor in BEFORE:
        replace(place / name, anchor, f"{texts.pop(name)}\n\n{anchor}")
    texts.pop("derive/topology/network.py")
    for name, text in texts.items():
        path = place / name
        assert not path.exists(), name
        path.parent.mkdir(exist_ok=True)
        path.write_text(text, encoding="utf-8")
    for name, old, new in FURTHER:
        replace(place / name, old, new)
    return place


def run(copy, *arguments):
    return subprocess.run(
        [sys.executable, *arguments],
        cwd=copy,
        env={**os.environ, "PYTHONPATH": str(copy), "PYTHONDONTWRITEBYTECODE": "1"},
        capture_output=True,
        text=True,
        encoding="utf-8",
        timeout=300,
        check=False,
    )


def test_the_journey_gives_the_values_that_the_page_shows():
    tests = doctest.DocTestParser().get_doctest(
        PAGE.read_text(encoding="utf-8"), {}, "DEVELOPERS.md", str(PAGE), 0
    )
    assert len(tests.examples) > 30
    words = []
    doctest.DocTestRunner(verbose=False).run(tests, out=words.append)
    assert words == []


def test_the_page_shows_every_kind_of_plug_in():
    assert set(told()) == {
        "derive/devices/models/conductance.py",
        "derive/topology/kinds.py",
        "derive/topology/network.py",
        "derive/eliminate/rules/swap_sides.py",
        "derive/sheet/wording.py",
        "derive/sheet/sections/places.py",
        "derive/check/roads/small_numbers.py",
        "cases/level_divider/topology.toml",
        "cases/level_divider/expected.toml",
        "cases/level_divider/SOURCE.md",
    }
    shown = PAGE.read_text(encoding="utf-8")
    assert FURTHER[0][2] in shown


def test_device_step_rule_and_check_are_at_work_in_the_terminal(copy):
    ended = run(copy, "-m", "derive", "show", "cases/level_divider/topology.toml", "--steps")
    assert (ended.returncode, ended.stderr) == (0, "")
    assert "G_1·v_out" in ended.stdout
    assert "with its sides exchanged." in ended.stdout
    assert "✓ small numbers: " in ended.stdout
    assert "✗" not in ended.stdout


def test_section_is_on_the_sheet(copy):
    command = ["sheet", "cases/level_divider/topology.toml", "--only", "html", "--out", "out"]
    ended = run(copy, "-m", "derive", *command)
    assert ended.returncode == 0
    page = (copy / "out" / "level_divider.html").read_text(encoding="utf-8")
    assert "Places in the file" in page
    assert "topology.toml:11" in page


def test_step_rule_with_a_wrong_certificate_fails(copy):
    rule = copy / "derive/eliminate/rules/swap_sides.py"
    kept = rule.read_text(encoding="utf-8")
    try:
        replace(rule, "number(-1)", "number(1)")
        ended = run(copy, "-m", "derive", "show", "cases/level_divider/topology.toml")
    finally:
        rule.write_text(kept, encoding="utf-8")
    assert ended.returncode == 1
    assert "✗ every step: " in ended.stdout


def test_published_case_and_road_pass_the_tests_that_they_did_not_write(copy):
    replace(copy / "cases/level_divider/topology.toml", "G_1 = {", "#")
    assert run(copy, "tests/golden/renew.py").returncode == 0
    assert (copy / "tests/golden/level_divider.json").is_file()
    options = ["-q", "-p", "no:cacheprovider", "-k", "level_divider or small_numbers or roads_are_found"]
    places = ["tests/published/test_cases.py", "tests/golden", "tests/contracts/test_roads.py"]
    ended = run(copy, "-m", "pytest", *options, *places)
    assert ended.returncode == 0, ended.stdout
    assert re.search(r"1[0-9] passed", ended.stdout)
