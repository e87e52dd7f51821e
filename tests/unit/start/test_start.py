"""Beginning a topology file: commented, never written over, and sound as it stands."""

import tomllib
from pathlib import Path

import pytest

from derive.errors import InputError, OutputError
from derive.pipeline import derive
from derive.reading.read import parse, read
from derive.start.explain import EXPLAINED
from derive.start.start import beginning, case_names, case_text, start

CASES = Path(__file__).parents[3] / "cases"


@pytest.fixture
def here(tmp_path, monkeypatch):
    monkeypatch.chdir(tmp_path)
    return tmp_path


def comments_over_tables(text):
    """Give each table of a file with the comment lines right above its first heading."""
    lines, found = text.split("\n"), {}
    for number, line in enumerate(lines):
        if line.startswith("["):
            name = line.strip("[").partition("]")[0].partition(".")[0]
            first = number
            while first and lines[first - 1].startswith("#"):
                first -= 1
            found.setdefault(name, lines[first:number])
    return found


def test_the_file_that_is_begun_derives_with_all_checks_passed(here):
    path = start("amp")
    assert path == Path("amp.toml")
    outcome = derive(read(path), other_engine=False).outcome
    assert outcome.passed
    # By hand: V_B = 12 V·15/97 less what the base takes, about 1.8 V, so that 1.1 mA flow and g_m is 43 mS;
    # into 4.7 kΩ ∥ 10 kΩ that is a gain of about −110 or more with the source's 600 Ω against r_π.
    (gain,) = [
        r.solution.numbers.gain
        for r in outcome.results
        if r.solution.band_name == "mid" and r.solution.derivation.system.find.name == "A_v"
    ]
    assert -140 < gain < -90


@pytest.mark.parametrize("name", [None, *case_names()])
def test_every_table_is_explained_in_comments_over_it(name):
    text = beginning("mine", name)
    for table, comments in comments_over_tables(text).items():
        told = [f"# {line}" for line in EXPLAINED[table]]
        assert comments[-len(told) :] == told, table


@pytest.mark.parametrize("name", case_names())
def test_a_beginning_like_a_case_says_the_same_as_the_case(name):
    begun, case = tomllib.loads(beginning("mine", name)), tomllib.loads(case_text(name))
    assert begun["sheet"].pop("title") == "mine"
    case["sheet"].pop("title")
    assert begun == case
    parse(beginning("mine", name), "mine.toml")


def test_every_case_can_be_begun_from():
    assert case_names() == tuple(sorted(p.parent.name for p in CASES.glob("*/topology.toml")))


def test_a_file_that_is_there_is_left_as_it_is(here):
    (here / "amp.toml").write_text("mine", encoding="utf-8")
    with pytest.raises(OutputError, match=r"amp\.toml: there is a file of this name"):
        start("amp")
    assert (here / "amp.toml").read_text(encoding="utf-8") == "mine"


def test_the_ending_may_be_written_and_the_name_becomes_the_title(here):
    assert start("second_stage.toml") == Path("second_stage.toml")
    assert read("second_stage.toml").title_block.title == "second stage"


@pytest.mark.parametrize(
    "name", ["", ".", "..", "a/", ".hidden", "-x", 'a"b', "a\nb", "a\\b", "x" * 300, ".toml"]
)
def test_a_name_that_no_file_should_have_is_refused(name, here):
    with pytest.raises(InputError, match="no name"):
        start(name)
    assert list(here.iterdir()) == []


def test_a_folder_that_is_not_there_is_said(here):
    with pytest.raises(OutputError, match="cannot be written"):
        start("no/where")


@pytest.mark.parametrize("like", ["line_bufer", "../../etc", "", "/"])
def test_a_case_that_there_is_not_is_refused_with_those_there_are(like, here):
    with pytest.raises(InputError, match="no case"):
        start("amp", like)
    with pytest.raises(InputError, match='did you mean "line_buffer"'):
        start("amp", "line_bufer")
    assert list(here.iterdir()) == []


def test_every_table_that_a_file_may_have_is_explained():
    from derive.reading.read import _TABLES

    assert set(_TABLES) <= set(EXPLAINED)
