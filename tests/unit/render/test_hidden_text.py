"""Text under the formulas: codes that one simple font can explain."""

import re

from derive.render.hidden_text import HiddenText


def codes_of(operators):
    return bytes.fromhex(re.search(rb"<([0-9a-f]*)>", operators).group(1).decode())


def test_equal_letters_share_a_code():
    codes = codes_of(HiddenText().operators("a+a", 10, 10))
    assert codes[0] == codes[2] != codes[1]


def test_the_text_is_as_long_as_the_formula():
    # Each letter advances half its size: four of ten points take twenty, so forty needs 200 %.
    assert b" 200.00 Tz " in HiddenText().operators("abcd", 40, 10)


def test_the_text_is_drawn_without_ink_and_the_mode_set_back():
    operators = HiddenText().operators("a", 10, 10)
    assert operators.index(b"3 Tr") < operators.index(b"Tj") < operators.index(b"0 Tr")


def test_more_letters_than_a_font_has_codes_become_a_question_mark():
    hidden = HiddenText()
    many = "?" + "".join(chr(0x4E00 + i) for i in range(400))
    codes = codes_of(hidden.operators(many, 10, 10))
    assert len(codes) == 401
    assert codes[-1] == codes[0]
    assert max(codes) == 255
