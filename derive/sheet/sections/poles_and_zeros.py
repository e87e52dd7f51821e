"""Poles and zeros: closed forms, certified numbers, pass band, rules of thumb with their errors, sensitivities."""

from __future__ import annotations

import math

from derive.estimates.estimates import ClosedForm, Estimate, Estimates, RootSensitivity
from derive.expressions.tree import Equation, Name
from derive.normalise.form import CertifiedRoot, NominalNumbers
from derive.quantities.dimension import RATIO, TIME
from derive.quantities.format import engineering
from derive.readable.measure import leaves
from derive.sheet.bandwidth import bandwidth_of, edges, lead
from derive.sheet.definitions import known_definitions, used_in, with_words
from derive.sheet.document import Block, Column, Display, Line, Maths, Paragraph, Section, Table, Text
from derive.sheet.figures import (
    error_bound,
    figure,
    hertz,
    root_in_hertz,
    root_value,
    side,
    signed_percent,
)
from derive.sheet.view import MOST_LEAVES, View, gain_dimension, same_poles
from derive.sheet.wording import joined

ORDER = 66
SCOPE = "result"
FOLD = {1: "", 2: "double ", 3: "triple "}
# Of the parts that a root follows, so many are named; one below the least is none that it follows.
MOST_PARTS, LEAST = 6, 0.01


def compose(view: View) -> tuple[Section, ...]:
    """Give the section; nothing where the response is a constant."""
    solution = view.result.solution
    numbers, estimates = solution.numbers, solution.estimates
    blocks: list[Block] = [*_at_the_origin(solution.form.power_of_s)]
    if estimates is not None:
        blocks += _closed_forms(view, estimates)
    if numbers is not None:
        blocks += _numeric(numbers)
    if not blocks:
        return ()
    if estimates is not None:
        blocks += _pass_band(view, estimates)
        blocks += _rules(view, estimates)
        blocks += _sensitivities(view, estimates)
    return (view.section("Poles and zeros", tuple(blocks)),)


def _at_the_origin(power: int) -> list[Block]:
    if not power:
        return []
    kind = "zero" if power > 0 else "pole"
    count = f"a {FOLD.get(abs(power), f'{abs(power)}-fold ')}{kind}"
    words = f"The factor s to the power {power} is {count} at the origin, besides those below."
    return [Paragraph((Text(words.replace("-1 is", "−1 is").replace("-2 is", "−2 is")),))]


def _closed_forms(view: View, estimates: Estimates) -> list[Block]:
    """Give the roots that have a closed form, as corner frequencies or as ω_0 and Q."""
    earlier = same_poles(view)
    forms = [form for form in estimates.closed_forms if form.of == "zero" or earlier is None]
    blocks: list[Block] = []
    if earlier is not None and len(view.result.solution.form.denominator) > 1:
        line = (
            Text("The poles, and what is said of them, are those of "),
            Maths(Name(earlier.name)),
            Text("."),
        )
        blocks.append(Paragraph(line))
    for form in forms:
        if leaves(form.readable) <= MOST_LEAVES:
            blocks.append(Display(Equation(Name(form.name), form.readable), _about(form)))
        else:
            about: Line = (Maths(Name(form.name)), Text(", "), *_about(form), Text("; "))
            blocks.append(Paragraph((*about, *view.printed(form.readable), Text("."))))
    shown = [form.readable for form in forms]
    words = with_words(used_in(shown, known_definitions(view)))
    return [*blocks, *([Paragraph(words)] if words else [])]


def _about(form: ClosedForm) -> Line:
    if form.value is None:
        return (Text(form.says),)
    if form.name.startswith("Q"):
        return (Text(f"{form.says}: {engineering(form.value, RATIO, 4)}"),)
    rad = engineering(form.value, RATIO / TIME, 5)
    return (Text(f"{form.says}: {rad}, {hertz(form.value / (2 * math.pi))}"),)


def _numeric(numbers: NominalNumbers) -> list[Block]:
    blocks: list[Block] = []
    rows = [_row("pole", root) for root in numbers.poles if root.imaginary >= 0]
    rows += [_row("zero", root) for root in numbers.zeros if root.imaginary >= 0]
    if rows:
        headings = ("", "Value", "Distance from the origin", "Q", "Where", "Error bound, relative")
        columns = _columns(headings, (1, 2, 3, 5))
        blocks.append(Table("Poles and zeros at the nominal values", columns, tuple(rows)))
    for root in numbers.coincident:
        if root.imaginary >= 0:
            words = (
                f"A pole and a zero coincide at {root_value(root)} at these values and cancel: without "
                "them the response is simpler, but only as long as the values match exactly."
            )
            blocks.append(Paragraph((Text(words),), "note"))
    return blocks


def _columns(headings: tuple[str, ...], numeric: tuple[int, ...]) -> tuple[Column, ...]:
    return tuple(Column((Text(heading),), place in numeric) for place, heading in enumerate(headings))


def _row(kind: str, root: CertifiedRoot) -> tuple[Line, ...]:
    name = f"{kind} pair" if root.imaginary else kind
    name += f", {root.multiplicity}-fold" if root.multiplicity > 1 else ""
    quality = f"{root.quality:.4g}" if root.quality is not None else "–"
    cells = (name, root_value(root), root_in_hertz(root), quality, side(root), error_bound(root))
    return tuple((Text(cell),) for cell in cells)


def _pass_band(view: View, estimates: Estimates) -> list[Block]:
    found = bandwidth_of(view)
    if found is None:
        words = estimates.remark
        return [Paragraph((Text(f"{words[:1].upper()}{words[1:]}."),))] if words else []
    power = view.result.solution.form.power_of_s
    reference = figure(found.reference, gain_dimension(view, -power), 5)
    words = f"{lead(view)}: {edges(found)}. Counted from {reference}, the {found.reference_says}."
    if found.remark:
        words += f" {found.remark[:1].upper()}{found.remark[1:]}."
    return [Paragraph((Text(words),))]


def _rules(view: View, estimates: Estimates) -> list[Block]:
    """Hold the rules of thumb against the truth."""
    new = same_poles(view) is None
    shown = [rule for rule in estimates.estimates if new or rule.unit == "Hz"]
    if not shown:
        return []
    headings = ("Rule of thumb", "Formula", "Gives", "True value", "Error", "Verdict")
    rows = tuple(_rule(rule) for rule in shown)
    return [Table("Rules of thumb and their errors at these values", _columns(headings, (2, 3, 4)), rows)]


def _rule(rule: Estimate) -> tuple[Line, ...]:
    if rule.unit == "Hz":
        value, exact = hertz(rule.value), hertz(rule.exact)
    else:
        value, exact = (engineering(number, RATIO / TIME, 4) for number in (rule.value, rule.exact))
    return (
        (Text(rule.name),),
        (Maths(rule.formula),),
        (Text(value),),
        (Text(exact),),
        (Text(signed_percent(rule.error)),),
        (Text(rule.says),),
    )


def _sensitivities(view: View, estimates: Estimates) -> list[Block]:
    """Say which parts each root follows, the strongest first."""
    new = same_poles(view) is None
    rows = []
    for root in estimates.sensitivities:
        if root.of == "pole" and not new:
            continue
        strongest = _strongest(root)
        if root.root.imag >= 0 and strongest:
            frequency = hertz(abs(root.root) / (2 * math.pi))
            kind = f"{root.of} pair" if root.root.imag else root.of
            rows.append(((Text(kind),), (Text(frequency),), strongest))
    if not rows:
        return []
    columns = _columns(("Root", "At", "Parts that it follows, the strongest first"), (1,))
    caption = "Relative change of a root's distance from the origin per relative change of a part"
    return [Table(caption, columns, tuple(rows))]


def _strongest(root: RootSensitivity) -> Line:
    ordered = sorted(root.by_symbol, key=lambda entry: -abs(entry[1].real))
    kept = [entry for entry in ordered if abs(entry[1].real) >= LEAST][:MOST_PARTS]
    line: list[Text | Maths] = []
    for place, (symbol, value) in enumerate(kept):
        amount = f" {value.real:+.2f}".replace("-", "−")
        line += [Text(", " if place else ""), Maths(Name(symbol)), Text(amount)]
    return joined(tuple(line))
