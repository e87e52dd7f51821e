"""Formulas broken into lines: nothing wider than its column, nothing lost on the way."""

import re
from fractions import Fraction

import pytest

from derive.expressions.tree import (
    Elided,
    Equation,
    Name,
    Negative,
    Number,
    Parallel,
    Power,
    Product,
    Quotient,
    Root,
    Sum,
)
from derive.expressions.typst_maths import to_typst
from derive.render.breaking import Breaker, displayed
from derive.render.maths import (
    BOX_EM,
    COLUMN_EM,
    PARAGRAPH_EM,
    REASON_EM,
    WIDE_EM,
    SheetMaths,
    cell_em,
)
from derive.render.typesetter import Formula, Measurer, mathml
from derive.render.within_words import run_on, slashed
from derive.sheet.document import Display, Maths, Matrix, Paragraph, Table

A, B, C = Name("A"), Name("B"), Name("C")


def long_sum(count, start=1):
    return Sum(tuple(Product((Name(f"R_{i}"), Name(f"C_{i}"))) for i in range(start, start + count)))


SHAPES = {
    "sum": long_sum(30),
    "equation": Equation(Name("b_1"), long_sum(30)),
    "long left side": Equation(long_sum(6), long_sum(12)),
    "fraction": Equation(A, Quotient(long_sum(20), long_sum(25, 30))),
    "fraction in a sum": Sum((A, Quotient(long_sum(12), B), Negative(long_sum(14)))),
    "bracket": Equation(A, Product((Name("s"), long_sum(20), B))),
    "bracket to a power": Product((B, Power(long_sum(16), 2), C)),
    "fractions in a bracket": Product((B, Sum(tuple(Quotient(Name(f"R_{i}"), B) for i in range(40))))),
    "nested brackets": Product((A, Sum((B, Product((C, Sum((B, Product((A, long_sum(20)))))))))),),
    "parallel": Parallel(tuple(Name(f"R_{i}") for i in range(30))),
    "parallel of sums": Parallel((long_sum(9), long_sum(9, 20), B)),
    "many factors": Product(tuple(Name(f"R_{i}") for i in range(60))),
    "root": Root(long_sum(20)),
    "negative": Negative(Product((A, long_sum(20)))),
    "elided": Equation(A, Sum((*long_sum(11).terms, Elided(412, "ledger, result 1")))),
    "sixty terms": Equation(A, long_sum(60)),
}  # fmt: skip


def laid_out(whole, limit):
    measurer = Measurer()
    breaker = Breaker(measurer)
    breaker.prepare([whole])
    return breaker.rows(whole, limit), measurer


def names_in(source):
    return sorted(re.findall(r"[A-Z]_\(\d+\)|\b[ABC]\b", source))


@pytest.mark.parametrize("limit", [COLUMN_EM, WIDE_EM])
@pytest.mark.parametrize("shape", sorted(SHAPES))
def test_no_shape_is_set_wider_than_its_column(shape, limit):
    rows, measurer = laid_out(SHAPES[shape], limit)
    size = measurer[displayed(" \\ ".join(row.source for row in rows))]
    assert size.width <= limit


@pytest.mark.parametrize("shape", sorted(SHAPES))
def test_every_name_of_a_broken_formula_is_printed_once_as_often_as_before(shape):
    rows, _ = laid_out(SHAPES[shape], COLUMN_EM)
    assert len(rows) > 1 or "frac" in rows[0].source
    assert names_in(" ".join(r.source for r in rows)) == names_in(to_typst(SHAPES[shape]))


def test_brackets_of_a_broken_factor_are_closed():
    rows, _ = laid_out(SHAPES["bracket"], COLUMN_EM)
    text = " ".join(row.source for row in rows)
    assert text.count("\\[") == text.count("\\]") == 1
    assert text.index("\\[") < text.index("\\]")


def test_a_continued_line_begins_with_its_sign():
    rows, _ = laid_out(Equation(A, Sum(tuple(Negative(t) for t in long_sum(30).terms))), COLUMN_EM)
    assert len(rows) > 2
    assert all(re.match(r"& #h\([\d.]+em\) - med ", row.source) for row in rows[1:])


def test_two_fractions_on_two_lines_have_one_dot_between_them():
    """Side by side the second has a dot of its own; at the head of a line it must not have two."""
    whole = Equation(A, Product((Quotient(long_sum(5), B), Quotient(long_sum(5, 20), C))))
    rows, _ = laid_out(whole, COLUMN_EM)
    assert len(rows) > 1
    assert sum(row.source.count("dot ") for row in rows) == 1


def test_a_minus_before_a_broken_sum_stays_outside_its_brackets():
    rows, _ = laid_out(Sum((A, Negative(long_sum(20)))), COLUMN_EM)
    text = " ".join(row.source for row in rows)
    assert re.search(r"- (med )?\\\[", text)


def test_a_narrow_formula_is_left_on_one_line():
    rows, _ = laid_out(Equation(A, Sum((B, C))), COLUMN_EM)
    assert len(rows) == 1


def test_lines_are_filled_before_a_new_one_begins():
    rows, _ = laid_out(Equation(A, long_sum(60)), COLUMN_EM)
    # The next term is about three em wide, so a full line lacks less than that and its sign.
    assert all(row.width > COLUMN_EM - 5 for row in rows[:-1])


@pytest.mark.parametrize(
    ("expression", "expected"),
    [
        (Quotient(Sum((A, B)), C), "(A + B) \\/ C"),
        (Quotient(A, Product((B, C))), "A \\/ (B C)"),
        (Quotient(A, Quotient(B, C)), "A \\/ (B \\/ C)"),
        (Product((A, Quotient(B, C))), "A (B \\/ C)"),
        (Sum((A, Negative(Quotient(B, C)))), "A - B \\/ C"),
        (Sum((A, Negative(Sum((B, C))))), "A - (B + C)"),
        (Parallel((A, Sum((B, C)))), "A parallel (B + C)"),
        (Power(Quotient(A, B), 2), "(A \\/ B)^(2)"),
        (Number(Fraction(1, 2)), "1 \\/ 2"),
        (Product((Number(Fraction(1, 2)), A)), "(1 \\/ 2) A"),
    ],
)
def test_within_words_a_quotient_lies_on_the_line_and_keeps_its_meaning(expression, expected):
    assert slashed(expression) == expected


def test_a_formula_within_words_may_break_before_its_signs():
    assert run_on(Equation(A, Sum((B, Negative(C))))) == ["A", "= med B", "- med C"]


def test_no_formula_of_the_sheet_is_wider_than_its_place(sheet):
    maths = SheetMaths(sheet)
    measurer = Measurer()
    checked = 0
    for section in sheet.sections:
        for block in section.blocks:
            if isinstance(block, Display):
                shown = maths.display(block)
                room = WIDE_EM if shown.wide else COLUMN_EM
                room -= BOX_EM if block.boxed else 0
                for piece in shown.pieces:
                    assert measurer[piece.formula].width <= room
                    checked += 1
            lines = {
                Display: lambda b: [(b.reason, REASON_EM)],
                Paragraph: lambda b: [(b.line, PARAGRAPH_EM)],
                Table: lambda b: [(c, cell_em(b)) for r in b.rows for c in r],
            }.get(type(block), lambda b: [])(block)
            for line, limit in lines:
                for item in line:
                    if isinstance(item, Maths):
                        for piece in maths.inline(item.content, limit):
                            assert piece.size.width <= limit
                            checked += 1
    assert checked > 60


def test_a_matrix_wider_than_the_page_is_written_row_by_row(sheet):
    block = next(
        b
        for s in sheet.sections
        for b in s.blocks
        if isinstance(b, Display) and isinstance(b.content, Matrix) and len(b.content.rows) == 6
    )
    shown = SheetMaths(sheet).display(block)
    assert shown.wide
    assert [p.label for p in shown.pieces if p.label] == [f"row {i}:" for i in range(1, 7)]


def test_a_narrow_matrix_stays_a_matrix(sheet):
    block = next(
        b
        for s in sheet.sections
        for b in s.blocks
        if isinstance(b, Display) and isinstance(b.content, Matrix) and len(b.content.rows) == 2
    )
    (piece,) = SheetMaths(sheet).display(block).pieces
    assert piece.formula.source.startswith("mat(")


def test_a_measured_letter_has_the_width_that_its_font_gives():
    # STIX Two Math: the italic small a, U+1D44E, advances 555 of 1000 units; read from the font.
    assert Measurer()[Formula("a", display=False)].width == pytest.approx(0.555, abs=0.001)


def test_mathml_comes_back_one_element_a_formula_in_order():
    made = mathml([Formula("a", True), Formula("frac(b, c)", False), Formula("sqrt(d)", True)])
    assert [("mfrac" in m, "msqrt" in m) for m in made] == [(False, False), (True, False), (False, True)]


def test_a_formula_too_tall_for_a_page_comes_in_several_pictures(sheet):
    from dataclasses import replace

    block = Display(Equation(A, long_sum(400)), number=1)
    section = replace(sheet.sections[0], blocks=(block,))
    shown = SheetMaths(replace(sheet, sections=(section,))).display(block)
    assert len(shown.pieces) > 1
    # An A4 page of this sheet is 253 mm high, which is 71 em of ten points.
    assert all(piece.size.height < 60 for piece in shown.pieces)
