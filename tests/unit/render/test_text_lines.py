"""The plain text of a broken formula, dealt out over its lines: nothing lost, nothing moved."""

import random

from derive.render.breaking import Row
from derive.render.text_lines import spread, whole


def words_of(lines):
    return " ".join(line.text for picture in lines for line in picture)


def test_the_lines_are_the_whole_text_again():
    chance = random.Random(3)
    for _ in range(200):
        text = " ".join("x" * chance.randint(1, 12) for _ in range(chance.randint(1, 40)))
        pictures = [
            [Row("", chance.uniform(1, 40), chance.uniform(0.5, 6)) for _ in range(chance.randint(1, 22))]
            for _ in range(chance.randint(1, 3))
        ]
        assert words_of(spread(text, pictures)) == text


def test_two_lines_alike_take_half_the_words_each():
    rows = [Row("", 30.0, 1.2), Row("", 30.0, 1.2)]
    ((first, second),) = spread("a + b + c + d", [rows])
    assert (first.text, second.text) == ("a + b +", "c + d")
    assert (first.top, second.top) == (0.0, 0.5)


def test_a_short_last_line_takes_the_rest_and_is_narrow():
    rows = [Row("", 40.0, 1.2), Row("", 10.0, 1.2)]
    ((_, second),) = spread("A_v = R_1·R_2 + R_3·R_4 + R_5", [rows])
    assert second.text == "+ R_5"
    assert second.width == 0.25


def test_a_formula_on_one_line_is_laid_over_all_of_it():
    (line,) = whole("A_v = 1")
    assert (line.top, line.height, line.width) == (0.0, 1.0, 1.0)
    assert whole("") == ()
