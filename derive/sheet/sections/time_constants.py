"""Time constants: what each capacitor and inductor sees, and who owns the bandwidth."""

from __future__ import annotations

from fractions import Fraction

from derive.expressions.polynomials import add, multiply
from derive.expressions.tree import ONE, ZERO, Equation, Expression, Name, Power
from derive.quantities.dimension import RESISTANCE, TIME
from derive.quantities.format import engineering
from derive.reactances.time_constants import Coefficient, TimeConstant, TimeConstants
from derive.readable.measure import leaves
from derive.sheet.definitions import known_definitions, used_in, with_words
from derive.sheet.document import (
    Block,
    Column,
    Display,
    Folded,
    Line,
    Maths,
    Paragraph,
    Section,
    Table,
    Text,
)
from derive.sheet.figures import figure, percent
from derive.sheet.final import coefficient_name
from derive.sheet.replaced import replaced
from derive.sheet.resistances import (
    Seen,
    constants_of,
    derivations,
    name_of,
    time_constants_of,
    told_before,
)
from derive.sheet.view import View, views
from derive.sheet.wording import NAME_LIKE, joined, marked

ORDER = 64
SCOPE = "result"
# The first coefficient of a factor that the circuit has and the response has not.
FURTHER = "f_1"
# A shorter resistance is written out in a product.
NAMED_LEAVES = 4
SOURCE = (
    "Products of time constants: B. L. Cochrun and A. Grabel, IEEE Trans. Circuit Theory 20 (1973); numerators by "
    "transfer constants: A. Hajimiri, IEEE Trans. Circuits Syst. I 57 (2010); both cited from memory."
)


def compose(view: View) -> tuple[Section, ...]:
    """Give the section; nothing where there are no time constants."""
    found = time_constants_of(view)
    if found is None:
        return ()
    before = told_before(view)
    blocks: list[Block] = []
    if found.hidden_says:
        blocks.append(Paragraph(marked(found.hidden_says)))
    if before is None:
        blocks += _tables(view, found)
    else:
        line = (Text("What each part sees, and its time constant, are as for "), Maths(Name(before.name)))
        blocks.append(Paragraph((*line, Text(f"{_band_of(view, before)}: all drives are at zero."))))
    blocks += _products(view, found)
    blocks += _hidden(found)
    if found.remark:
        blocks.append(Paragraph(marked(_sentence(found.remark)), "note"))
    words = with_words(_definitions(view, found, tables=before is None))
    blocks += [Paragraph(words)] if words else []
    blocks += [_derivation(seen) for seen in derivations(view.outcome) if seen.place == view.place]
    return (view.section("Time constants", tuple(blocks)),) if blocks else ()


def _band_of(view: View, other: View) -> str:
    return f" in the {other.band} band" if other.band != view.band else ""


def _sentence(words: str) -> str:
    """Make words a sentence; a name that begins it keeps its own letter."""
    first = words[:1] if NAME_LIKE.fullmatch(words.partition(" ")[0]) else words[:1].upper()
    return f"{first}{words[1:].rstrip('.')}."


def _tables(view: View, found: TimeConstants) -> list[Block]:
    blocks: list[Block] = []
    if found.open_circuit:
        line: Line = (Text("All drives at zero, the other capacitors open and inductors short."),)
        whole = is_sum(found)
        if whole:
            sums = (Text(" The time constants add up to "), Maths(Name(coefficient_name(view, "b", 1))))
            line = (*line, *sums, Text(" exactly, and the share is each part's in it."))
        line = (*line, *_meaning(view))
        blocks += [Paragraph(line), _table(view, found.open_circuit, "Open-circuit time constants")]
        blocks += _sum(view, found)
    short = found.short_circuit
    if short and not _same_as_open(found):
        words = (
            "All drives at zero, the other capacitors short and inductors open: the sum of their reciprocals "
            "estimates the low corner, and the share is each part's in it."
        )
        blocks += [Paragraph((Text(words),)), _table(view, short, "Short-circuit time constants")]
    elif short:
        words = "With no other reactance to short, the short-circuit time constant is the same."
        blocks.append(Paragraph((Text(words),)))
    return blocks


def _meaning(view: View) -> Line:
    """Say what the names of resistances stand for, the first time that one is used."""
    named = [[row for row in constants_of(other) if name_of(row)] for other in views(view.outcome)]
    first = next((place for place, rows in enumerate(named) if rows), None)
    if first != view.place:
        return ()
    row = named[view.place][0]
    says = (Text(" is the resistance that "), Maths(Name(row.symbol)), Text(" sees between its nodes."))
    return Text(" "), Maths(Name(name_of(row))), *says


def is_sum(found: TimeConstants) -> bool:
    """Whether the open-circuit time constants by themselves add up to b_1."""
    first = next((each for each in found.coefficients if each.name == "b_1"), None)
    if first is None or found.hidden != (ONE,):
        return False
    finite = [(row.symbol,) for row in found.open_circuit if row.constant not in (None, ZERO)]
    return sorted(finite) == sorted(product.symbols for product in first.products)


def _same_as_open(found: TimeConstants) -> bool:
    rows = [(row.symbol, row.resistance) for row in found.short_circuit]
    return len(rows) == 1 and rows == [(row.symbol, row.resistance) for row in found.open_circuit]


def _table(view: View, constants: tuple[TimeConstant, ...], caption: str) -> Table:
    headings = ("Part", "Between", "Resistance seen", "Resistance", "Time constant", "Share")
    columns = tuple(Column((Text(heading),), place > 2) for place, heading in enumerate(headings))
    # Who owns the bandwidth comes first.
    ordered = sorted(constants, key=lambda constant: -abs(constant.share or 0))
    rows = [_row(view, constant) for constant in ordered]
    known = [row.seconds for row in constants if row.seconds is not None]
    if len(constants) > 1 and constants[0].kind == "open-circuit" and len(known) == len(constants):
        found = time_constants_of(view)
        label: Line = (Text("sum"),)
        if found is not None and is_sum(found):
            label = (Text("sum = "), Maths(Name(coefficient_name(view, "b", 1))))
        total = (Text(figure(sum(known, Fraction(0)), TIME, 4)),)
        shares = [row.share for row in constants if row.share is not None]
        share = percent(sum(shares)) if len(shares) == len(constants) else "–"
        rows.append((label, (), (), (), total, (Text(share),)))
    return Table(caption, columns, tuple(rows))


def _row(view: View, constant: TimeConstant) -> tuple[Line, ...]:
    seconds = "infinite" if constant.constant is None else "–"
    if constant.seconds is not None:
        seconds = figure(constant.seconds, TIME, 4)
    return (
        (Maths(Name(constant.symbol)),),
        (Text(" – ".join(constant.between)),),
        _resistance(view, constant),
        (Text(_ohms(view, constant)),),
        (Text(seconds),),
        (Text(percent(constant.share)),),
    )


def _resistance(view: View, constant: TimeConstant) -> Line:
    if constant.readable is None:
        return (
            Text(
                "none" if constant.constant is None and constant.reactance == "inductor" else "infinite"
            ),
        )
    name, printed = name_of(constant), view.printed(constant.readable)
    if not name or not isinstance(printed[0], Maths):
        return printed
    return (Maths(Equation(Name(name), constant.readable)),)


def _ohms(view: View, constant: TimeConstant) -> str:
    """Word the resistance in ohms, from the time constant and the part's value."""
    symbols = view.result.solution.derivation.system.small_signal.symbols
    value = next((symbol.value for symbol in symbols if symbol.name == constant.symbol), None)
    if constant.resistance == ZERO:
        return engineering(0, RESISTANCE, 4)
    if constant.resistance is None or not value or not constant.seconds:
        return "–"
    ohms = value / constant.seconds if constant.reactance == "inductor" else constant.seconds / value
    return engineering(ohms, RESISTANCE, 4)


def _sum(view: View, found: TimeConstants) -> list[Block]:
    """Show the sum written out where no table row can: values are open, or the circuit has further modes."""
    known = [row.constant for row in found.open_circuit if row.constant not in (None, ZERO)]
    further = found.hidden not in ((), (ONE,))
    if len(known) < 2 or not (further or (is_sum(found) and view.result.solution.numbers is None)):
        return []
    total = add([constant for constant in known if constant is not None])
    first: list[Expression] = [Name(coefficient_name(view, "b", 1))]
    first += [Name(FURTHER)] if further else []
    return [Display(Equation(add(first), total), (Text("the time constants added up"),))]


def _products(view: View, found: TimeConstants) -> list[Block]:
    """Give the coefficients beyond b_1 as products of time constants; one that was shown before is named."""
    told = _told(view)
    rows: list[tuple[Line, ...]] = []
    again: list[str] = []
    for coefficient in found.coefficients:
        if coefficient.name == "b_1" or not coefficient.products:
            continue
        if coefficient in told:
            again.append(coefficient.name)
            continue
        rows += _product_rows(view, coefficient)
    blocks: list[Block] = []
    if rows:
        headings = ("Coefficient", "Parts", "Product of time constants", "Share")
        columns = tuple(Column((Text(heading),), place == 3) for place, heading in enumerate(headings))
        caption = "Coefficients as sums of products: each part with those before it at high frequency"
        blocks.append(Table(caption, columns, tuple(rows)))
        earlier = views(view.outcome)[: view.place]
        if not any(c.name != "b_1" for other in earlier for c in _coefficients(other)):
            blocks.append(Paragraph((Text(SOURCE),), "note"))
    if again:
        first = next(v for v in views(view.outcome) if any(c.name in again for c in _coefficients(v)))
        names: list[Text | Maths] = []
        for place, name in enumerate(again):
            lead = "" if not place else " and " if place == len(again) - 1 else ", "
            names += [Text(lead), Maths(Name(name))]
        where = (Text(" as for "), Maths(Name(first.name)), Text(f"{_band_of(view, first)}."))
        blocks.append(Paragraph(joined((*names, *where))))
    return blocks


def _coefficients(view: View) -> tuple[Coefficient, ...]:
    found = time_constants_of(view)
    return found.coefficients if found else ()


def _told(view: View) -> list[Coefficient]:
    """Give the coefficients that earlier results of the band have shown."""
    earlier = [other for other in views(view.outcome)[: view.place] if other.band == view.band]
    return [coefficient for other in earlier for coefficient in _coefficients(other)]


def _product_rows(view: View, coefficient: Coefficient) -> list[tuple[Line, ...]]:
    letter, _, power = coefficient.name.partition("_")
    name = coefficient_name(view, letter, int(power))
    # The table above gives these resistances their names.
    names = {
        row.readable: Name(name_of(row))
        for row in constants_of(view)
        if name_of(row) and row.readable is not None and leaves(row.readable) >= NAMED_LEAVES
    }
    rows: list[tuple[Line, ...]] = []
    for place, product in enumerate(sorted(coefficient.products, key=lambda p: -abs(p.share or 0))):
        parts: list[Text | Maths] = []
        for symbol in product.symbols:
            parts += [*([Text(", ")] if parts else []), Maths(Name(symbol))]
        rows.append(
            (
                (Maths(Name(name)),) if not place else (),
                tuple(parts),
                view.printed(replaced(product.readable, names)),
                (Text(percent(product.share)),),
            )
        )
    return rows


def _hidden(found: TimeConstants) -> list[Block]:
    """Show the factor that the circuit has beyond the response."""
    if found.hidden in ((), (ONE,)):
        return []
    words = (
        "The circuit by itself has a further factor in its polynomial: modes that this response does not show. "
        "The time constants belong to the circuit, so their sum holds its first coefficient as well."
    )
    factor = found.hidden_readable or found.hidden
    terms: list[Expression] = []
    for power, value in enumerate(factor):
        s: Expression = Name("s") if power == 1 else Power(Name("s"), power)
        terms.append(value if not power else multiply([s, Name(f"{FURTHER[:2]}{power}")]))
    blocks: list[Block] = [] if found.hidden_says else [Paragraph((Text(words),))]
    blocks.append(Display(add(terms), (Text("the further factor"),)))
    blocks += [
        Display(Equation(Name(f"{FURTHER[:2]}{power}"), value))
        for power, value in enumerate(factor)
        if power
    ]
    return blocks


def _definitions(view: View, found: TimeConstants, *, tables: bool) -> tuple[tuple[str, Expression], ...]:
    shown: list[Expression] = []
    if tables:
        shown += [row.readable for row in constants_of(view) if row.readable is not None]
    told = _told(view)
    for coefficient in found.coefficients:
        if coefficient not in told:
            shown += [product.readable for product in coefficient.products]
    shown += found.hidden_readable
    return used_in(shown, known_definitions(view))


def _derivation(seen: Seen) -> Folded:
    """Give a resistance's own derivation, every step with its reason."""
    name = seen.wording.derivation.system.find.name
    title = (
        Text("Derivation of "),
        Maths(Name(name)),
        Text(", which "),
        Maths(Name(seen.constant.symbol)),
        Text(f" sees ({seen.constant.kind})"),
    )
    steps = [
        Display(
            step.equation,
            seen.wording.says(step),
            seen.wording.label(step.number),
            seen.wording.anchor(step.number),
        )
        for step in seen.steps
    ]
    read = seen.constant.readable
    if read is not None and steps and read != seen.steps[-1].equation.right:
        steps.append(Display(Equation(Name(name), read), (Text("the same for reading"),)))
    return Folded(title, tuple(steps))
