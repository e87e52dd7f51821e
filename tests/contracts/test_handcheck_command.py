"""`nodeledger handcheck` as a user meets it, and a derivation that a topology names: status, streams, files."""

import io
import json
import re
import shutil
from functools import partial
from pathlib import Path

import malformed_topologies as table
import pikepdf
import pytest

import derive.batch
import derive.handcheck.check_lines as check_lines
import derive.render.pdf
from derive.cli import main
from derive.errors import InputError, OutputError
from derive.handcheck.prove import DIFFERENT
from derive.pipeline import derive as worked
from derive.reading.read import read

ROOT = Path(__file__).parents[2]
CASE = ROOT / "cases" / "line_buffer"
# The low-pass of the table: R_1 from the source to the output, C_1 from there to ground.
HAND = (
    'topology = "low.toml"\nlines = """\n(V_s - v_out)/R_1 = s*C_1*v_out\nA_v = 1/(1 + s*R_1*C_1)\n"""\n'
)
WRONG = HAND.replace("(1 + s*R_1*C_1)", "(1 - s*R_1*C_1)")


@pytest.fixture
def folder(tmp_path, monkeypatch):
    (tmp_path / "low.toml").write_text(table.GOOD, encoding="utf-8")
    monkeypatch.chdir(tmp_path)
    return tmp_path


@pytest.fixture
def one_engine(monkeypatch):
    """Leave the other engine out of sheets: it takes long, and lines by hand are none of its business."""
    monkeypatch.setattr(derive.batch, "derive", partial(worked, other_engine=False))


def write(folder, text, name="hand.toml"):
    (folder / name).write_text(text, encoding="utf-8")
    return name


def attach(folder, text):
    """Let the topology name a derivation."""
    write(folder, text)
    named = table.GOOD.replace(table.SHEET, table.SHEET + 'hand = "hand.toml"\n')
    (folder / "low.toml").write_text(named, encoding="utf-8")


def refused(capsys, *arguments, command="handcheck"):
    """Run the command where it cannot be carried out and give its one message."""
    assert main([command, *map(str, arguments)]) == 2
    out, err = capsys.readouterr()
    assert out == ""
    assert err.startswith("nodeledger: ")
    assert err.count("\n") == 1
    assert "Traceback" not in err
    assert "internal" not in err
    return err.removeprefix("nodeledger: ").rstrip("\n")


def test_a_right_derivation_ends_with_0_and_nothing_is_written(folder, capsys):
    assert main(["handcheck", write(folder, HAND), "--quiet"]) == 0
    out, err = capsys.readouterr()
    assert err == ""
    assert re.search(r"^ 1  right  \(V_s - v_out\)/R_1 = s\*C_1\*v_out$", out, re.MULTILINE)
    assert out.endswith("2 lines: all right\n")
    assert sorted(path.name for path in folder.iterdir()) == ["hand.toml", "low.toml"]


def test_the_derivation_of_the_case_is_right_in_all_its_lines(capsys):
    assert main(["handcheck", str(CASE / "hand.toml"), "--quiet"]) == 0
    assert capsys.readouterr().out.endswith("15 lines: all right\n")


def test_a_wrong_line_ends_with_1_and_is_pointed_at_with_its_cure(folder, capsys):
    assert main(["handcheck", write(folder, WRONG), "--quiet"]) == 1
    out = capsys.readouterr().out
    assert "A_v = 1/(1 + s*R_1*C_1)" in out
    assert "^" in out
    assert "line 2 is wrong" in out
    assert "\x1b" not in out


def test_a_line_that_cannot_be_read_ends_with_1_and_the_others_are_judged(folder, capsys):
    text = HAND.replace("A_v = 1/", "A_v = = 1/\nA_v = 1/")
    assert main(["handcheck", write(folder, text), "--quiet"]) == 1
    out = capsys.readouterr().out
    assert "3 lines: 2 right, 1 cannot be read" in out
    assert re.search(r"^ 3  right ", out, re.MULTILINE)


@pytest.mark.parametrize(
    ("text", "words"),
    [
        ("", "lines"),
        ("lines = 3\n", "lines"),
        ("lines = '''\n# nothing\n'''\n", "no claim"),
        (HAND.replace('topology = "low.toml"\n', ""), "names no topology"),
        (HAND.replace("low.toml", "lou.toml"), "hand.toml:1: topology: there is no file lou.toml"),
        (HAND.replace("low.toml", "/low.toml"), "beside this one"),
        (HAND.replace("low.toml", "."), "directory"),
        (
            'find = "A_w"\n' + HAND,
            'hand.toml:1: find: "A_w" is no quantity wanted in low.toml; did you mean',
        ),
        ('band = "high"\n' + HAND, 'hand.toml:1: band: "high" is no band of low.toml; it has full'),
        ('author = "x"\n' + HAND, '"author"'),
        (HAND + 'given = ["R_1"]\n', "given"),
        (HAND + '[define]\nx = "1 +"\n', "ends too early"),
        (HAND + "= 1\n", "not TOML"),
    ],
)
def test_a_file_that_cannot_be_used_is_refused_with_one_message(folder, capsys, text, words):
    message = _flat(capsys, write(folder, text))
    assert words in message


def _flat(capsys, name):
    """Give a refusal; one that points into an expression takes the rows that the caret needs."""
    assert main(["handcheck", name]) == 2
    out, err = capsys.readouterr()
    assert out == ""
    assert err.startswith("nodeledger: ")
    assert "Traceback" not in err
    assert "internal" not in err
    return err


def test_what_is_no_file_is_refused(folder, capsys):
    assert "no such file" in refused(capsys, "none.toml")
    assert "directory" in refused(capsys, ".")


def test_where_there_are_several_bands_the_file_must_say_which(tmp_path, capsys):
    for name in ("topology.toml", "hand.toml"):
        shutil.copy(CASE / name, tmp_path / name)
    text = (tmp_path / "hand.toml").read_text(encoding="utf-8")
    for key in ("find", "band"):
        line = next(line for line in text.splitlines() if line.startswith(key))
        name = write(tmp_path, text.replace(line + "\n", ""))
        assert f"{key} is missing, and it has" in refused(capsys, tmp_path / name)


def test_only_without_a_folder_is_refused_before_any_work(capsys):
    assert "--out" in refused(capsys, "none.toml", "--only", "pdf")
    assert "no kind of file" in refused(capsys, "none.toml", "--out", "x", "--only", "doc")


def test_files_are_written_where_a_folder_is_named(folder, capsys):
    write(folder, WRONG, "second_try.toml")
    assert main(["handcheck", "second_try.toml", "--out", "made", "--quiet"]) == 1
    assert (
        capsys.readouterr()
        .out.rstrip()
        .endswith("made/second_try.html, made/second_try.pdf, made/second_try.json")
    )
    data = json.loads((folder / "made" / "second_try.json").read_text(encoding="utf-8"))
    assert [line["passed"] for line in data["hand"]["lines"]] == [True, False]
    with pikepdf.open(folder / "made" / "second_try.pdf") as opened:
        names = sorted(opened.attachments)
        assert names == ["low.toml", "second_try.json", "second_try.toml"]
        held = opened.attachments["second_try.toml"].get_file().read_bytes()
        assert held.decode() == WRONG
    first = {path.name: path.read_bytes() for path in (folder / "made").iterdir()}
    for path in (folder / "made").glob("*.[hj]*"):
        path.unlink()
    main(["handcheck", "second_try.toml", "--out", "made", "--only", "html,json", "--quiet"])
    assert first == {path.name: path.read_bytes() for path in (folder / "made").iterdir()}


def test_on_request_true_lines_are_multiplied_out_as_well(folder, monkeypatch):
    (folder / "exact.toml").write_text(HAND, encoding="utf-8")

    def proofs():
        status = main(["handcheck", "exact.toml", "--exact", "--out", "out", "--only", "json", "--quiet"])
        lines = json.loads((folder / "out" / "exact.json").read_text(encoding="utf-8"))["hand"]["lines"]
        return status, [line["proof"] for line in lines]

    status, told = proofs()
    assert status == 0
    assert all("identical when multiplied out" in proof for proof in told)
    monkeypatch.setattr(check_lines, "proved_exactly", lambda *sides: DIFFERENT)
    status, told = proofs()
    assert status == 1


def test_the_sheet_of_a_file_called_hand_is_named_after_its_folder(folder):
    inner = folder / "buffer"
    inner.mkdir()
    shutil.copy(folder / "low.toml", inner)
    write(inner, HAND)
    assert main(["handcheck", "buffer/hand.toml", "--out", "made", "--only", "json", "--quiet"]) == 0
    assert [path.name for path in (folder / "made").iterdir()] == ["buffer_hand.json"]


def test_a_folder_that_cannot_be_written_ends_with_2(folder, capsys):
    write(folder, HAND)
    assert "made" in refused(capsys, "hand.toml", "--out", write(folder, "", "made"), "--quiet")


def test_where_the_pdf_cannot_be_made_the_other_files_are_whole(folder, monkeypatch, capsys):
    def broken(*_):
        raise OutputError("no PDF can be written")

    monkeypatch.setattr(derive.render.pdf, "to_pdf", broken)
    assert "no PDF" in refused(capsys, write(folder, HAND), "--out", "made", "--quiet")
    assert sorted(path.suffix for path in (folder / "made").iterdir()) == [".html", ".json"]


class Terminal(io.StringIO):
    def isatty(self):
        return True


@pytest.mark.parametrize(
    ("variable", "value", "coloured"),
    [("NO_COLOR", "", True), ("NO_COLOR", "1", False), ("TERM", "dumb", False)],
)
def test_colour_is_for_terminals_alone_and_no_color_is_honoured(
    folder, monkeypatch, variable, value, coloured
):
    write(folder, WRONG)
    monkeypatch.delenv("NO_COLOR", raising=False)
    monkeypatch.setenv("TERM", "xterm")
    monkeypatch.setenv(variable, value)
    screen = Terminal()
    monkeypatch.setattr("sys.stdout", screen)
    assert main(["handcheck", "hand.toml", "--quiet"]) == 1
    assert ("\x1b[31m" in screen.getvalue()) is coloured


def test_a_derivation_that_the_topology_names_stands_beside_the_result(folder, one_engine, capsys):
    attach(folder, HAND)
    assert main(["show", "low.toml", "--quiet"]) == 0
    assert "✓ 2 lines: all right" in capsys.readouterr().out
    assert main(["sheet", "low.toml", "--only", "html,json", "--quiet"]) == 0
    assert "2 lines: all right" in capsys.readouterr().out
    data = json.loads((folder / "sheets" / "low.json").read_text(encoding="utf-8"))
    assert data["hand"]["text"] == HAND
    assert [line["verdict"] for line in data["hand"]["lines"]] == ["true", "true"]
    page = (folder / "sheets" / "low.html").read_text(encoding="utf-8")
    assert "erivation by hand of" in page
    assert 'id="at-hand_2d2"' in page


def test_a_wrong_line_fails_the_sheet(folder, one_engine, capsys):
    attach(folder, WRONG)
    assert main(["sheet", "low.toml", "--only", "html", "--quiet"]) == 1
    assert "FAILED: 2 lines: 1 right, 1 wrong" in " ".join(capsys.readouterr().out.split())
    page = (folder / "sheets" / "low.html").read_text(encoding="utf-8")
    assert "<li>by hand: line 2 is wrong</li>" in page
    assert main(["show", "low.toml", "--quiet"]) == 1
    assert "✗ line 2 is wrong" in capsys.readouterr().out
    # A comparison is of the circuits.
    assert main(["compare", "low.toml", "low.toml", "--quiet"]) == 2
    write(folder, table.GOOD, "other.toml")
    capsys.readouterr()
    assert main(["compare", "low.toml", "other.toml", "--quiet"]) == 0


def test_without_one_the_ledger_says_nothing_of_hands(folder):
    assert "hand" not in worked(read("low.toml"), other_engine=False).ledger()
    attach(folder, HAND)
    assert "hand" in worked(read("low.toml"), other_engine=False).ledger()
    assert "hand" not in worked(read("low.toml"), other_engine=False, hand=False).ledger()


@pytest.mark.parametrize(
    ("text", "words"),
    [
        (HAND.replace("low.toml", "high.toml"), "belongs to high.toml"),
        ('find = "Z"\n' + HAND, "no quantity wanted"),
        ("lines = '''", "not TOML"),
    ],
)
def test_one_that_cannot_be_used_stops_the_work_before_it_begins(folder, text, words):
    attach(folder, text)
    with pytest.raises(InputError, match=words) as caught:
        worked(read("low.toml"), other_engine=False, progress=lambda _: pytest.fail("work was begun"))
    assert caught.value.where.startswith("hand.toml")
