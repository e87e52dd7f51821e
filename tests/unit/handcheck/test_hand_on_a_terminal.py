"""A checked derivation on a terminal: verdicts, carets under the place, cures, and nothing that a terminal obeys."""

from __future__ import annotations

import re
from dataclasses import replace

import pytest
from follower import RIGHT, TOPOLOGY, WRONG, lines
from hand_lines import judged, solution_of

from derive.expressions.parse import parse_expression
from derive.expressions.tree import Equation
from derive.handcheck.check_lines import check_lines
from derive.handcheck.read import parse_hand
from derive.handcheck.report import Edit
from derive.sheet.hand.edits import told_edits
from derive.sheet.hand.lay_out import cells, rows_of
from derive.sheet.hand.plain import plain_report
from derive.sheet.hand.words import counts, failures, lines_of, short_failures, summary

HEAD = 'topology = "stage.toml"\nfind = "A_v"\nlines = """\n'


@pytest.fixture(scope="module")
def stage():
    return solution_of(TOPOLOGY, "A_v")


@pytest.fixture(scope="module")
def draft(stage):
    return judged(stage, *lines(WRONG))


def read(stage, *claims: str, title: str = ""):
    """Check lines as a file holds them, those that cannot be read included."""
    head = f'title = "{title}"\n' if title else ""
    return check_lines(stage, parse_hand(head + HEAD + "\n".join(claims) + '\n"""\n', "hand.toml"))


def pointed(shown: str, text: str) -> str:
    """Give what the caret stands under in the row that holds a text; the column counts, not the words."""
    rows = shown.splitlines()
    place = next(n for n, row in enumerate(rows) if text in row)
    marks = rows[place + 1]
    assert set(marks.strip()) == {"^"}
    return rows[place][marks.index("^") : marks.rindex("^") + 1]


def test_every_line_has_its_number_verdict_and_text(draft):
    shown = plain_report(draft)
    rows = shown.splitlines()
    for number, text in enumerate(lines(WRONG), 1):
        (row,) = (row for row in rows if row.startswith(f"{number:>3}  "))
        assert text.startswith(row[5:].split("  ")[-1].strip()[:40])
    found = [re.match(r" {1,2}(\d+)  (.{10})  \S", row) for row in rows]
    words = {int(match[1]): match[2].strip() for match in found if match}
    assert list(words) == list(range(1, 16))
    assert words[1] == "right"
    assert words[2] == words[7] == "wrong"
    assert words[3] == "new name"
    assert {words[n] for n in (8, 9, 10, 11, 12, 14, 15)} == {"carried on"}


def test_the_caret_stands_under_the_place_and_the_cure_below_it(stage):
    text = "K = beta*R_E/(R_S + r_pi + (beta + 1)*R_E)"
    shown = plain_report(read(stage, text))
    assert pointed(shown, text) in ("beta", "beta*R_E")
    assert "K = (beta + 1)*R_E/(R_S + r_pi + (beta + 1)*R_E)" in shown
    assert "line 1 is wrong: " in shown.splitlines()[-1]


def test_right_lines_have_no_caret(stage):
    assert "^" not in plain_report(judged(stage, *(line.replace("^", "**") for line in RIGHT)))


def test_a_line_that_cannot_be_read_is_pointed_at_and_the_others_are_judged(stage):
    report = read(stage, "A_v = v_out/V_s", "K = (beta + 1", "K = R_E R_S", "A_v = v_out/V_s + 1")
    assert [v.outcome for v in report.verdicts] == ["true", "unread", "unread", "mistake"]
    shown = plain_report(report)
    rows = shown.splitlines()
    unclosed = next(n for n, row in enumerate(rows) if row.endswith("K = (beta + 1"))
    assert rows[unclosed + 1].rstrip() == " " * len(rows[unclosed]) + "^"
    assert "expected" in rows[unclosed + 2]
    assert pointed(shown, "K = R_E R_S") == "R"
    assert "cure: " in shown


@pytest.mark.parametrize("before", ["電圧", "\t", "é", "e\u0301"])
def test_the_caret_keeps_its_place_behind_wide_and_empty_signs(before):
    text = f"{before} = 1 $ 2"
    (row,) = rows_of(text, 60, (text.index("$"), text.index("$") + 1))
    assert row.marks == " " * sum(cells(sign) for sign in text[: text.index("$")]) + "^"
    assert cells("電") == 2
    assert cells("\u0301") == 0


@pytest.mark.parametrize("room", [7, 10, 23, 200])
def test_rows_hold_all_of_a_text_and_mark_every_sign_of_the_place(room):
    text = "A_v = R_E*(beta + 1)/(R_S + r_pi + (beta + 1)*R_E) + aVeryLongNameThatFitsNoRow*R_S"
    place = text.index("(R_S"), text.index(" + aVery")
    rows = rows_of(text, room, place)
    assert "".join(row.text for row in rows) == text
    assert all(len(row.text) <= room for row in rows)
    marked = "".join(
        sign for row in rows for sign, mark in zip(row.text, row.marks, strict=False) if mark == "^"
    )
    assert marked == text[slice(*place)]


def test_a_very_long_line_shows_its_beginning_its_place_and_its_end(stage):
    long = " + ".join(["R_S/R_E"] * 300)
    text = f"A_v + {long} = v_out/V_s + {long} + 1/R_E"
    report = read(stage, text)
    shown = plain_report(report, 100)
    assert len(shown.splitlines()) < 60
    assert "…" in shown
    assert "A_v + R_S/R_E" in shown
    assert shown.count("1/R_E") >= 1
    assert all(len(row) <= 100 or "=" in row for row in shown.splitlines())


def test_what_a_user_writes_cannot_move_the_cursor_or_colour_the_terminal(stage):
    report = read(stage, r"A_v = v_out/V_s \\u001b[31m")
    evil = replace(
        report,
        title="\x1b[2J\x07title",
        verdicts=tuple(
            replace(v, line=replace(v.line, text="A_v\x1b[31m = \x9b1"), why="no\x1b[0m")
            for v in report.verdicts
        ),
    )
    shown = plain_report(evil)
    assert all(sign.isprintable() or sign == "\n" for sign in shown)
    assert "title" in shown


def test_colour_is_only_where_it_is_asked_for_and_changes_no_words(draft):
    plain, coloured = plain_report(draft), plain_report(draft, colour=True)
    assert "\x1b" not in plain
    assert "\x1b[31m" in coloured
    assert "\x1b[32m" in coloured
    bare = coloured
    for code in ("0", "31", "32", "33"):
        bare = bare.replace(f"\x1b[{code}m", "")
    assert [row.rstrip() for row in bare.splitlines()] == plain.splitlines()


def test_lines_are_counted_by_what_came_of_them(stage, draft):
    assert counts(draft) == {
        "right": 6,
        "wrong": 2,
        "carried_on": 7,
        "not_read": 0,
        "not_judged": 0,
    }
    assert summary(draft) == "15 lines: 6 right, 2 wrong, 7 follow from wrong ones"
    assert short_failures(draft) == (
        "lines 2 and 7 are wrong",
        "lines 8 to 12, 14 and 15 follow from wrong ones",
    )
    assert summary(judged(stage, *RIGHT)) == "15 lines: all right"
    assert failures(judged(stage, *RIGHT)) == ()
    assert summary(judged(stage, "A_v = 1")) == "1 line: 1 wrong"
    assert lines_of([3]) == "line 3"


def test_ties_and_names_that_cannot_be_used_are_told(stage):
    report = judged(stage, "K = K", given=["R_E^2 = 3"], define={"R_S": "3"})
    told = failures(report)
    assert any(words.startswith("the tie R_E^2 = 3 cannot be used") for words in told)
    assert any(words.startswith("the definition of R_S cannot be used") for words in told)
    assert not report.passed


def test_an_approximate_line_is_priced_in_words(stage):
    shown = plain_report(judged(stage, "A_v ~ K/(1 + s*b_1)", "K ~ 1"))
    assert "magnitude" in shown
    assert "pole at" in shown
    # R_E·(β + 1) = 222.2 kΩ against 3.1 kΩ: 1 is 1.4 % too much.
    assert "+1.4" in shown


def test_cures_that_differ_in_brackets_and_order_alone_are_told_once(draft):
    verdict = draft.verdicts[6]
    left = parse_expression("K")

    def edit(text: str) -> Edit:
        return Edit("sign", (1,), None, None, Equation(left, parse_expression(text)), text)

    several = tuple(map(edit, ("1 + beta + R_S", "beta + (R_S + 1)", "(1 + beta)*R_S", "R_S*(beta + 1)")))
    told = told_edits(replace(verdict, edits=several), 5)
    assert [each.says for each in told] == ["1 + beta + R_S", "(1 + beta)*R_S"]
    assert len(told_edits(replace(verdict, edits=several), 1)) == 1
