"""What a command does not need it does not load: showing a result is quick."""

import json
import subprocess
import sys
from pathlib import Path

ROOT = Path(__file__).resolve().parents[2]
FILE = ROOT / "tests" / "benchmarks" / "circuits" / "follower.toml"
HEAVY = ["lark", "lcapy", "matplotlib", "pikepdf", "scipy", "sympy", "typst", "weasyprint"]
CHILD = """
import io, json, sys
from derive.cli import main
kept, sys.stdout = sys.stdout, io.StringIO()
status = main(json.loads(sys.argv[1]))
shown, sys.stdout = sys.stdout.getvalue(), kept
json.dump([status, len(shown), sorted({name.partition(".")[0] for name in sys.modules})], sys.stdout)
"""


def loaded_by(*arguments):
    child = [sys.executable, "-c", CHILD, json.dumps(arguments)]
    done = subprocess.run(child, cwd=ROOT, capture_output=True, text=True, check=True)
    return json.loads(done.stdout)


def test_show_loads_neither_typesetting_nor_another_algebra():
    status, length, modules = loaded_by("show", str(FILE), "--steps")
    assert status == 0
    assert length > 1_000
    assert [name for name in HEAVY if name in modules] == []


def test_a_ledger_alone_loads_no_typesetting(tmp_path):
    _, _, modules = loaded_by("sheet", str(FILE), "--only", "json", "--out", str(tmp_path), "--quiet")
    assert (tmp_path / "follower.json").is_file()
    assert [name for name in ("weasyprint", "typst", "matplotlib", "sympy") if name in modules] == []


def test_what_a_whole_sheet_loads_would_be_seen(tmp_path):
    _, _, modules = loaded_by("sheet", str(FILE), "--only", "pdf", "--out", str(tmp_path), "--quiet")
    assert {"weasyprint", "typst"} <= set(modules)
