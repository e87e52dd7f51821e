"""The command line as a user meets it: exit status, streams, files; never a traceback."""

from __future__ import annotations

import errno
import io
import json
import os
import pty
import re
import subprocess
import sys
from functools import partial
from pathlib import Path

import malformed_bias
import malformed_devices
import malformed_topologies as table
import pytest

import derive.batch
import derive.pipeline
import derive.progress
from derive.cli import main

ROOT = Path(__file__).parents[2]
CASE = ROOT / "cases" / "echo_preamp" / "topology.toml"
SMALLER_CASE = ROOT / "cases" / "level_averager" / "topology.toml"
ALL_ROWS = (
    *table.ROWS,
    *malformed_devices.READ,
    *malformed_devices.WORKED,
    *malformed_bias.CONTRADICTED,
    *malformed_bias.BIASED,
)
BUFFER = ROOT / "cases" / "line_buffer" / "topology.toml"


@pytest.fixture
def good(tmp_path):
    path = tmp_path / "good.toml"
    path.write_text(table.GOOD, encoding="utf-8")
    return path


def refused(capsys, *arguments):
    """Run a command that cannot be carried out and give its one message."""
    assert main([str(argument) for argument in arguments]) == 2
    out, err = capsys.readouterr()
    assert out == ""
    assert err.startswith("nodeledger: ")
    assert err.count("\n") == 1
    assert err.endswith("\n")
    assert "Traceback" not in err
    assert "internal" not in err
    return err.removeprefix("nodeledger: ").rstrip("\n")


@pytest.fixture
def alone(monkeypatch):
    """Work without the other engine, which takes its time and is not what is looked at."""
    monkeypatch.setattr(derive.batch, "derive", partial(derive.pipeline.derive, other_engine=False))


@pytest.fixture
def nothing_begins(monkeypatch):
    """Fail where any topology is worked."""
    monkeypatch.setattr(derive.batch, "derive", lambda *_, **__: pytest.fail("work was begun"))


def in_a_process(*arguments, cwd, **environment):
    return subprocess.run(
        [sys.executable, "-m", "derive", *map(str, arguments)],
        cwd=cwd,
        env={**os.environ, "PYTHONPATH": str(ROOT), **environment},
        capture_output=True,
        timeout=120,
        check=False,
    )


@pytest.mark.parametrize("command", ["sheet", "show"])
@pytest.mark.parametrize("row", ALL_ROWS, ids=lambda row: row.name.replace(" ", "-"))
def test_malformed_topology_gives_one_message_and_no_file(row, command, tmp_path, monkeypatch, capsys):
    monkeypatch.chdir(tmp_path)
    bad = Path("bad.toml")
    bad.write_bytes(row.text.encode("utf-8", "surrogatepass"))
    message = refused(capsys, command, bad)
    where = f"bad.toml:{row.line}: " if row.line else "bad.toml: "
    assert message.startswith(where)
    what, _, cure = message.partition("; ")
    assert len(what) > len(where)
    assert cure
    assert os.listdir() == ["bad.toml"]


@pytest.mark.parametrize(
    ("data", "line", "word"),
    [
        (b'[sheet]\ntitle = "\xe9cho"\n', 2, "UTF-8"),
        (b"\xef\xbb\xbf[sheet]\n", 1, "byte order mark"),
        (b"%PDF-1.7\n\x00\x01", 2, "NUL"),
        (bytes(range(128, 256)), 1, "UTF-8"),
    ],
)
def test_bytes_that_are_no_text_are_refused_with_their_line(data, line, word, tmp_path, capsys):
    bad = tmp_path / "bad.toml"
    bad.write_bytes(data)
    message = refused(capsys, "show", bad)
    assert message.startswith(f"{bad}:{line}: ")
    assert word in message


@pytest.mark.parametrize(
    "code",
    [
        "__import__('os').mkdir('ran')",
        "eval(compile('import os; os.mkdir(\\\"ran\\\")', '', 'exec'))",
        "{{ ''.__class__.__mro__ }}",
        '#eval(\\"1\\")',
        "$(mkdir ran)",
        "`mkdir ran`",
    ],
)
def test_code_in_place_of_a_value_is_refused_as_text_and_does_not_run(
    code, tmp_path, monkeypatch, capsys
):
    monkeypatch.chdir(tmp_path)
    text = table.GOOD.replace('resistor = "1k"', f'resistor = "{code}"')
    Path("bad.toml").write_text(text, encoding="utf-8")
    assert refused(capsys, "sheet", "bad.toml").startswith("bad.toml:6: part R_1")
    assert os.listdir() == ["bad.toml"]


def test_code_in_a_title_is_printed_as_it_stands(alone, tmp_path, monkeypatch, capsys):
    monkeypatch.chdir(tmp_path)
    title = "<script>x</script> {{ 7*7 }} #eval(1) $(mkdir ran)"
    Path("good.toml").write_text(table.GOOD.replace("Stage", title), encoding="utf-8")
    assert main(["sheet", "good.toml", "--only", "html", "--out", "out"]) == 0
    page = Path("out/good.html").read_text(encoding="utf-8")
    assert "<script>x" not in page
    assert "&lt;script&gt;x&lt;/script&gt; {{ 7*7 }} #eval(1) $(mkdir ran)" in page
    assert sorted(os.listdir()) == ["good.toml", "out"]


def test_file_that_is_missing_is_named(tmp_path, capsys):
    assert "nope.toml: there is no such file" in refused(capsys, "sheet", tmp_path / "nope.toml")


def test_directory_in_place_of_a_file_is_refused(tmp_path, capsys):
    assert "directory" in refused(capsys, "show", tmp_path)


def test_device_in_place_of_a_file_is_refused(capsys):
    assert "not a plain file" in refused(capsys, "show", "/dev/null")


def test_file_name_that_no_system_can_hold_is_refused(capsys):
    refused(capsys, "show", "x" * 5000)
    refused(capsys, "show", "a\0b")


def test_two_inputs_of_one_name_are_refused_before_any_work(good, tmp_path, nothing_begins, capsys):
    twin = tmp_path / "good" / "topology.toml"
    twin.parent.mkdir()
    twin.write_text(table.GOOD, encoding="utf-8")
    message = refused(capsys, "sheet", good, twin, "--out", tmp_path / "out")
    assert f"{good} and {twin} would both be written as good" in message
    assert not (tmp_path / "out").exists()


def test_one_bad_file_among_good_ones_stops_all_before_any_work(good, tmp_path, nothing_begins, capsys):
    bad = tmp_path / "bad.toml"
    bad.write_text(table.GOOD.replace("1k", "1q"), encoding="utf-8")
    assert str(bad) in refused(capsys, "sheet", good, bad, "--out", tmp_path / "out")
    assert not (tmp_path / "out").exists()


def test_work_that_begins_would_be_seen(good, tmp_path, nothing_begins):
    with pytest.raises(pytest.fail.Exception, match="work was begun"):
        main(["sheet", str(good), "--out", str(tmp_path / "out")])


@pytest.mark.parametrize("kinds", ["docx", "html,docx", "", ",", "HTML"])
def test_unknown_kind_of_output_is_refused(kinds, good, tmp_path, capsys):
    message = refused(capsys, "sheet", good, "--out", tmp_path / "out", "--only", kinds)
    assert "html, pdf and json" in message
    assert not (tmp_path / "out").exists()


def test_unknown_quantity_is_answered_with_those_there_are(capsys):
    message = refused(capsys, "show", BUFFER, "--find", "A_w")
    assert '"A_w"' in message
    assert "A_v, Z_e" in message


def test_unknown_band_is_answered_with_those_there_are(capsys):
    message = refused(capsys, "show", BUFFER, "--band", "full")
    assert '"full"' in message
    assert message.endswith("low, mid, high")


@pytest.mark.parametrize("arguments", [[], ["sheet"], ["show"], ["frobnicate"], ["show", "a", "b"]])
def test_command_that_is_incomplete_or_unknown_has_status_2(arguments, capsys):
    with pytest.raises(SystemExit) as end:
        main(arguments)
    out, err = capsys.readouterr()
    assert end.value.code == 2
    assert out == ""
    assert "usage: nodeledger" in err


def test_version_is_that_of_the_package(capsys):
    with pytest.raises(SystemExit) as end:
        main(["--version"])
    assert end.value.code == 0
    assert capsys.readouterr() == (f"nodeledger {derive.__version__}\n", "")


def test_sheets_go_to_the_folder_sheets_under_stem_or_folder_name(good, tmp_path, monkeypatch, capsys):
    monkeypatch.chdir(tmp_path)
    assert main(["sheet", "good.toml", str(CASE), "--only", "json"]) == 0
    assert sorted(os.listdir("sheets")) == ["echo_preamp.json", "good.json"]
    out, _ = capsys.readouterr()
    assert "echo_preamp" in out
    assert "10 passed" in out


def test_topology_in_the_folder_one_is_in_takes_that_folders_name(alone, tmp_path, monkeypatch):
    stage = tmp_path / "stage"
    stage.mkdir()
    (stage / "topology.toml").write_text(table.GOOD, encoding="utf-8")
    monkeypatch.chdir(stage)
    assert main(["sheet", "topology.toml", "--only", "json", "--out", "."]) == 0
    assert sorted(os.listdir()) == ["stage.json", "topology.toml"]


def test_only_writes_what_was_asked_for(alone, good, tmp_path):
    out = tmp_path / "out"
    assert main(["sheet", str(good), "--out", str(out), "--only", "json, html"]) == 0
    assert sorted(os.listdir(out)) == ["good.html", "good.json"]


def test_progress_goes_to_standard_error_and_quiet_silences_it(
    alone, good, tmp_path, monkeypatch, capsys
):
    monkeypatch.setattr(derive.progress, "PATIENCE_SECONDS", -1.0)
    command = ["sheet", str(good), "--out", str(tmp_path / "out"), "--only", "json"]
    assert main(command) == 0
    loud = capsys.readouterr()
    assert main([*command, "--quiet"]) == 0
    quiet = capsys.readouterr()
    assert "good: deriving A_v" in loud.err
    assert quiet.err == ""
    assert quiet.out == loud.out != ""


def test_short_work_says_nothing_on_standard_error(capsys):
    assert main(["show", str(CASE)]) == 0
    out, err = capsys.readouterr()
    assert err == ""
    assert "C_μ/g_m" in out


def test_find_shows_one_quantity_and_steps_show_the_derivation(capsys):
    assert main(["show", str(BUFFER), "--find", "Z_e"]) == 0
    brief = capsys.readouterr().out
    assert "Z_e = " in brief
    assert "A_v = " not in brief
    assert main(["show", str(BUFFER), "--find", "Z_e", "--steps", "--band", "mid"]) == 0
    long = capsys.readouterr().out
    assert "Solve" in long
    assert "Solve" not in brief


def test_two_processes_write_the_same_bytes(tmp_path):
    written = []
    for seed in ("1", "2"):
        place = tmp_path / seed
        place.mkdir()
        ended = in_a_process("sheet", SMALLER_CASE, "--out", "out", cwd=place, PYTHONHASHSEED=seed)
        assert ended.returncode == 0
        assert b"Traceback" not in ended.stderr
        written.append({path.name: path.read_bytes() for path in (place / "out").iterdir()})
    assert sorted(written[0]) == ["level_averager.html", "level_averager.json", "level_averager.pdf"]
    for name, data in written[0].items():
        assert data == written[1][name], name
    assert json.loads(written[0]["level_averager.json"])["ledger"] == 1
    assert written[0]["level_averager.pdf"].startswith(b"%PDF-")


def test_file_where_the_folder_should_be_is_refused_and_left_alone(alone, good, tmp_path, capsys):
    out = tmp_path / "out"
    out.write_text("mine", encoding="utf-8")
    message = refused(capsys, "sheet", good, "--out", out, "--only", "json", "--quiet")
    assert str(out) in message
    assert "--out" in message
    assert out.read_text(encoding="utf-8") == "mine"
    refused(capsys, "sheet", good, "--out", out / "deeper", "--only", "json", "--quiet")


def test_folder_where_a_file_should_be_is_refused_and_nothing_is_written(alone, good, tmp_path, capsys):
    out = tmp_path / "out"
    (out / "good.json").mkdir(parents=True)
    assert "good.json" in refused(capsys, "sheet", good, "--out", out, "--only", "html,json", "--quiet")
    assert os.listdir(out) == ["good.json"]


@pytest.mark.parametrize("call", ["fsync", "replace"])
def test_full_disk_leaves_no_file_and_keeps_the_old_ones(
    alone, call, good, tmp_path, monkeypatch, capsys
):
    out = tmp_path / "out"
    out.mkdir()
    (out / "good.json").write_text("old", encoding="utf-8")

    def full(*_):
        raise OSError(errno.ENOSPC, os.strerror(errno.ENOSPC))

    monkeypatch.setattr(os, call, full)
    message = refused(capsys, "sheet", good, "--out", out, "--only", "html,json", "--quiet")
    assert "No space left" in message
    assert os.listdir(out) == ["good.json"]
    assert (out / "good.json").read_text(encoding="utf-8") == "old"


def test_reader_who_leaves_is_no_reason_for_a_traceback(tmp_path):
    reading, writing = os.pipe()
    os.close(reading)
    with open(writing, "wb") as nowhere:
        ended = subprocess.run(
            [sys.executable, "-m", "derive", "show", str(BUFFER), "--steps", "--quiet"],
            stdout=nowhere,
            stderr=subprocess.PIPE,
            cwd=tmp_path,
            env={**os.environ, "PYTHONPATH": str(ROOT)},
            timeout=60,
            check=False,
        )
    assert ended.stderr == b""
    assert ended.returncode in (0, 2)


def test_terminal_that_knows_no_greek_is_no_reason_for_a_traceback(tmp_path):
    ended = in_a_process("show", CASE, "--steps", cwd=tmp_path, PYTHONIOENCODING="ascii", LC_ALL="C")
    assert b"Traceback" not in ended.stderr
    assert b"internal" not in ended.stderr
    assert ended.returncode == 0


def on_a_terminal(tmp_path, **environment):
    """Run `sheet` with a terminal for standard output and give what it shows."""
    try:
        ours, theirs = pty.openpty()
    except OSError:
        pytest.skip("this machine has no terminal to open")
    try:
        ended = subprocess.run(
            [sys.executable, "-m", "derive", "sheet", str(CASE), "--only", "json", "--quiet"],
            stdout=theirs,
            stderr=subprocess.PIPE,
            cwd=tmp_path,
            env={**os.environ, "PYTHONPATH": str(ROOT), "TERM": "xterm-256color", **environment},
            timeout=60,
            check=False,
        )
        shown = os.read(ours, 65536).decode("utf-8")
    finally:
        os.close(ours)
        os.close(theirs)
    assert ended.returncode == 0
    return shown


def test_no_color_is_honoured_on_a_terminal(tmp_path):
    shown = on_a_terminal(tmp_path, NO_COLOR="1")
    assert "echo_preamp" in shown
    assert not re.search(r"\x1b\[[0-9;]*[34][0-7]", shown)


def test_no_escapes_are_written_where_there_is_no_terminal(tmp_path):
    ended = in_a_process("sheet", CASE, "--only", "json", cwd=tmp_path, FORCE_COLOR="")
    assert ended.returncode == 0
    assert b"\x1b" not in ended.stdout + ended.stderr


@pytest.mark.parametrize(
    ("error", "words"),
    [
        (RecursionError(), "too large"),
        (MemoryError(), "too large"),
        (KeyboardInterrupt(), "stopped"),
        (ZeroDivisionError("x"), "defect of the program"),
    ],
)
def test_whatever_happens_inside_is_told_in_words(error, words, good, monkeypatch, capsys):
    def fall(*_, **__):
        raise error

    monkeypatch.setattr(derive.pipeline, "derive", fall)
    assert main(["show", str(good)]) == 2
    out, err = capsys.readouterr()
    assert out == ""
    assert words in err
    assert "Traceback" not in err


def test_standard_output_that_cannot_be_written_is_no_traceback(good, monkeypatch, capsys):
    class Full(io.StringIO):
        def write(self, text):
            raise OSError(errno.ENOSPC, os.strerror(errno.ENOSPC))

    monkeypatch.setattr(sys, "stdout", Full())
    assert main(["show", str(good)]) == 2
    assert "Traceback" not in capsys.readouterr().err
