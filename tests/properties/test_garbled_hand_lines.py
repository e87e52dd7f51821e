"""Whatever is typed as hand algebra is read, or refused with its place; nothing of it is ever run."""

from __future__ import annotations

import random

import pytest
from garbled_lines import PIECES, RIGHT, Watch, garbled
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from derive.errors import InputError
from derive.handcheck.read import parse_hand

SETTINGS = settings(
    max_examples=250,
    deadline=None,
    derandomize=True,
    suppress_health_check=[HealthCheck.function_scoped_fixture, HealthCheck.too_slow],
)


@pytest.fixture(scope="module")
def watch() -> Watch:
    made = Watch()
    # The grammar is loaded with the first line: that is the program's own file.
    from derive.expressions.parse import parse_expression

    parse_expression("a")
    return made


def test_right_lines_are_read(watch: Watch) -> None:
    assert [watch.read(line).fault for line in RIGHT] == [None] * len(RIGHT)


def test_two_thousand_garbled_lines_are_read_or_refused_with_their_places(watch: Watch) -> None:
    chance = random.Random(20261201)
    lines = [watch.read(garbled(chance)) for _ in range(2000)]
    read = sum(line.fault is None for line in lines)
    assert 200 < read < 1800


@SETTINGS
@given(text=st.text(max_size=60))
def test_any_text_at_all_is_read_or_refused(watch: Watch, text: str) -> None:
    watch.read(text)


@SETTINGS
@given(parts=st.lists(st.sampled_from(PIECES), max_size=30))
def test_any_order_of_the_signs_of_the_trade_is_read_or_refused(watch: Watch, parts: list[str]) -> None:
    watch.read("".join(parts))


@pytest.mark.parametrize(
    "text",
    [
        "A = " + "(" * 15_000,
        "A = " + "{" * 15_000,
        "A = " + r"\frac{" * 3_000,
        "A = " + r"\sqrt" * 4_000,
        "A = R_{" * 2_000,
        "A = " + "a_{" * 4_000 + "b" + "}" * 4_000,
        "A = " + "√" * 15_000 + "2",
        "A = " + "-" * 15_000 + "a",
        "A = " + "x^" * 8_000 + "2",
        "=" * 15_000,
        "A = " + r"\left" * 3_000,
        "A = " + r"a \parallel b " * 1_000,
        "A = " + r"\beta " * 3_000,
        "A = " + r"2a \beta " * 2_000,
        "A = " + "a_" * 8_000,
        "A = " + "₁" * 15_000,
        "A = (2^64)^64^64",
        "A = " + "9" * 15_000,
        "A" * 200_000,
    ],
    ids=range(19),
)
def test_what_is_made_to_exhaust_the_reader_is_refused_or_read_in_time(watch: Watch, text: str) -> None:
    watch.read(text)


def test_the_watch_sees_what_it_is_to_see() -> None:
    watch = Watch()
    watch.looking = True
    exec(compile("1", "nothing", "exec"))
    watch.looking = False
    assert {entry.split()[0] for entry in watch.seen} >= {"exec", "compile"}


def test_garbled_files_give_a_derivation_or_an_input_error() -> None:
    whole = (
        'topology = \'a.toml\'\nfind = \'A_v\'\nlines = """\na = \\frac{b}{c}\nd ~ e # f\n"""\n'
        "given = ['a = b']\n[define]\nR_p = 'a || b'\n"
    )
    chance = random.Random(7)
    read, refused = 0, []
    for _ in range(1000):
        text = whole
        for _ in range(chance.randint(1, 3)):
            at = chance.randrange(len(text))
            text = text[:at] + chance.choice(PIECES) + text[at + chance.randint(0, 8) :]
        try:
            parse_hand(text, "h.toml")
            read += 1
        except InputError as error:
            refused.append(error)
    assert read > 60
    assert len(refused) > 200
    assert all(error.where.startswith("h.toml") and error.cure for error in refused)
