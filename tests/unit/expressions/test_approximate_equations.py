"""An equation that is true only nearly is printed with its own sign in every dialect."""

from __future__ import annotations

from derive.expressions.ledger_text import to_ledger
from derive.expressions.speech import to_speech
from derive.expressions.text import to_text
from derive.expressions.tree import Equation, Name
from derive.expressions.typst_maths import to_typst
from derive.expressions.unicode_text import to_unicode

NEARLY = Equation(Name("A_v"), Name("beta"), "~")


def test_each_dialect_has_a_sign_of_its_own_for_nearly_equal() -> None:
    assert to_text(NEARLY) == "A_v ~ beta"
    assert to_ledger(NEARLY) == "A_v ~ beta"
    assert to_unicode(NEARLY) == "A_v ≈ β"
    assert to_typst(NEARLY) == "A_(v) approx beta"
    assert to_speech(NEARLY) == "A sub v is approximately beta"


def test_equal_sides_keep_the_sign_that_they_had() -> None:
    exact = Equation(Name("A_v"), Name("beta"))
    assert exact != NEARLY
    assert to_text(exact) == "A_v = beta"
    assert to_typst(exact) == "A_(v) = beta"
    assert to_speech(exact) == "A sub v equals beta"
