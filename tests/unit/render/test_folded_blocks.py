"""Folded blocks: closed on a screen until asked for, open and whole on paper."""

from __future__ import annotations

import io
from dataclasses import replace

import pikepdf
import pytest

from derive.expressions.parse import parse_expression
from derive.expressions.tree import Equation, Name
from derive.render.groups import groups
from derive.render.html import to_html
from derive.render.maths import SheetMaths
from derive.render.pdf import to_pdf
from derive.sheet.document import (
    Column,
    Display,
    Folded,
    Maths,
    Paragraph,
    Reference,
    Section,
    Sheet,
    Table,
    Text,
    unfolded,
)

EQUATION = Equation(Name("R_C_mu"), parse_expression("R_S || (r_pi + R_E)"))
FOLDED = Folded(
    (Text("Derivation of "), Maths(Name("R_C_mu"))),
    (
        Display(EQUATION, (Text("solved for it"),), "R1.2", "seen-1-2"),
        Table("Inner", (Column((Text("Part"),)),), (((Maths(Name("C_cab")),),),)),
        Paragraph((Text("and so on"),)),
    ),
)
SHEET = Sheet(
    "Folded", (), True, (),
    (Section("Time constants", (Paragraph((Reference("seen-1-2", "R1.2"),)), FOLDED)),),
    "t.toml", "[sheet]\n", "t.json", "{}\n",
)  # fmt: skip


def test_blocks_within_follow_the_folded_one():
    assert unfolded((FOLDED, Paragraph(()))) == (FOLDED, *FOLDED.blocks, Paragraph(()))


def test_formulas_within_are_set():
    formulas = SheetMaths(SHEET)
    assert formulas.covers(SHEET)
    without = replace(SHEET, sections=(Section("Time constants", (Paragraph(()),)),))
    assert not SheetMaths(without).covers(SHEET)


def test_a_page_on_a_screen_opens_it_on_a_click_and_links_lead_into_it():
    page = to_html(SHEET).decode("utf-8")
    inside = page[page.index("<details") : page.index("</details>")]
    assert "<summary>Derivation of <math" in inside
    assert 'id="at-seen_2d1_2d2"' in inside
    assert "and so on" in inside
    assert "<details open" not in page
    assert 'href="#at-seen_2d1_2d2"' in page


def test_paper_shows_it_open():
    with pikepdf.open(io.BytesIO(to_pdf(SHEET))) as opened:
        assert len(opened.pages) == 1
    # What is folded takes room on paper.
    bare = replace(SHEET, sections=(Section("Time constants", (Paragraph((Text("x"),)),)),))
    assert len(to_pdf(SHEET)) > len(to_pdf(bare))


@pytest.mark.parametrize("count", [1, 40])
def test_a_heading_does_not_hold_a_whole_folded_derivation_on_its_page(count):
    long = replace(FOLDED, blocks=FOLDED.blocks * count)
    (group,) = groups((Section("Time constants", (long,)),))
    assert group.kept == ()
    assert group.rest == (long,)
