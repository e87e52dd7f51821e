from __future__ import annotations

from fractions import Fraction

import pytest

from derive.errors import InputError
from derive.quantities.tolerance import TOLERANCE_LETTERS, read_tolerance

# IEC 60062:2016; C from memory (one trade page lists 0.2 %).
LETTERS = [
    ("B", "0.1"),
    ("C", "0.25"),
    ("D", "0.5"),
    ("F", "1"),
    ("G", "2"),
    ("J", "5"),
    ("K", "10"),
    ("M", "20"),
]


@pytest.mark.parametrize(("letter", "percent"), LETTERS)
def test_tolerance_letter_means_what_the_standard_says(letter, percent):
    assert read_tolerance(letter, where="") == Fraction(percent) / 100


def test_no_other_letter_is_known():
    assert sorted(TOLERANCE_LETTERS) == [letter for letter, _ in LETTERS]


@pytest.mark.parametrize(
    ("text", "exact"), [("5 %", "1/20"), ("5%", "1/20"), (" 0.1 % ", "1/1000"), ("1e-1 %", "1/1000")]
)
def test_percentage_is_read_exactly(text, exact):
    assert read_tolerance(text, where="") == Fraction(exact)


@pytest.mark.parametrize(
    "text", ["", "5", "%", "Z", "f", "0 %", "-5 %", "100 %", "5 %%", "5 k%", "1e999 %", "nan %"]
)
def test_other_tolerances_are_refused_with_the_letters(text):
    with pytest.raises(InputError) as caught:
        read_tolerance(text, where="f.toml:3")
    assert caught.value.where == "f.toml:3"
    assert "B C D F G J K M" in caught.value.cure
