"""Result at a glance: the final equation in a box, what its names are, numbers, and how the checks went."""

from __future__ import annotations

from dataclasses import dataclass, field, replace
from fractions import Fraction

from derive.check.verdict import Outcome, Result
from derive.estimates.estimates import Estimate
from derive.expressions.polynomials import divide, multiply, negate
from derive.expressions.tree import ZERO, Equation, Expression, Name, Number
from derive.readable.form import Definition, ReadableForm
from derive.readable.measure import leaves
from derive.sheet.assumed import assumed
from derive.sheet.at_nominal import at_nominal
from derive.sheet.bandwidth import pass_band
from derive.sheet.definitions import known_definitions, used_in, with_words
from derive.sheet.document import (
    Block,
    Display,
    Inline,
    Line,
    Mark,
    Maths,
    Paragraph,
    Section,
    Text,
)
from derive.sheet.figures import figure, root_in_hertz, signed_percent
from derive.sheet.final import (
    CORNER,
    ZERO_CORNER,
    Final,
    Named,
    coefficient_of,
    final,
    is_long,
    reading,
)
from derive.sheet.nested import where_written, why_nested
from derive.sheet.resistances import shares_of
from derive.sheet.tally import tally_of
from derive.sheet.view import View, coefficient_value, same_poles, views
from derive.sheet.wording import joined
from derive.topology.topology import GROUND

ORDER = 10
SCOPE = "sheet"
BAND_ORDER = ("mid", "full", "low", "high")
# What is shorter than this is sooner read than looked for elsewhere.
WORTH_REFERRING = 6
# An estimate whose error is below this is the exact value but for rounding.
EXACT = 1e-9


@dataclass(slots=True)
class Told:
    """What the reader has been shown so far, so that nothing is printed in full twice.

    `whole` holds the results by name and form, `values` the name and the result of each long expression,
    `words` the definitions that were given.
    """

    whole: dict[tuple[str, int, ReadableForm], View] = field(default_factory=dict)
    values: dict[Expression, tuple[str, View]] = field(default_factory=dict)
    words: set[Definition] = field(default_factory=set)


def compose(outcome: Outcome) -> tuple[Section, ...]:
    """Give the section."""
    blocks: list[Block] = []
    told = Told()
    # The mid-band gain first: it is what is asked first.
    for view in sorted(views(outcome), key=lambda view: BAND_ORDER.index(view.band)):
        blocks += _blocks(view, told)
    return (Section("Result at a glance", tuple(blocks)),)


def _blocks(view: View, told: Told) -> list[Block]:
    form = view.result.solution.form
    if form.is_zero:
        return [Paragraph(_zero(view)), Paragraph(_checked(view.result))]
    # The names of a nested form mean what its definitions say.
    read = replace(reading(view), definitions=form.definitions) if form.definitions else reading(view)
    before = told.whole.setdefault((view.name, form.power_of_s, read), view)
    if before is not view:
        as_before = (Maths(Name(view.name)), Text(f" is the same as in the {before.band} band."))
        return [Paragraph((*_asked(view), Text(" "), *as_before)), Paragraph(_checked(view.result))]
    found = final(view)
    blocks: list[Block] = [Display(found.equation, _asked(view), boxed=True)]
    blocks += _named(view, found, told)
    blocks += [Paragraph(line) for line in (why_nested(view), where_written(view)) if line]
    blocks += assumed(view)
    lines = [_words(view, found, told), at_nominal(view, found), pass_band(view), _rules(view)]
    blocks += [Paragraph(joined(line)) for line in (*lines, _checked(view.result)) if line]
    if not found.named and not form.definitions:
        told.values.setdefault(found.equation.right, (view.name, view))
    return blocks


def _named(view: View, found: Final, told: Told) -> list[Block]:
    """Define the names in the box; those that were defined before, and long ones, are referred to."""
    blocks: list[Block] = []
    long: list[Named] = []
    again: dict[tuple[int, str], list[str]] = {}
    for entry in found.named:
        known = told.values.get(entry.value)
        if known is not None and leaves(entry.value) >= WORTH_REFERRING:
            name, where = known
            again.setdefault((where.place, "" if name == entry.name else name), []).append(entry.name)
            continue
        told.values.setdefault(entry.value, (entry.name, view))
        if is_long(view, entry):
            long.append(entry)
            continue
        value = view.shown(entry.value, entry.step or 0)
        blocks.append(Display(Equation(Name(entry.name), value), _says(view, entry)))
    blocks += [Paragraph(_elsewhere(view, long))] if long else []
    every = views(view.outcome)
    blocks += [
        Paragraph(_as_before(view, names, name, every[place])) for (place, name), names in again.items()
    ]
    return blocks


def _elsewhere(view: View, long: list[Named]) -> Line:
    """Give the values of long coefficients, and say where they are written out."""
    numbers = view.result.solution.numbers
    line: list[Inline] = []
    for place, entry in enumerate(long):
        line += [Text("" if not place else " and " if place == len(long) - 1 else ", ")]
        line += [Maths(Name(entry.name))]
        which = coefficient_of(view, entry)
        if numbers is not None and which is not None:
            line.append(Text(f" = {figure(*coefficient_value(numbers, *which))}"))
    found = view.result.solution.time_constants
    names = {coefficient.name for coefficient in found.coefficients} if found else set()
    products = any(f"{letter}_{power}" in names for letter, power in filter(None, _which(view, long)))
    where = ": written out under Normal form"
    return (*line, Text(f"{where}, taken apart under Time constants." if products else f"{where}."))


def _which(view: View, entries: list[Named]) -> list[tuple[str, int] | None]:
    return [coefficient_of(view, entry) for entry in entries]


def _as_before(view: View, names: list[str], name: str, where: View) -> Line:
    """Say where names were defined: "b_1 and b_2 as for A_v in the high band", "K is the A_v of ..."."""
    line: list[Inline] = []
    for place, own in enumerate(names):
        line += [
            Text("" if not place else " and " if place == len(names) - 1 else ", "),
            Maths(Name(own)),
        ]
    if where.place == view.place:
        return (*line, Text(" is equal to "), Maths(Name(name)), Text("."))
    band = f" in the {where.band} band" if where.band != view.band else ""
    if name == where.name:
        line += [Text(" is "), Maths(Name(name)), Text(f"{band}." if band else ", above.")]
        return tuple(line)
    if name:
        line += [Text(" is "), Maths(Name(name)), Text(" there")]
    return (*line, Text(", as for " if name else " as for "), Maths(Name(where.name)), Text(f"{band}."))


def _says(view: View, entry: Named) -> Line:
    """Say of a name what it is, its value, who has which share in it, and the step that it stands in."""
    numbers = view.result.solution.numbers
    pieces: list[Line] = [entry.says] if entry.says else []
    letter, _, power = entry.name.partition("_")
    if entry.name in (CORNER, ZERO_CORNER):
        roots = () if numbers is None else numbers.poles if entry.name == CORNER else numbers.zeros
        pieces += [(Text(root_in_hertz(root)),) for root in roots[:1]]
    elif letter in ("a", "b") and power.isdigit() and numbers is not None:
        value: Line = (Text(figure(*coefficient_value(numbers, letter, int(power)))),)
        shares = shares_of(view, f"{letter}_{power}")
        pieces.append((*value, Text(": "), *shares) if shares else value)
    if entry.step is not None:
        pieces.append((Text("from "), view.wording.reference(entry.step)))
    line: list[Inline] = []
    for piece in pieces:
        line += [Text("; "), *piece] if line else piece
    return joined(tuple(line))


def _words(view: View, found: Final, told: Told) -> Line:
    """Define β, r_e and the like where they are first used."""
    shown = [found.equation.right]
    shown += [entry.value for entry in found.named if not is_long(view, entry)]
    new = [entry for entry in used_in(shown, known_definitions(view)) if entry not in told.words]
    told.words.update(new)
    return with_words(new)


def _zero(view: View) -> Line:
    """Say that the response is zero, and what that means."""
    find = view.result.solution.derivation.system.find
    what = "impedance" if find.quantity == "impedance" else "response"
    why = "what is driven does not reach what is sought"
    if len(set(find.nodes or ())) == 1:
        why = "its two nodes are one in this circuit"
    elif find.quantity == "impedance":
        why = "sources hold this voltage, whatever current is driven into it"
    zero = Maths(Equation(Name(view.name), ZERO))
    return (Text(f"The {what} is zero for all values, "), zero, Text(f": {why}."))


def _asked(view: View) -> Line:
    # As the user asked for it: a band may know the nodes by other names.
    asked = view.outcome.circuit.topology.finds
    find = next(find for find in asked if find.name == view.name)
    plus, minus = find.nodes or ("", "")
    if find.quantity == "impedance":
        tail = f"; {view.band} band." if view.banded else "."
        return (Text(f"Impedance seen between {plus} and {minus}, all drives at zero{tail}"),)
    if find.quantity == "current":
        what: Line = Text("Current through "), Maths(Name(find.part or ""))
    else:
        against = "" if minus == GROUND else f" against {minus}"
        what = (Text(f"Voltage at node {plus}{against}"),)
    common = view.result.solution.derivation.system.input
    line: list[Inline] = [*what, Text(" per "), Maths(Name(common))]
    others = [(name, weight) for name, weight in find.per if name != common]
    for place, (name, weight) in enumerate(others):
        line.append(Text(", with " if not place else " and " if place == len(others) - 1 else ", "))
        line.append(Maths(Equation(Name(name), _share(weight, common))))
    return (*line, Text(f"; {view.band} band." if view.banded else "."))


def _share(weight: Fraction, common: str) -> Expression:
    """Write a drive as its share of the common input."""
    above = multiply([Number(Fraction(abs(weight.numerator))), Name(common)])
    value = divide(above, Number(Fraction(weight.denominator)))
    return negate(value) if weight < 0 else value


def _told_rules(view: View) -> tuple[Estimate, ...]:
    """Give the rules on the poles that an earlier result of the same poles has stated."""
    earlier = same_poles(view)
    estimates = earlier.result.solution.estimates if earlier else None
    return tuple(rule for rule in (estimates.estimates if estimates else ()) if rule.unit == "rad/s")


def _rules(view: View) -> Line:
    """Say how far rules of thumb are off here; () where there is none."""
    estimates = view.result.solution.estimates
    told = {rule.name for rule in _told_rules(view)}
    found = [rule for rule in (estimates.estimates if estimates else ()) if rule.name not in told]
    if not found:
        return ()
    words = ", ".join(
        f"{rule.name} {signed_percent(rule.error) if abs(rule.error) > EXACT else 'exact'}"
        + ("" if rule.usable else " (not to be used)")
        for rule in found
    )
    return (Text(f"Rules of thumb, error here: {words}."),)


def _checked(result: Result) -> Line:
    tally = tally_of(result.verdicts)
    return (Mark(not tally.failed and not result.broken_steps, tally.words),)
