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
BEFORE = (("derive/sheet/wording.py", "SENTENCES: Mapping"),)
FURTHER = (
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
)

DEVICE = "derive/devices/models/schottky.py"
REWRITE = "derive/readable/rewrites/current_divider.py"
BRANCHES = """
[sheet]
title = "Meter in one of two branches"
[drives]
V_s = { voltage = ["in", "gnd"] }
[parts]
R_S = { resistor = "50R", between = ["in", "m"] }
R_1 = { resistor = "4k7", between = ["m", "a"] }
R_2 = { resistor = "100R", between = ["a", "gnd"] }
R_3 = { resistor = "1R", between = ["a", "gnd"] }
[find.Y]
current = "R_2"
per = "V_s"
"""
PROBE = """
[sheet]
title = "Level detector"
[supplies]
V_CC = { node = "vcc", dc = "5 V" }
[drives]
V_s = { voltage = ["in", "gnd"] }
[parts]
C_1 = { capacitor = "1u", between = ["in", "a"], role = "coupling" }
R_1 = { resistor = "4k7", between = ["vcc", "a"] }
B_1 = { ballast = "100R", between = ["a", "b"] }
D_1 = { schottky = "small", anode = "b", cathode = "gnd" }
[models.small]
V_F = "0.28 V"
C_j = "4 pF"
[find.A_v]
voltage = "b"
per = "V_s"
"""


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
def alone(tmp_path_factory):
    """Copy the package and its tests, and add the device's file alone."""
    place = tmp_path_factory.mktemp("alone")
    leave = shutil.ignore_patterns("__pycache__")
    for folder in ("derive", "tests"):
        shutil.copytree(ROOT / folder, place / folder, ignore=leave)
    shutil.copy(ROOT / "pyproject.toml", place)
    (place / DEVICE).write_text(told()[DEVICE], encoding="utf-8")
    (place / "probe.toml").write_text(PROBE, encoding="utf-8")
    return place


@pytest.fixture(scope="module")
def copy(tmp_path_factory):
    """Copy the project but for its cases, and do what the page says."""
    place = tmp_path_factory.mktemp("copy")
    leave = shutil.ignore_patterns("__pycache__")
    for folder in ("derive", "report_templates", "tests"):
        shutil.copytree(ROOT / folder, place / folder, ignore=leave)
    shutil.copy(ROOT / "pyproject.toml", place)
    texts = told()
    for name, anchor in BEFORE:
        replace(place / name, anchor, f"{texts.pop(name)}\n\n{anchor}")
    for name, text in texts.items():
        path = place / name
        assert not path.exists(), name
        path.parent.mkdir(parents=True, exist_ok=True)
        path.write_text(text, encoding="utf-8")
    (place / "branches.toml").write_text(BRANCHES, encoding="utf-8")
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
        DEVICE,
        REWRITE,
        "derive/eliminate/rules/swap_sides.py",
        "derive/sheet/wording.py",
        "derive/sheet/sections/places.py",
        "derive/check/roads/small_numbers.py",
        "cases/level_divider/topology.toml",
        "cases/level_divider/expected.toml",
        "cases/level_divider/SOURCE.md",
    }


def test_the_stations_stand_in_the_order_that_is_kept():
    kept = (ROOT / "tests/architecture/test_layout.py").read_text(encoding="utf-8")
    stations = re.findall(r'"(\w+)"', kept[kept.index("STATIONS = (") : kept.index("FRONT =")])
    (shown,) = re.findall(
        r"^`(errors → .*?)`$", PAGE.read_text(encoding="utf-8"), re.DOTALL | re.MULTILINE
    )
    assert shown.replace("→", " ").split() == stations


def test_files_that_the_page_names_are_there():
    text = PAGE.read_text(encoding="utf-8")
    shown = {name for name in told() if not (ROOT / name).exists()}
    for name in NAME.findall(text):
        places = (ROOT / name, ROOT / "derive" / name)
        made = name in shown or name.startswith("sheets/") or name.endswith("/level_divider.json")
        assert made or any(place.exists() for place in places), name


def test_a_device_is_its_one_file_its_operating_point_included(alone):
    resistor = (ROOT / "derive/devices/models/resistor.py").read_text(encoding="utf-8")
    plain = alone / "derive/devices/models/ballast.py"
    renamed = resistor.replace('"resistor"', '"ballast"').replace("{ resistor =", "{ ballast =")
    plain.write_text(renamed, encoding="utf-8")
    try:
        ended = run(alone, "-m", "derive", "show", "probe.toml", "--quiet")
    finally:
        plain.unlink()
    assert (ended.returncode, ended.stderr) == (0, "")
    # (5 V − 0.28 V)/(4.7 kΩ + 100 Ω) and V_T at 27 °C over it
    assert "983.3 µA" in ended.stdout
    assert "26.303 Ω" in ended.stdout
    assert "✓ D_1: V_D = 280 mV" in ended.stdout
    assert "✓ D_1: by Newton's method" in ended.stdout
    assert "A_v = r_d/(B_1 + r_d)\n" in ended.stdout
    assert "✗" not in ended.stdout


def test_a_device_with_a_slip_in_its_formula_is_caught_by_its_witness(alone):
    tests = ["-m", "pytest", "-q", "-n0", "tests/contracts/test_device_models.py"]
    ended = run(alone, *tests)
    assert ended.returncode == 0, ended.stdout
    model = alone / DEVICE
    kept = model.read_text(encoding="utf-8")
    try:
        replace(model, 'build.capacitor("C_j", junction)', 'build.resistor("C_j", junction)')
        ended = run(alone, *tests, "-k", "witness")
    finally:
        model.write_text(kept, encoding="utf-8")
    assert ended.returncode == 1
    assert "[schottky]" in ended.stdout


def test_step_rule_and_check_are_at_work_in_the_terminal(copy):
    ended = run(copy, "-m", "derive", "show", "cases/level_divider/topology.toml", "--steps")
    assert (ended.returncode, ended.stderr) == (0, "")
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


def test_rewrite_is_at_work_and_proved(copy):
    ended = run(copy, "-m", "derive", "show", "branches.toml", "--steps")
    assert (ended.returncode, ended.stderr) == (0, "")
    # Ohm's law and the current divider: R_3/(R_2 + R_3) of V_s over the whole resistance.
    assert "  Y = R_3/(R_2 + R_3)·(1/(R_S + R_1 + (R_2 ∥ R_3)))\n" in ended.stdout
    assert "✓ readable form: " in ended.stdout
    assert "✗" not in ended.stdout


def test_rewrite_with_a_slip_is_refused_by_its_proof(copy):
    rewrite = copy / REWRITE
    kept = rewrite.read_text(encoding="utf-8")
    try:
        replace(rewrite, "space.ratio(ratio.top, total)", "space.ratio(total, ratio.top)")
        ended = run(copy, "-m", "derive", "show", "branches.toml", "--steps")
    finally:
        rewrite.write_text(kept, encoding="utf-8")
    assert ended.returncode == 0
    assert "(R_2 ∥ R_3)" not in ended.stdout
    assert "✓ readable form: " in ended.stdout


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
    assert run(copy, "tests/golden/renew.py").returncode == 0
    assert (copy / "tests/golden/level_divider.json").is_file()
    options = ["-q", "-p", "no:cacheprovider", "-k", "level_divider or small_numbers or roads_are_found"]
    places = ["tests/published/test_cases.py", "tests/golden", "tests/contracts/test_roads.py"]
    ended = run(copy, "-m", "pytest", *options, *places)
    assert ended.returncode == 0, ended.stdout
    assert re.search(r"1[0-9] passed", ended.stdout)
