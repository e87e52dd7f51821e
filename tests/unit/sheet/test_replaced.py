"""Parts of an expression go by the names that were given to them."""

from __future__ import annotations

from derive.expressions.parse import parse_expression
from derive.expressions.text import to_text
from derive.expressions.tree import Name
from derive.sheet.replaced import replaced


def test_every_part_that_is_written_alike_is_replaced_wherever_it_stands():
    seen = parse_expression("R_1 || (R_2 + R_3)")
    whole = parse_expression("C_1*(R_1 || (R_2 + R_3))*C_2/((R_1 || (R_2 + R_3)) + R_4)^2 - R_2")
    assert to_text(replaced(whole, {seen: Name("R_C_1")})) == "C_1*R_C_1*C_2/(R_C_1 + R_4)^2 - R_2"


def test_what_is_written_otherwise_stays():
    seen = parse_expression("R_1 || R_2")
    whole = parse_expression("R_2 || R_1")
    assert replaced(whole, {seen: Name("R_C_1")}) == whole
