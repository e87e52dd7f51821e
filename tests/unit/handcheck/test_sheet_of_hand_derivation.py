"""The sheet of a hand derivation: lines as written, verdicts in the margin, cures, links that lead somewhere."""

from __future__ import annotations

import json
import re

import pytest
from follower import RIGHT, TOPOLOGY, WRONG, lines
from hand_lines import solution_of

from derive.algebra.modular import PRIME
from derive.expressions.parse import parse_expression
from derive.expressions.tree import Equation, Name
from derive.expressions.walk import evaluate_modulo, names_of
from derive.handcheck.check_lines import check_lines
from derive.handcheck.read import parse_hand
from derive.reading.read import parse
from derive.render.breaking import Breaker
from derive.render.html import to_html
from derive.render.typesetter import Measurer
from derive.render.within_words import run_on, slashed
from derive.sheet.document import Display, Mark, Maths, Paragraph, Reference, SourceText
from derive.sheet.hand.blocks import line_blocks
from derive.sheet.hand.compose import compose_hand
from derive.sheet.hand.within_words import with_maths
from derive.sheet.plain import line_text

FURTHER = ("K ~ 1", "K = (beta + 1")


@pytest.fixture(scope="module")
def checked():
    """The derivation with two slips, an approximate line, and one that cannot be read."""
    stage = solution_of(TOPOLOGY, "A_v")
    body = "\n".join((*lines(WRONG), *FURTHER))
    text = f'topology = "stage.toml"\nfind = "A_v"\ntitle = "Follower"\nlines = """\n{body}\n"""\n'
    hand = parse_hand(text, "hand.toml")
    return check_lines(stage, hand), hand, parse(TOPOLOGY, "stage.toml")


@pytest.fixture(scope="module")
def sheet(checked):
    return compose_hand(*checked, "follower_hand")


def displays(report):
    return [block for block in line_blocks(report) if isinstance(block, Display)]


def test_lines_stand_as_they_were_written_with_number_and_verdict(checked):
    report, _, _ = checked
    shown = {block.number: block for block in displays(report) if block.number}
    assert list(shown) == [f"H{number}" for number in range(1, 17)]
    for number, text in enumerate((*lines(WRONG), FURTHER[0]), 1):
        sign = "~" if "~" in text else "="
        sides = [parse_expression(side) for side in text.split(sign)]
        block = shown[f"H{number}"]
        assert block.content == Equation(*sides, sign)
        assert block.anchor == f"hand-{number}"
        assert isinstance(block.reason[0], Mark)
    passed = {number: block.reason[0].passed for number, block in shown.items()}
    assert passed["H1"] is True
    assert passed["H2"] is passed["H7"] is passed["H8"] is False
    assert passed["H16"] is True


def test_the_cure_is_an_equation_right_below_its_line(checked):
    found = displays(checked[0])
    place = next(n for n, block in enumerate(found) if block.number == "H7")
    cure = found[place + 1]
    assert cure.number is None
    right = parse_expression(RIGHT[6].split(" = ")[1])
    values = {name: 3 + place**2 for place, name in enumerate(names_of(right))}
    assert cure.content.left == Name("V_s")
    mended, wrong = cure.content.right, found[place].content.right
    assert evaluate_modulo(mended, values, PRIME) == evaluate_modulo(right, values, PRIME)
    assert evaluate_modulo(wrong, values, PRIME) != evaluate_modulo(right, values, PRIME)
    assert line_text(cure.reason).startswith("Cure: ")
    # A line that is carried on has no cure of its own.
    assert found[place + 2].number == "H8"
    assert found[place + 3].number == "H9"


def test_a_line_that_cannot_be_read_is_shown_as_typed_with_a_caret(checked):
    blocks = line_blocks(checked[0])
    (source,) = (block for block in blocks if isinstance(block, SourceText))
    assert source.text == f"{FURTHER[1]}\n{' ' * len(FURTHER[1])}^"
    before = blocks[blocks.index(source) - 1]
    assert isinstance(before, Paragraph)
    assert before.tone == "alarm"
    assert "expected" in line_text(before.line)


def test_every_link_leads_to_a_line_that_is_there(sheet):
    anchors = {b.anchor for section in sheet.sections for b in section.blocks if isinstance(b, Display)}
    lines_of_words = [
        line
        for section in sheet.sections
        for block in section.blocks
        for line in ((block.reason,) if isinstance(block, Display) else (getattr(block, "line", ()),))
    ]
    links = [item for line in lines_of_words for item in line if isinstance(item, Reference)]
    assert {link.anchor for link in links} <= anchors
    # The lines carried on point to line 7 and to those between.
    assert "hand-7" in {link.anchor for link in links}
    # Line 17 could not be read and is no equation, so that nothing links to it.
    assert any("H17" in line_text(line) for line in lines_of_words)


def test_names_and_proposed_expressions_within_words_are_set_as_maths():
    product = parse_expression("(beta + 1)*R_E")
    line = with_maths("line 7: write (beta + 1)*R_E for beta, not for R_S or the line", (product,), {7})
    assert [item.content for item in line if isinstance(item, Maths)] == [
        product,
        Name("beta"),
        Name("R_S"),
    ]
    assert [item.number for item in line if isinstance(item, Reference)] == ["H7"]
    assert line_text(line) == "line (H7): write (β + 1)·R_E for β, not for R_S or the line"


def test_the_summary_stands_on_top_and_the_first_page_warns(sheet):
    first = sheet.sections[0]
    words = line_text(first.blocks[0].line)
    # Lines 1, 3 to 6 and 13 of the derivation, and the approximate one.
    assert words == "17 lines: 7 right, 2 wrong, 7 follow from wrong ones, 1 cannot be read."
    assert not sheet.passed
    assert sheet.failures[0] == "lines 2 and 7 are wrong"
    page = to_html(sheet).decode()
    assert "is not to be relied on" in page
    assert "✗ 17 lines: 7 right" in page
    assert "≈" in page


def test_a_right_derivation_has_a_sheet_without_a_warning(checked):
    _, hand, topology = checked
    stage = solution_of(TOPOLOGY, "A_v")
    text = hand.text.replace("\n".join((*lines(WRONG), *FURTHER)), "\n".join(RIGHT))
    right = parse_hand(text, "hand.toml")
    sheet = compose_hand(check_lines(stage, right), right, topology, "follower_hand")
    assert sheet.passed
    assert sheet.failures == ()
    assert sheet.status == "15 lines: all right"


def test_the_sheet_carries_both_files_and_the_data(checked, sheet):
    _, hand, topology = checked
    assert [(s.file, s.text) for s in sheet.sources] == [
        ("hand.toml", hand.text),
        ("stage.toml", topology.text),
    ]
    data = json.loads(sheet.ledger_text)
    assert data["handcheck"] == 1
    assert data["topology"]["text"] == topology.text
    found = data["hand"]
    assert found["text"] == hand.text
    assert (found["find"], found["band"], found["passed"]) == ("A_v", "full", False)
    assert [line["n"] for line in found["lines"]] == list(range(1, 18))
    assert [line["text"] for line in found["lines"]] == [*lines(WRONG), *FURTHER]
    assert found["counts"]["wrong"] == 2
    seventh = found["lines"][6]
    assert seventh["verdict"] == "mistake"
    assert seventh["edits"][0]["line"].count("R_S") == 2
    start, end = seventh["place"]
    assert seventh["text"][start:end] in RIGHT[6]
    assert found["lines"][7]["follows_from"][0] == 7
    assert found["lines"][15]["price"]["relative"] == pytest.approx(
        # K = 222.0/(0.6 + 2.5 + 222.2) by hand, with β = 100.
        (0.6 + 2.5 + 101 * 2.2) / (101 * 2.2) - 1,
        rel=1e-5,
    )
    assert found["lines"][16]["place"] == [len(FURTHER[1]), len(FURTHER[1]) + 1]


def test_the_same_derivation_gives_the_same_bytes(checked, sheet):
    again = compose_hand(*checked, "follower_hand")
    assert again == sheet
    assert to_html(again) == to_html(sheet)


def test_the_sign_of_an_approximation_is_kept_where_a_line_is_broken():
    left, right = Name("K"), parse_expression(" + ".join(f"R_{n}*C_{n}" for n in range(40)))
    near, equal = Equation(left, right, "~"), Equation(left, right)
    breaker = Breaker(Measurer())
    breaker.prepare([near, equal])
    rows = [row.source for row in breaker.rows(near, 20.0)]
    assert len(rows) > 2
    assert rows[0].startswith("K & approx ")
    assert breaker.rows(equal, 20.0)[0].source.startswith("K & = ")
    long = Equation(right, left, "~")
    assert any("approx" in row.source for row in breaker.rows(long, 20.0))
    assert " approx " in slashed(near)
    assert run_on(near)[1].startswith("approx med ")
    assert not re.search("approx", slashed(equal))
