"""Poles and zeros: closed forms, certified numbers, pass band, rules of thumb with their errors, sensitivities."""

from __future__ import annotations

import math
from collections.abc import Sequence

from derive.estimates.estimates import ClosedForm, Estimate, Estimates
from derive.expressions.polynomials import divide
from derive.expressions.tree import ONE, Equation, Name
from derive.expressions.walk import names_of
from derive.normalise.form import CertifiedRoot, NominalNumbers
from derive.quantities.dimension import RATIO, TIME
from derive.quantities.format import engineering
from derive.readable.measure import leaves
from derive.sheet.bandwidth import bandwidth_of, edges, lead
from derive.sheet.definitions import known_definitions, used_in, with_words
from derive.sheet.document import (
    Block,
    Column,
    Display,
    Inline,
    Line,
    Maths,
    Paragraph,
    Section,
    Table,
    Text,
)
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
    blocks: list[Block] = []
    if estimates is not None:
        blocks += _closed_forms(view, estimates)
    if numbers is not None:
        blocks += _numeric(numbers)
    blocks = [*_at_the_origin(view, further=bool(blocks)), *blocks]
    if not blocks:
        return ()
    if estimates is not None:
        blocks += _pass_band(view, estimates)
        blocks += _rules(view, estimates)
        blocks += _sensitivities(view, estimates)
    return (view.section("Poles and zeros", tuple(blocks)),)


def _at_the_origin(view: View, *, further: bool) -> list[Block]:
    power = view.result.solution.form.power_of_s
    if not power:
        return []
    kind = "zero" if power > 0 else "pole"
    count = f"a {FOLD.get(abs(power), f'{abs(power)}-fold ')}{kind}"
    words = f" {'also ' if further else ''}has {count} at the origin."
    return [Paragraph((Maths(Name(view.name)), Text(words)))]


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
        headings = ("", "Value", "Frequency |p|/2π", "Q", "Where", "Error bound, relative")
        columns = _columns(headings, (1, 2, 3, 5))
        if all(root.quality is None for root in (*numbers.poles, *numbers.zeros)):
            columns, rows = (*columns[:3], *columns[4:]), [(*row[:3], *row[4:]) for row in rows]
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
    remark = estimates.rules_remark if new else ""
    said = (
        [Paragraph((Text(f"{remark[:1].upper()}{remark[1:].rstrip('.')}."),), "note")] if remark else []
    )
    if not shown:
        return [*said]
    headings = ("Rule of thumb", "Formula", "Gives", "True value", "Error", "Verdict")
    rows = tuple(_rule(rule) for rule in shown)
    caption = "Rules of thumb and their errors at these values"
    return [*said, Table(caption, _columns(headings, (2, 3, 4)), rows)]


def _rule(rule: Estimate) -> tuple[Line, ...]:
    if rule.unit == "Hz":
        value, exact = hertz(rule.value), hertz(rule.exact)
    else:
        value, exact = (engineering(number, RATIO / TIME, 4) for number in (rule.value, rule.exact))
    return (
        (Text(rule.name),),
        _formula(rule),
        (Text(value),),
        (Text(exact),),
        (Text(signed_percent(rule.error)),),
        (Text(rule.says),),
    )


def _formula(rule: Estimate) -> Line:
    """Give a rule's formula; one in s is that of a response, whose fall by 3 dB is the estimate."""
    if "s" not in names_of(rule.formula):
        return (Maths(rule.formula),)
    return Text("−3 dB of "), Maths(divide(ONE, rule.formula))


def _sensitivities(view: View, estimates: Estimates) -> list[Block]:
    """Say how each root follows the parts, the strongest first."""
    new = same_poles(view) is None
    rows: list[tuple[Line, ...]] = []
    for root in estimates.sensitivities:
        if root.of == "pole" and not new:
            continue
        strongest = _strongest([(symbol, value.real) for symbol, value in root.by_symbol])
        if root.root.imag >= 0 and strongest:
            frequency = hertz(abs(root.root) / (2 * math.pi))
            kind = f"{root.of} pair" if root.root.imag else root.of
            rows.append(((Text(kind),), (Text(frequency),), strongest))
            of_quality = _strongest(root.quality)
            rows += [((Text(f"Q of the {kind}"),), (), of_quality)] if of_quality else []
    if not rows:
        return []
    columns = _columns(("Root", "At", "Sensitivity to, the strongest first"), (1,))
    caption = "Sensitivities of poles and zeros"
    return [Paragraph(_definition(view)), Table(caption, columns, tuple(rows))]


def _definition(view: View) -> Line:
    """Say what a sensitivity is, and that the parameters of a device are taken one by one."""
    words = "Sensitivity: relative change of a root's frequency per relative change of the part named, all others held"
    for device in view.outcome.circuit.devices:
        following = [line.symbol for line in device.lines if line.equation is not None]
        if len(following) > 1:
            line: list[Inline] = [Text(f"{words}; ")]
            for place, symbol in enumerate(following):
                lead = "" if not place else " and " if place == len(following) - 1 else ", "
                line += [Text(lead), Maths(Name(symbol))]
            return joined(
                (*line, Text(" are varied one by one, although all follow the device's current."))
            )
    return (Text(f"{words}."),)


def _strongest(by_symbol: Sequence[tuple[str, float]]) -> Line:
    ordered = sorted(by_symbol, key=lambda entry: -abs(entry[1]))
    kept = [entry for entry in ordered if abs(entry[1]) >= LEAST][:MOST_PARTS]
    line: list[Text | Maths] = []
    for place, (symbol, value) in enumerate(kept):
        amount = f" {value:+.2f}".replace("-", "−")
        line += [Text(", " if place else ""), Maths(Name(symbol)), Text(amount)]
    return joined(tuple(line))
