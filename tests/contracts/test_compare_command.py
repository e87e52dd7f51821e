"""`nodeledger compare` as a user meets it: exit status, streams, files; never a traceback."""

import errno
import io
import json
import os
import re
import subprocess
import sys
from dataclasses import replace
from pathlib import Path

import malformed_topologies as table
import pikepdf
import pytest

import derive.compare.compare
import derive.compare.make
import derive.progress
from derive.check.verdict import Verdict
from derive.cli import main
from derive.pipeline import Results
from derive.pipeline import derive as worked

ROOT = Path(__file__).parents[2]
PREAMP = ROOT / "cases" / "echo_preamp" / "topology.toml"
CHILD = """
import io, json, sys
from derive.cli import main
kept, sys.stdout = sys.stdout, io.StringIO()
status = main(json.loads(sys.argv[1]))
shown, sys.stdout = sys.stdout.getvalue(), kept
json.dump([status, len(shown), sorted({name.partition(".")[0] for name in sys.modules})], sys.stdout)
"""
HEAVY = ["lcapy", "matplotlib", "pikepdf", "scipy", "sympy", "typst", "weasyprint"]


@pytest.fixture
def low(tmp_path):
    path = tmp_path / "low.toml"
    path.write_text(table.GOOD, encoding="utf-8")
    return path


@pytest.fixture
def high(tmp_path):
    path = tmp_path / "high.toml"
    path.write_text(table.GOOD.replace("1k", "47k").replace("Stage", "Other"), encoding="utf-8")
    return path


@pytest.fixture
def nothing_begins(monkeypatch):
    """Fail where any topology is worked."""
    monkeypatch.setattr(derive.compare.compare, "derive", lambda *_, **__: pytest.fail("work was begun"))


def refused(capsys, *arguments):
    """Run the command where it cannot be carried out and give its one message."""
    assert main(["compare", *map(str, arguments)]) == 2
    out, err = capsys.readouterr()
    assert out == ""
    assert err.startswith("nodeledger: ")
    assert err.count("\n") == 1
    assert "Traceback" not in err
    assert "internal" not in err
    return err.removeprefix("nodeledger: ").rstrip("\n")


def test_the_table_goes_to_standard_output_and_nothing_is_written(
    low, high, tmp_path, monkeypatch, capsys
):
    monkeypatch.chdir(tmp_path)
    assert main(["compare", "low.toml", "high.toml", "--quiet"]) == 0
    out, err = capsys.readouterr()
    assert err == ""
    assert re.match(r"Stage +low +high\n", out)
    for words in (
        "Gain in the mid band",
        "Gain-bandwidth product",
        "Input impedance",
        "Output impedance",
    ):
        assert words in out
    assert "\x1b" not in out
    assert sorted(os.listdir()) == ["high.toml", "low.toml"]


def test_one_stage_alone_is_a_table_of_one(low, capsys):
    assert main(["compare", str(low)]) == 0
    assert re.match(r"Stage +low\n", capsys.readouterr().out)


def test_a_folder_gets_one_sheet_in_three_forms(low, high, tmp_path, capsys):
    out = tmp_path / "out"
    assert main(["compare", str(low), str(high), "--out", str(out), "--quiet"]) == 0
    assert sorted(os.listdir(out)) == ["comparison.html", "comparison.json", "comparison.pdf"]
    assert str(out / "comparison.pdf") in capsys.readouterr().out
    ledger = json.loads((out / "comparison.json").read_text(encoding="utf-8"))
    assert [stage["name"] for stage in ledger["stages"]] == ["low", "high"]
    page = (out / "comparison.html").read_text(encoding="utf-8")
    assert page.count("<svg") == 1
    assert 'role="img"' in page
    carried = json.loads(re.search(r'id="topologies">(.*?)</script>', page, re.DOTALL).group(1))
    assert [item["text"] for item in carried] == [
        low.read_text(encoding="utf-8"),
        high.read_text(encoding="utf-8"),
    ]
    assert json.loads(re.search(r'id="ledger">(.*?)</script>', page, re.DOTALL).group(1)) == ledger


def test_the_pdf_carries_all_topologies_under_the_names_of_their_stages(tmp_path, capsys):
    # Two files of one name, in folders that tell them apart.
    for name in ("one", "two"):
        (tmp_path / name).mkdir()
        (tmp_path / name / "topology.toml").write_text(
            table.GOOD.replace("Stage", name), encoding="utf-8"
        )
    files = [str(tmp_path / name / "topology.toml") for name in ("one", "two")]
    out = tmp_path / "out"
    assert main(["compare", *files, "--out", str(out), "--only", "pdf", "--quiet"]) == 0
    with pikepdf.open(io.BytesIO((out / "comparison.pdf").read_bytes())) as document:
        held = {name: item.get_file().read_bytes() for name, item in document.attachments.items()}
    assert sorted(held) == ["comparison.json", "one.toml", "two.toml"]
    assert b'title = "two"' in held["two.toml"]


def test_only_writes_what_was_asked_for(low, tmp_path):
    out = tmp_path / "out"
    assert main(["compare", str(low), "--out", str(out), "--only", "json"]) == 0
    assert os.listdir(out) == ["comparison.json"]


def test_only_without_a_folder_is_refused(low, nothing_begins, capsys):
    assert "--out" in refused(capsys, low, "--only", "pdf")


@pytest.mark.parametrize("kinds", ["docx", "", ","])
def test_unknown_kind_of_output_is_refused_before_any_work(kinds, low, tmp_path, nothing_begins, capsys):
    assert "html, pdf and json" in refused(capsys, low, "--out", tmp_path / "out", "--only", kinds)
    assert not (tmp_path / "out").exists()


def test_two_stages_of_one_name_are_refused_before_any_work(low, tmp_path, nothing_begins, capsys):
    twin = tmp_path / "low" / "topology.toml"
    twin.parent.mkdir()
    twin.write_text(table.GOOD, encoding="utf-8")
    assert f"{low} and {twin} would both be" in refused(capsys, low, twin)
    assert refused(capsys, low, low)


def test_a_quantity_that_one_of_them_lacks_is_refused_before_any_work(low, high, nothing_begins, capsys):
    message = refused(capsys, low, PREAMP, "--find", "Z_9")
    assert message.startswith(f"{low}: ")
    assert '"Z_9"' in message
    high.write_text(table.GOOD.replace("find.A_v", "find.B"), encoding="utf-8")
    assert refused(capsys, low, high, "--find", "A_v").startswith(f"{high}: ")


def test_quantities_of_two_kinds_are_refused_before_any_work(low, nothing_begins, capsys):
    other = ROOT / "cases" / "cable_receiver" / "topology.toml"
    message = refused(capsys, low, other)
    assert message.startswith(f"{other}:")
    assert "cannot stand side by side" in message
    assert "--find" in message


def test_a_topology_without_a_gain_is_refused_before_any_work(low, high, nothing_begins, capsys):
    text = re.sub(r"\[find\.A_v\].*", '[find.Z]\nimpedance = "out"\n', table.GOOD, flags=re.DOTALL)
    high.write_text(text, encoding="utf-8")
    message = refused(capsys, low, high)
    assert message.startswith(f"{high}: ")
    assert "no gain to compare" in message


@pytest.mark.parametrize("row", table.ROWS[::7], ids=lambda row: row.name.replace(" ", "-"))
def test_malformed_topology_among_good_ones_gives_one_message_and_no_file(
    row, low, tmp_path, monkeypatch, nothing_begins, capsys
):
    monkeypatch.chdir(tmp_path)
    Path("bad.toml").write_bytes(row.text.encode("utf-8", "surrogatepass"))
    message = refused(capsys, "low.toml", "bad.toml", "--out", "out")
    assert message.startswith(f"bad.toml:{row.line}: " if row.line else "bad.toml: ")
    assert sorted(os.listdir()) == ["bad.toml", "low.toml"]


def test_missing_file_and_missing_arguments(low, nothing_begins, capsys):
    assert "there is no such file" in refused(capsys, low, "nope.toml")
    with pytest.raises(SystemExit) as end:
        main(["compare"])
    assert end.value.code == 2
    assert "usage: nodeledger" in capsys.readouterr().err


def test_work_that_begins_would_be_seen(low, nothing_begins):
    with pytest.raises(pytest.fail.Exception, match="work was begun"):
        main(["compare", str(low)])


@pytest.fixture
def a_check_fails(monkeypatch):
    """Let one check on every stage's gain fail."""

    def derive_and_fail(topology, **more):
        outcome = worked(topology, **more).outcome
        bad = Verdict("made to fail", "by a test", False, "1", "0")
        results = tuple(replace(result, verdicts=(*result.verdicts, bad)) for result in outcome.results)
        return Results(replace(outcome, results=results))

    monkeypatch.setattr(derive.compare.compare, "derive", derive_and_fail)


def test_a_check_that_fails_has_status_1_and_is_told_everywhere(a_check_fails, low, tmp_path, capsys):
    out = tmp_path / "out"
    command = ["compare", str(low), "--out", str(out), "--only", "html,json", "--quiet"]
    assert main(command) == 1
    shown = capsys.readouterr().out
    assert "✗ low, A_v: made to fail" in shown
    page = (out / "comparison.html").read_text(encoding="utf-8")
    assert 'role="alert"' in page
    assert "low, A_v: made to fail" in page
    ledger = json.loads((out / "comparison.json").read_text(encoding="utf-8"))
    assert [c["name"] for c in ledger["stages"][0]["checks"] if c["passed"] is False] == ["made to fail"]


def test_progress_goes_to_standard_error_and_quiet_silences_it(low, high, monkeypatch, capsys):
    monkeypatch.setattr(derive.progress, "PATIENCE_SECONDS", -1.0)
    command = ["compare", str(low), str(high)]
    assert main(command) == 0
    loud = capsys.readouterr()
    assert main([*command, "--quiet"]) == 0
    quiet = capsys.readouterr()
    assert "low: deriving A_v" in loud.err
    assert "high: deriving its impedances" in loud.err
    assert quiet.err == ""
    assert quiet.out == loud.out != ""


def test_two_processes_write_and_print_the_same_bytes(low, tmp_path):
    written = []
    for seed in ("1", "2"):
        place = tmp_path / seed
        place.mkdir()
        ended = subprocess.run(
            [sys.executable, "-m", "derive", "compare", str(low), str(PREAMP), "--out", "out", "--quiet"],
            cwd=place,
            env={**os.environ, "PYTHONPATH": str(ROOT), "PYTHONHASHSEED": seed},
            capture_output=True,
            timeout=120,
            check=True,
        )
        assert ended.stderr == b""
        files = {path.name: path.read_bytes() for path in (place / "out").iterdir()}
        written.append(files | {"shown": ended.stdout})
    assert sorted(written[0]) == ["comparison.html", "comparison.json", "comparison.pdf", "shown"]
    for name, data in written[0].items():
        assert data == written[1][name], name


@pytest.mark.parametrize("call", ["fsync", "replace"])
def test_full_disk_leaves_no_file_and_keeps_the_old_ones(call, low, tmp_path, monkeypatch, capsys):
    out = tmp_path / "out"
    out.mkdir()
    (out / "comparison.json").write_text("old", encoding="utf-8")

    def full(*_):
        raise OSError(errno.ENOSPC, os.strerror(errno.ENOSPC))

    monkeypatch.setattr(os, call, full)
    assert "No space left" in refused(capsys, low, "--out", out, "--only", "html,json", "--quiet")
    assert os.listdir(out) == ["comparison.json"]
    assert (out / "comparison.json").read_text(encoding="utf-8") == "old"


def test_file_where_the_folder_should_be_is_refused_and_left_alone(low, tmp_path, capsys):
    out = tmp_path / "out"
    out.write_text("mine", encoding="utf-8")
    assert str(out) in refused(capsys, low, "--out", out, "--only", "json", "--quiet")
    assert out.read_text(encoding="utf-8") == "mine"


def loaded_by(*arguments):
    child = [sys.executable, "-c", CHILD, json.dumps(arguments)]
    done = subprocess.run(child, cwd=ROOT, capture_output=True, text=True, check=True)
    return json.loads(done.stdout)


def test_the_table_loads_neither_typesetting_nor_another_algebra(low, tmp_path):
    status, length, modules = loaded_by("compare", str(low))
    assert (status, length > 300) == (0, True)
    assert [name for name in HEAVY if name in modules] == []
    _, _, of_a_page = loaded_by("compare", str(low), "--out", str(tmp_path), "--only", "pdf", "--quiet")
    assert {"typst", "weasyprint"} <= set(of_a_page)
    assert "matplotlib" not in of_a_page


def test_a_terminal_that_knows_no_greek_is_no_reason_for_a_traceback(low, tmp_path):
    ended = subprocess.run(
        [sys.executable, "-m", "derive", "compare", str(low)],
        cwd=tmp_path,
        env={**os.environ, "PYTHONPATH": str(ROOT), "PYTHONIOENCODING": "ascii", "LC_ALL": "C"},
        capture_output=True,
        timeout=60,
        check=True,
    )
    assert b"Traceback" not in ended.stderr
