"""The wheel holds all that the program needs, and works away from the checkout."""

from __future__ import annotations

import os
import subprocess
import sys
import zipfile
from pathlib import Path

import pytest

from derive.version import VERSION

ROOT = Path(__file__).parents[3]
# A small one, with a device: its formulas need the grammar.
CASE = ROOT / "cases" / "trio_common_base" / "topology.toml"


@pytest.fixture(scope="module")
def installed(tmp_path_factory):
    """Build the wheel, and unpack it as an installer would."""
    made, place = tmp_path_factory.mktemp("wheel"), tmp_path_factory.mktemp("site")
    build = [sys.executable, "-m", "hatchling", "build", "--target", "wheel", "--directory", str(made)]
    subprocess.run(build, cwd=ROOT, check=True, capture_output=True, timeout=120)
    (wheel,) = made.glob("nodeledger-*-py3-none-any.whl")
    with zipfile.ZipFile(wheel) as archive:
        archive.extractall(place)
    return place


def run(installed, *arguments, cwd):
    return subprocess.run(
        [sys.executable, *arguments],
        cwd=cwd,
        env={**os.environ, "PYTHONPATH": str(installed), "PYTHONDONTWRITEBYTECODE": "1"},
        capture_output=True,
        text=True,
        timeout=120,
        check=True,
    ).stdout


def files_of(folder):
    return {
        str(path.relative_to(folder))
        for path in folder.rglob("*")
        if path.is_file() and "__pycache__" not in path.parts
    }


def test_every_file_of_the_package_and_the_templates_is_in_the_wheel(installed):
    package = files_of(ROOT / "derive")
    assert {"py.typed", "expressions/grammar.lark"} <= package
    templates = {f"report_templates/{name}" for name in files_of(ROOT / "report_templates")}
    cases = {f"cases/{name}" for name in files_of(ROOT / "cases")}
    assert files_of(installed / "derive") == package | templates | cases


def test_nothing_but_the_package_and_its_description_is_in_the_wheel(installed):
    package, facts = sorted(installed.iterdir())
    assert package.name == "derive"
    assert facts.name == f"nodeledger-{VERSION}.dist-info"
    assert "nodeledger = derive.cli:main" in (facts / "entry_points.txt").read_text(encoding="utf-8")
    assert (facts / "licenses" / "LICENSE").is_file()


def test_version_of_the_wheel_is_that_of_the_program(installed, tmp_path):
    out = run(installed, "-m", "derive", "--version", cwd=tmp_path)
    facts = (installed / f"nodeledger-{VERSION}.dist-info" / "METADATA").read_text(encoding="utf-8")
    assert out == f"nodeledger {VERSION}\n"
    assert f"Version: {VERSION}\n" in facts


def test_a_sheet_is_made_from_the_wheel_alone(installed, tmp_path):
    where = "import derive.render.templates as t; print(t.folder())"
    assert Path(run(installed, "-c", where, cwd=tmp_path).strip()).is_relative_to(installed)
    run(installed, "-m", "derive", "sheet", str(CASE), "--quiet", cwd=tmp_path)
    assert sorted(path.suffix for path in (tmp_path / "sheets").iterdir()) == [".html", ".json", ".pdf"]


def test_a_stage_is_begun_from_a_case_away_from_the_checkout(installed, tmp_path):
    run(installed, "-m", "derive", "start", "mine", "--like", "line_buffer", cwd=tmp_path)
    assert "R_iso" in (tmp_path / "mine.toml").read_text(encoding="utf-8")
