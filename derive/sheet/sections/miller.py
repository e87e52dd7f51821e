"""Miller's effect: what a bridging capacitor is at each of its nodes, and whether the usual way holds here."""

from __future__ import annotations

from derive.expressions.polynomials import add, divide, multiply
from derive.expressions.tree import ONE, ZERO, Equation, Expression, Name, Negative, Power, Quotient, Sum
from derive.quantities.dimension import CAPACITANCE, RATIO, TIME
from derive.quantities.format import engineering
from derive.reactances.miller import MillerError, MillerView
from derive.readable.measure import leaves
from derive.sheet.definitions import used_in, with_words
from derive.sheet.document import Block, Column, Display, Line, Maths, Paragraph, Section, Table, Text
from derive.sheet.figures import complex_figure, signed_percent
from derive.sheet.view import View, at_zero, gain_dimension, views
from derive.sheet.wording import joined, marked

ORDER = 68
SCOPE = "result"
# A gain of more names than this by its frequency says nothing on paper.
MOST_LEAVES = 60


def compose(view: View) -> tuple[Section, ...]:
    """Give the section; nothing where no capacitor bridges two nodes."""
    blocks: list[Block] = []
    for miller in view.result.solution.miller:
        blocks += _one(view, miller)
    return (view.section("Miller's effect", tuple(blocks)),) if blocks else ()


def _one(view: View, miller: MillerView) -> list[Block]:
    capacitor, gain = Name(miller.symbol), Name("A")
    head = (Maths(capacitor), Text(f" bridges {miller.near} (near) and {miller.far} (far). "))
    earlier = _told_before(view, miller)
    blocks: list[Block] = []
    if earlier is None:
        words = " the voltage of the far node over that of the near one, it is exactly the admittances"
        blocks.append(Paragraph(joined((*head, Text("With "), Maths(gain), Text(words)))))
        near = multiply([Name("s"), capacitor, Sum((ONE, Negative(gain)))])
        far = multiply([Name("s"), capacitor, Sum((ONE, Negative(divide(ONE, gain))))])
        blocks.append(Display(Equation(Name("Y_near"), near), (Text(f"from {miller.near} to ground"),)))
        blocks.append(Display(Equation(Name("Y_far"), far), (Text(f"from {miller.far} to ground"),)))
        blocks += _gain(miller)
        blocks += _approximation(miller)
        shown: tuple[Expression, ...] = (miller.gain, miller.input_factor, miller.output_factor)
        if _with_frequency(miller):
            shown = (*shown, *miller.gain_numerator, *miller.gain_denominator)
        words_of = with_words(used_in(shown, miller.definitions))
        blocks += [Paragraph(words_of)] if words_of else []
    else:
        where = f" in the {earlier.band} band." if earlier.band != view.band else "."
        line = (
            *head,
            Text("Its admittances and halves are as for "),
            Maths(Name(earlier.name)),
            Text(where),
        )
        blocks.append(Paragraph(joined(line)))
    blocks += _errors(view, miller)
    blocks += _verdict(miller)
    return blocks


def _told_before(view: View, miller: MillerView) -> View | None:
    """Give the earlier result under which the same capacitor stands with the same gain."""
    own = (
        miller.symbol,
        miller.near,
        miller.far,
        miller.gain,
        miller.gain_numerator,
        miller.gain_denominator,
    )
    for earlier in views(view.outcome)[: view.place]:
        for other in earlier.result.solution.miller:
            told = (other.symbol, other.near, other.far, other.gain)
            if (*told, other.gain_numerator, other.gain_denominator) == own:
                return earlier
    return None


def _with_frequency(miller: MillerView) -> bool:
    parts = (*miller.gain_numerator[1:], *miller.gain_denominator[1:])
    return 0 < sum(leaves(part) for part in parts) <= MOST_LEAVES


def _gain(miller: MillerView) -> list[Block]:
    """Show the gain between the nodes: at zero frequency, and how it goes on from there."""
    lead = f"from {miller.near} to {miller.far}, at zero frequency"
    blocks: list[Block] = [Display(Equation(Name("A_0"), miller.gain), (Text(lead),))]
    if _with_frequency(miller):
        above = multiply([Name("A_0"), _polynomial(miller.gain_numerator)])
        value = divide(above, _polynomial(miller.gain_denominator))
        blocks.append(Display(Equation(Name("A"), value), (Text("at all frequencies, exactly"),)))
    return blocks


def _polynomial(found: tuple[Expression, ...]) -> Expression:
    terms = []
    for power, value in enumerate(found):
        s: Expression = Name("s") if power == 1 else Power(Name("s"), power)
        if value != ZERO:
            terms.append(value if not power else multiply([s, value]))
    return add(terms)


def _approximation(miller: MillerView) -> list[Block]:
    """Show the two capacitors that the usual way puts in its place."""
    names = ("C_near", "C_far")
    blocks: list[Block] = []
    for place, factor in enumerate((miller.input_factor, miller.output_factor)):
        value = _times(Name(miller.symbol), factor)
        words = "Miller's approximation, with the gain at zero frequency"
        if miller.halves is not None:
            words += f": {engineering(miller.halves[place], CAPACITANCE, 4)}"
        blocks.append(Display(Equation(Name(names[place]), value), (Text(words),)))
    return blocks


def _times(symbol: Expression, factor: Expression) -> Expression:
    """Write a symbol times a factor, within the factor's own fraction where it has one."""
    if isinstance(factor, Negative):
        return Negative(_times(symbol, factor.operand))
    if isinstance(factor, Quotient):
        return divide(multiply([symbol, factor.numerator]), factor.denominator)
    return multiply([symbol, factor])


def _errors(view: View, miller: MillerView) -> list[Block]:
    if not miller.errors:
        return []
    headings = ("Quantity", "With both halves", "True value", "Error")
    columns = tuple(Column((Text(heading),), place > 0) for place, heading in enumerate(headings))
    rows = tuple(_error(view, error) for error in miller.errors)
    return [Table("What Miller's approximation makes of the response", columns, rows)]


def _error(view: View, error: MillerError) -> tuple[Line, ...]:
    of_gain = error.name == "gain"
    dimension = gain_dimension(view) if of_gain else RATIO / TIME
    name: Line = at_zero(view) if of_gain else (Text(error.name),)
    true = "–" if error.exact is None else complex_figure(error.exact, dimension)
    off = error.says or "–" if error.error is None else signed_percent(error.error)
    return name, (Text(complex_figure(error.approximate, dimension)),), (Text(true),), (Text(off),)


def _verdict(miller: MillerView) -> list[Block]:
    if miller.usable is None:
        return []
    reasons = "; ".join(miller.reasons)
    if miller.usable:
        words = "The approximation may be used here" + (f": {reasons}." if reasons else ".")
        return [Paragraph(marked(words))]
    return [Paragraph(marked(f"The approximation is not to be used here: {reasons}."), "note")]
