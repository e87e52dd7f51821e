"""SVG outlines read as PDF operators."""

import pytest

from derive.render.outline import path_operators, read_page

PAGE = """<svg viewBox="0 0 20 10" xmlns="http://www.w3.org/2000/svg"
 xmlns:xlink="http://www.w3.org/1999/xlink">{}<defs>
<symbol id="g1"><path d="M 0 0m 1 1l 2 0Z "/></symbol></defs></svg>"""


def page(body):
    outlines = {}
    return read_page(PAGE.format(body).encode(), outlines), outlines


def test_lines_and_closes_are_absolute():
    assert path_operators("M 0 0m 5 4l -1 0h 2v 3Z") == "5 4 m 4 4 l 6 4 l 6 7 l h"


def test_a_quadratic_curve_becomes_the_equal_cubic_one():
    # Raising a curve's degree moves each control point two thirds of the way to the old one.
    assert path_operators("M 0 0q 3 0 3 3") == "0 0 m 2 0 3 1 3 3 c"


def test_after_a_close_the_next_move_counts_from_the_start():
    assert path_operators("M 1 1l 1 0Z m 1 1l 1 0") == "1 1 m 2 1 l h 2 2 m 3 2 l"


def test_a_glyph_is_kept_once_and_placed_where_it_stands():
    drawing, outlines = page(
        '<g transform="matrix(1 0 0 -1 3 7)"><use xlink:href="#g1" x="0" y="0"/></g>'
        '<g transform="matrix(1 0 0 -1 8 7)"><use xlink:href="#g1" x="1" y="0"/></g>'
    )
    assert outlines == {"g1": "1 1 m 3 1 l h f"}
    assert [p.matrix for p in drawing.glyphs] == [(1, 0, 0, -1, 3, 7), (1, 0, 0, -1, 9, 7)]
    assert (drawing.width, drawing.height) == (20, 10)


def test_a_bar_is_a_stroke():
    drawing, _ = page('<path stroke="#000" stroke-width="0.68" transform="translate(1 2)" d="M 0 0h 5"/>')
    (rule,) = drawing.rules
    assert (rule.operators, rule.stroke, rule.matrix[4:]) == ("0 0 m 5 0 l", 0.68, (1, 2))


@pytest.mark.parametrize("unknown", ['<circle r="1"/>', '<g transform="rotate(3)"/>'])
def test_what_is_not_known_is_refused_rather_than_lost(unknown):
    with pytest.raises(ValueError, match="unknown"):
        page(unknown)
