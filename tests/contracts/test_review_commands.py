"""`recheck`, `redline`, `start` and `watch` as a user meets them: exit status, streams, files; never a traceback."""

import os
import shutil
import signal
import subprocess
import sys
from pathlib import Path

import malformed_topologies as table
import pytest

import derive.review.remake as making
from derive.cli import main
from derive.pipeline import derive

ROOT = Path(__file__).parents[2]


@pytest.fixture(scope="module")
def folder(tmp_path_factory):
    """A folder with the sheet of one topology, and the topology itself beside it."""
    place = tmp_path_factory.mktemp("issued")
    (place / "low.toml").write_text(table.GOOD, encoding="utf-8")
    assert main(["sheet", str(place / "low.toml"), "--out", str(place / "out"), "--quiet"]) == 0
    return place


def refused(capsys, *arguments):
    """Run a command that cannot be carried out and give its one message."""
    assert main([*map(str, arguments)]) == 2
    out, err = capsys.readouterr()
    assert out == ""
    assert err.startswith("nodeledger: ")
    assert err.count("\n") == 1
    assert "Traceback" not in err
    assert "internal" not in err
    return err.removeprefix("nodeledger: ").rstrip("\n")


@pytest.mark.parametrize("kind", ["json", "html", "pdf"])
def test_a_sheet_alone_in_a_folder_is_rechecked(kind, folder, tmp_path, monkeypatch, capsys):
    shutil.copy(folder / "out" / f"low.{kind}", tmp_path / f"low.{kind}")
    monkeypatch.chdir(tmp_path)
    assert main(["recheck", f"low.{kind}", "--quiet"]) == 0
    out, err = capsys.readouterr()
    assert err == ""
    assert out.startswith(f"low.{kind}: ✓ same")
    assert os.listdir() == [f"low.{kind}"]


def test_a_changed_sheet_ends_with_one_and_names_the_place(folder, tmp_path, capsys):
    path = tmp_path / "low.json"
    text = (folder / "out" / "low.json").read_text(encoding="utf-8")
    path.write_text(text.replace('"power_of_s": 0', '"power_of_s": 1'), encoding="utf-8")
    assert main(["recheck", str(path), "--quiet"]) == 1
    assert "power_of_s" in capsys.readouterr().out


def test_what_is_no_sheet_ends_with_two(folder, tmp_path, capsys):
    (tmp_path / "cut.pdf").write_bytes((folder / "out" / "low.pdf").read_bytes()[:-2000])
    assert "cannot be read" in refused(capsys, "recheck", tmp_path / "cut.pdf")
    assert "no sheet" in refused(capsys, "recheck", folder / "low.toml")
    assert "no such file" in refused(capsys, "recheck", tmp_path / "none.pdf")
    assert "directory" in refused(capsys, "recheck", tmp_path)


@pytest.fixture
def without_engine(monkeypatch):
    monkeypatch.setattr(making, "derive", lambda *a, **k: derive(*a, **(k | {"other_engine": False})))


@pytest.mark.parametrize("kind", ["json", "html"])
def test_sheets_of_comparisons_and_redlines_are_rechecked_as_well(
    kind, folder, tmp_path, without_engine, capsys
):
    new = tmp_path / "new.toml"
    new.write_text(table.GOOD.replace("1k", "47k"), encoding="utf-8")
    low, out = str(folder / "low.toml"), str(tmp_path / "out")
    for command in ("compare", "redline"):
        assert main([command, low, str(new), "--out", out, "--only", kind, "--quiet"]) == 0
    for name in ("comparison", "redline"):
        assert main(["recheck", f"{out}/{name}.{kind}", "--quiet"]) == 0, capsys.readouterr()
        path = tmp_path / "out" / f"{name}.{kind}"
        path.write_bytes(path.read_bytes().replace(b"47", b"48", 1))
        assert main(["recheck", str(path), "--quiet"]) in (1, 2)


def test_a_redline_tells_changes_and_writes_the_same_as_a_sheet(folder, tmp_path, capsys):
    new = tmp_path / "new.toml"
    new.write_text(table.GOOD.replace("1k", "47k"), encoding="utf-8")
    out = tmp_path / "out"
    old = str(folder / "out" / "low.html")
    assert main(["redline", old, str(new), "--out", str(out), "--quiet"]) == 0
    shown, err = capsys.readouterr()
    assert err == ""
    assert "1 kΩ → 47 kΩ" in shown
    assert "\x1b" not in shown
    assert sorted(os.listdir(out)) == ["redline.html", "redline.json", "redline.pdf"]
    assert "~ changed" in (out / "redline.html").read_text(encoding="utf-8")


def test_a_redline_against_itself_says_so_and_ends_with_zero(folder, capsys):
    low = str(folder / "low.toml")
    assert main(["redline", low, low, "--quiet"]) == 0
    assert "nothing changed" in capsys.readouterr().out


def test_a_redline_that_cannot_be_made_ends_with_two(folder, tmp_path, capsys):
    low = folder / "low.toml"
    assert "no such file" in refused(capsys, "redline", low, tmp_path / "none.toml")
    assert "--out" in refused(capsys, "redline", low, low, "--only", "pdf")
    (tmp_path / "x.json").write_text("{", encoding="utf-8")
    assert "JSON" in refused(capsys, "redline", low, tmp_path / "x.json")


def test_start_writes_a_file_and_says_what_comes_next(tmp_path, monkeypatch, capsys):
    monkeypatch.chdir(tmp_path)
    assert main(["start", "mine", "--like", "post_filter"]) == 0
    assert "nodeledger sheet mine.toml" in capsys.readouterr().out
    assert os.listdir() == ["mine.toml"]
    assert "left as it is" in refused(capsys, "start", "mine")


def heed_control_c():
    # What is started in the background of a shell is deaf to it, and so would be its children.
    signal.signal(signal.SIGINT, signal.default_int_handler)


def test_watch_ends_cleanly_with_control_c(folder):
    with subprocess.Popen(
        [sys.executable, "-m", "derive", "watch", str(folder / "low.toml"), "--port", "0"],
        cwd=ROOT,
        stdout=subprocess.PIPE,
        stderr=subprocess.PIPE,
        text=True,
        preexec_fn=heed_control_c,
    ) as child:
        try:
            assert "http://127.0.0.1:" in child.stdout.readline()
            assert "derived" in child.stdout.readline()
            child.send_signal(signal.SIGINT)
            out, err = child.communicate(timeout=30)
        finally:
            child.kill()
    assert (child.returncode, out, err) == (0, "ended\n", "")


@pytest.mark.parametrize("port", ["-1", "70000"])
def test_watch_refuses_a_port_that_there_is_not(port, folder, capsys):
    assert "--port" in refused(capsys, "watch", folder / "low.toml", "--port", port)
