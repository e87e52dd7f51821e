"""The file of a hand derivation: what is read from it, and what makes it unusable."""

from __future__ import annotations

from pathlib import Path

import pytest

from derive.errors import InputError
from derive.expressions.text import to_text
from derive.handcheck.read import parse_hand, read_hand

FULL = """# page 3 of the notebook
title    = "Follower by hand"
topology = "buffer.toml"
find     = "A_v"
band     = "high"
lines = '''
v_out/R_E = (v_b - v_out)*(g_m + 1/r_pi + s*C_pi)     # KCL at the emitter
A_v ~ 1/(1 + s*R_S*C_mu)        # above the zero nothing matters
'''
given = ["g_m2 = g_m1", "R_3 = R_1/2"]
[define]
R_Sp = "R_S || r_pi"
"β_F" = "g_m·r_π"
"""


def test_a_whole_file_is_read_with_the_line_of_everything() -> None:
    hand = parse_hand(FULL, "notes/follower.toml")
    assert (hand.file, hand.topology, hand.find, hand.band) == (
        "follower.toml",
        "buffer.toml",
        "A_v",
        "high",
    )
    assert hand.title == "Follower by hand"
    assert hand.text == FULL
    assert [line.where for line in hand.lines] == ["follower.toml:7", "follower.toml:8"]
    assert [line.relation for line in hand.lines] == ["=", "~"]
    assert hand.lines[0].remark == "KCL at the emitter"
    ties = [(to_text(t.left), to_text(t.right), t.where) for t in hand.given]
    assert ties == [("g_m2", "g_m1", "follower.toml:10"), ("R_3", "R_1/2", "follower.toml:10")]
    names = [(d.name, to_text(d.meaning), d.where) for d in hand.define]
    assert names == [
        ("R_Sp", "R_S || r_pi", "follower.toml:12"),
        ("beta_F", "g_m*r_pi", "follower.toml:13"),
    ]


def test_lines_alone_make_a_derivation() -> None:
    hand = parse_hand('lines = "A_v = 1"', "h.toml")
    assert (hand.topology, hand.find, hand.band, hand.given, hand.define) == ("", "", "", (), ())
    assert hand.lines[0].where == "h.toml:1"


@pytest.mark.parametrize("quotes", ['"""', "'''"])
def test_latex_keeps_its_backslashes_whichever_quotes_are_about_it(quotes: str) -> None:
    # In TOML's double quotes \t is a tab, \b a backspace, \f a form feed, and \p is refused.
    lines = r"Z = \frac{\beta \times R_{E}}{2\pi}" + "\nY = \\right"
    hand = parse_hand(f"lines = {quotes}\n{lines}\n{quotes}\nfind = 'Z'\n", "h.toml")
    assert hand.lines[0].right is not None
    assert to_text(hand.lines[0].right) == "beta*R_E/(2*pi)"
    assert hand.lines[1].where == "h.toml:3"
    assert hand.find == "Z"


def test_a_line_that_cannot_be_read_leaves_the_others_readable() -> None:
    hand = parse_hand("lines = '''a = b\n2 c = d\ne = f'''", "h.toml")
    assert [line.fault is None for line in hand.lines] == [True, False, True]
    assert [line.where for line in hand.lines] == ["h.toml:1", "h.toml:2", "h.toml:3"]


@pytest.mark.parametrize(
    ("text", "where", "says", "cure"),
    [
        ("topology = 'a.toml'", "h.toml:1", "the file has no lines", "write lines"),
        ("\nlines = 3", "h.toml:2", "lines: a text is wanted, not the bare number 3", "write lines"),
        ("lines = '# only a remark'", "h.toml:1", "there is no claim in lines", "write lines"),
        ("lines = 'a = b'\nbands = 'high'", "h.toml:2", '"bands" is not known here', '"band"'),
        ("lines = 'a = b'\nfind = 3", "h.toml:2", "find: a text is wanted", "write it in quotes"),
        ("lines = 'a = b'\ngiven = 'a = b'", "h.toml:2", "given: a list is wanted", "given = ["),
        ("lines = 'a = b'\ngiven = [3]", "h.toml:2", "tie 1: a text is wanted", "quotes"),
        ("lines = 'a = b'\ngiven = ['a = 2 b']", "h.toml:2", "given, tie 1 cannot be read", '"*"'),
        ("lines = 'a = b'\ngiven = ['a ~ b']", "h.toml:2", '"a ~ b" is no equation', "given = ["),
        ("lines = 'a = b'\ndefine = 'x'", "h.toml:2", "define: a table is wanted", "[define]"),
        ("lines = 'a = b'\n[define]\nR_p = 3", "h.toml:3", '"R_p" wants an expression', "R_Sp"),
        (
            "lines = 'a = b'\n[define]\nR_p = 'a'\ngiven = ['a = b']",
            "h.toml:4",
            '"given" wants an expression, not a list',
            "write given above [define]",
        ),
        ("lines = 'a = b'\n[define]\n\n'a+b' = 'c'", "h.toml:4", '"a+b" is not a name', "letter"),
        ("lines = 'a = b'\n[define]\nR_p = 'a +'", "h.toml:3", "define: R_p cannot be read", "complete"),
        ("lines = '''\na = b\n", "h.toml:2", "not TOML", "quotes"),
        ("lines = 'a = b'\ngiven = [" + "'a = b'," * 50 + "]", "h.toml:2", "more than 40 ties", "keep"),
        ("lines = '''\n" + "a = b\n" * 501 + "'''", "h.toml:1", "more than 500 lines", "two"),
        ("lines = 'a = b\0'", "h.toml:1", "NUL", "plain text"),
    ],
)
def test_an_unusable_file_is_refused_in_one_message(text: str, where: str, says: str, cure: str) -> None:
    with pytest.raises(InputError) as caught:
        parse_hand(text, "h.toml")
    error = caught.value
    assert error.where == where
    assert says in error.what
    assert cure in error.cure


def test_a_file_that_is_not_there_is_an_input_error(tmp_path: Path) -> None:
    with pytest.raises(InputError, match="there is no such file"):
        read_hand(tmp_path / "none.toml")
    (tmp_path / "h.toml").write_text("lines = 'a = b'", encoding="utf-8")
    assert read_hand(tmp_path / "h.toml").lines[0].text == "a = b"
