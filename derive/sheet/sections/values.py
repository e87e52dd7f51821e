"""Gain and coefficients at the nominal values."""

from __future__ import annotations

from fractions import Fraction

from derive.expressions.tree import ONE, ZERO, Expression, Name
from derive.normalise.form import NominalNumbers
from derive.quantities.dimension import TIME, Dimension
from derive.sheet.document import Block, Column, Line, Maths, Paragraph, Section, Table, Text
from derive.sheet.figures import figure
from derive.sheet.view import View, gain_dimension

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
    dimension = gain_dimension(view)
    rows = [_row(Name("K"), numbers.gain, dimension)]
    for letter, exact, values in (
        ("a", form.numerator, numbers.top),
        ("b", form.denominator, numbers.bottom),
    ):
        for power, entry in enumerate(exact):
            if entry not in (ONE, ZERO):
                value = _coefficient(values, power)
                rows.append(_row(Name(f"{letter}_{power}"), value, TIME**power))
    columns = (Column((Text("Quantity"),)), Column((Text("Value"),), True))
    return Table("Gain and coefficients at the nominal values", columns, tuple(rows))


def _coefficient(values: tuple[Fraction, ...], power: int) -> Fraction | None:
    if not values or not values[0]:
        return None
    return values[power] / values[0] if power < len(values) else Fraction(0)


def _row(name: Expression, value: Fraction | None, dimension: Dimension) -> tuple[Line, ...]:
    return (Maths(name),), (Text(figure(value, dimension)),)


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
