"""Result at a glance: the final equation in a box, gain, poles, zeros, and how the checks went."""

from __future__ import annotations

from collections.abc import Iterable
from fractions import Fraction

from derive.check.verdict import Outcome, Result
from derive.expressions.polynomials import add, divide, multiply, negate
from derive.expressions.tree import (
    ONE,
    ZERO,
    Equation,
    Expression,
    Name,
    Negative,
    Number,
    Power,
    Quotient,
)
from derive.expressions.walk import term_count
from derive.normalise import normalise
from derive.normalise.form import CertifiedRoot, NormalForm
from derive.quantities.dimension import RATIO
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
from derive.sheet.figures import decibels, figure, root_in_hertz
from derive.sheet.view import View, gain_dimension, views
from derive.topology.topology import GROUND

ORDER = 10
SCOPE = "sheet"
BAND_ORDER = ("mid", "full", "low", "high")
# A final equation of up to this many terms is shown with its coefficients written out.
EXPLICIT_TERMS = 16


def compose(outcome: Outcome) -> tuple[Section, ...]:
    """Give the section."""
    blocks: list[Block] = []
    # The mid-band gain first: it is what is asked first.
    for view in sorted(views(outcome), key=lambda view: BAND_ORDER.index(view.band)):
        blocks += _blocks(view)
    return (Section("Result at a glance", tuple(blocks)),)


def _blocks(view: View) -> list[Block]:
    form = view.result.solution.form
    if form.is_zero:
        return [Paragraph(_zero(view)), Paragraph(_checked(view.result))]
    display = Display(_final(view, form), _asked(view), boxed=True)
    blocks: list[Block] = [display, *_names(view, form)]
    blocks.append(Paragraph(_numbers(view, form)))
    blocks.append(Paragraph(_checked(view.result)))
    return blocks


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


def _explicit(form: NormalForm) -> bool:
    parts: Iterable[Expression] = (form.gain, *form.numerator[1:], *form.denominator[1:])
    return sum(map(term_count, parts)) <= EXPLICIT_TERMS


def _final(view: View, form: NormalForm) -> Equation:
    """Write the response with its coefficients where they are short, else with their names."""
    if not _explicit(form):
        named = view.step(normalise.NORMAL)
        if named is not None:
            return named.equation
    power = abs(form.power_of_s)
    s: Expression = Name("s") if power == 1 else Power(Name("s"), power)
    above, below = _polynomial(form.numerator), _polynomial(form.denominator)
    above = multiply([s, above]) if form.power_of_s > 0 else above
    below = multiply([s, below]) if form.power_of_s < 0 else below
    if below == ONE:
        return Equation(Name(view.name), multiply([form.gain, above]))
    if form.gain == ONE or (above == ONE and len(form.denominator) == 1):
        above, below = _merged(form.gain, above, below)
        return Equation(Name(view.name), divide(above, below))
    return Equation(Name(view.name), multiply([form.gain, divide(above, below)]))


def _merged(gain: Expression, above: Expression, below: Expression) -> tuple[Expression, Expression]:
    """Draw the gain and a bare power of s into one fraction: 1/(s·C), not 1/C · 1/s."""
    if isinstance(gain, Negative):
        inner, under = _merged(gain.operand, above, below)
        return Negative(inner), under
    if isinstance(gain, Quotient):
        return multiply([gain.numerator, above]), multiply([below, gain.denominator])
    return multiply([gain, above]), below


def _polynomial(found: tuple[Expression, ...]) -> Expression:
    terms: list[Expression] = []
    for power, value in enumerate(found):
        s: Expression = Name("s") if power == 1 else Power(Name("s"), power)
        if value != ZERO:
            terms.append(value if power == 0 else multiply([s, value]))
    return add(terms)


def _names(view: View, form: NormalForm) -> list[Block]:
    """Give the equations that define the names in the box."""
    if _explicit(form):
        return []
    blocks: list[Block] = []
    for step in view.result.solution.derivation.steps:
        if step.rule in (normalise.GAIN, normalise.COEFFICIENT):
            reference = view.wording.reference(step.number)
            shown = view.shown_equation(step.equation, step.number)
            blocks.append(Display(shown, (Text("from "), reference)))
    return blocks


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
        what = (Text(f"Voltage of {plus}{against}"),)
    common = view.result.solution.derivation.system.input
    line: list[Inline] = [*what, Text(", per "), Maths(Name(common))]
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


def _numbers(view: View, form: NormalForm) -> Line:
    numbers = view.result.solution.numbers
    if numbers is None:
        return (Text("A value was left open, so this sheet is symbolic only."),)
    dimension = gain_dimension(view)
    gain = figure(numbers.gain, dimension)
    level = decibels(numbers.gain) if dimension == RATIO else ""
    words = f" = {gain}" + (f" ({level})" if level else "")
    name = view.step(normalise.GAIN)
    label = Name(name.subject or "K") if name else Name("K")
    if _explicit(form) and form.numerator == form.denominator == (ONE,) and not form.power_of_s:
        # The box shows the quantity itself; there is no K in it.
        label = Name(view.name)
    lead: Line = (Text("At the nominal values "), Maths(label), Text(words))
    return (*lead, Text(f"; {_roots('pole', numbers.poles)}; {_roots('zero', numbers.zeros)}."))


def _roots(word: str, roots: tuple[CertifiedRoot, ...]) -> str:
    shown = [_root(root) for root in roots if root.imaginary >= 0]
    if not shown:
        return f"no {word}s"
    single = len(shown) == 1 and roots[0].multiplicity == 1 and roots[0].imaginary == 0
    return f"{word if single else word + 's'} at {', '.join(shown)}"


def _root(root: CertifiedRoot) -> str:
    words = root_in_hertz(root)
    if root.imaginary:
        quality = root.quality
        words += f" (pair, Q = {quality:.3g})" if quality else " (pair on the imaginary axis)"
    if root.multiplicity > 1:
        words += f" ({root.multiplicity}-fold)"
    return words + (" (right half-plane)" if root.real > 0 else "")


def _checked(result: Result) -> Line:
    passed = sum(verdict.passed is True for verdict in result.verdicts)
    failed = sum(verdict.passed is False for verdict in result.verdicts)
    left = len(result.verdicts) - passed - failed
    words = f"{passed} of {len(result.verdicts)} checks passed"
    if failed:
        words += f", {failed} failed"
    if left:
        words += f", {left} left open"
    return (Mark(not failed and not result.broken_steps, words),)
