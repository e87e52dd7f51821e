"""Gain and coefficients at the nominal values."""

from __future__ import annotations

from fractions import Fraction

from derive.expressions.tree import ONE, ZERO, Expression, Name
from derive.normalise.form import NominalNumbers
from derive.quantities.dimension import Dimension
from derive.sheet.document import Block, Column, Line, Maths, Paragraph, Section, Table, Text
from derive.sheet.figures import figure
from derive.sheet.final import coefficient_name
from derive.sheet.resistances import shares_of
from derive.sheet.view import View, coefficient_value, gain_dimension

ORDER = 62
SCOPE = "result"


def compose(view: View) -> tuple[Section, ...]:
    """Give the section; nothing where values are open or the response is zero."""
    numbers = view.result.solution.numbers
    if numbers is None or view.result.solution.form.is_zero:
        return ()
    blocks: list[Block] = [_values(view, numbers)]
    blocks += [Paragraph((Text(note),), "note") for note in _notes(numbers)]
    return (view.section("Numeric values", tuple(blocks)),)


def _values(view: View, numbers: NominalNumbers) -> Table:
    form = view.result.solution.form
    rows = [_row(Name("K"), numbers.gain, gain_dimension(view), ())]
    for letter, exact in (("a", form.numerator), ("b", form.denominator)):
        for power, entry in enumerate(exact):
            if entry not in (ONE, ZERO):
                value, dimension = coefficient_value(numbers, letter, power)
                name = Name(coefficient_name(view, letter, power))
                rows.append(_row(name, value, dimension, shares_of(view, f"{letter}_{power}")))
    columns = [
        Column((Text("Quantity"),)),
        Column((Text("Value"),), True),
        Column((Text("Shares in it"),)),
    ]
    if not any(shares for _, _, shares in rows):
        columns, rows = columns[:2], [row[:2] for row in rows]
    return Table("Gain and coefficients at the nominal values", tuple(columns), tuple(rows))


def _row(
    name: Expression, value: Fraction | None, dimension: Dimension, shares: Line
) -> tuple[Line, ...]:
    return (Maths(name),), (Text(figure(value, dimension)),), shares


def _notes(numbers: NominalNumbers) -> list[str]:
    notes = []
    if numbers.top and not numbers.top[0]:
        notes.append(
            "At these values the lowest coefficient of the numerator is zero, so that the gain is zero "
            "and the numerator's coefficients cannot be normalised."
        )
    if not numbers.bottom or not numbers.bottom[0]:
        notes.append(
            "At these values the lowest coefficient of the denominator is zero: the response has a pole "
            "at the origin that the expression for other values does not have."
        )
    return notes
