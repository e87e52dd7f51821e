"""Where the lines of words on paper end: a number keeps its unit, and a full line keeps its words."""

import re

import pytest

from derive.render.line_ends import on_paper

IMAGE = (
    '<img style="width:20px; height:8px" src="data:image/svg+xml;base64,'
    'PHN2ZyB4bWxucz0iaHR0cDovL3d3dy53My5vcmcvMjAwMC9zdmciIHdpZHRoPSIxMCIgaGVpZ2h0PSI4Ii8+">'
)
WORDS = "Currents leaving node b1 through "


@pytest.mark.parametrize(
    ("words", "kept"),
    [
        ("a zero at 7.0922 Mrad/s, 1.129 MHz", ["7.0922 Mrad/s", "1.129 MHz"]),
        ("the second harmonic is 1 % or more", ["1 %"]),
        ("rings at −3 dB", ["−3 dB"]),
        ("12 V at node vcc, 470 Ω and 1.5 kΩ", ["12 V", "470 Ω", "1.5 kΩ"]),
        ("3 parts, 5 Volts and 2 small signals", []),
    ],
)
def test_a_number_is_in_one_piece_with_its_unit(words, kept):
    page = on_paper(words, before_maths=False)
    assert re.findall('<span class="kept">(.*?)</span>', page) == kept
    assert page.striptags() == words


def test_what_a_user_wrote_is_escaped():
    assert "<b>" not in on_paper("<b> 5 V <b> ", before_maths=True)


def first_lines(words):
    """Lay words and an image out at every width about that of the words, and give the first lines."""
    import weasyprint

    style = "@page { size: 600px 20000px; margin: 0 } p { font: 12px serif; margin: 0 }"
    widths = range(120, 260)
    page = "".join(f'<p style="width: {width}px">{words}{IMAGE} and Q1.</p>' for width in widths)
    (laid,) = weasyprint.HTML(string=f"<style>{style}</style>{page}").render().pages
    boxes = list(laid._page_box.descendants())
    blocks = [b for b in boxes if type(b).__name__ == "BlockBox" and b.element_tag == "p"]
    assert len(blocks) == len(widths)
    lines = [block.children[0] for block in blocks]
    return {"".join(getattr(box, "text", "") for box in line.descendants()).strip() for line in lines}


def test_a_line_that_an_image_does_not_fit_on_keeps_its_words():
    """Fails by the plain words, which lose all but the first of them where their last space does not fit."""
    assert "Currents" in first_lines(WORDS)
    assert "Currents" not in first_lines(on_paper(WORDS, before_maths=True))
