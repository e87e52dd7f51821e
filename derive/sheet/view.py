"""One result as its sections look at it."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from fractions import Fraction

from derive.check.verdict import Outcome, Result
from derive.devices.elements import Coupling
from derive.eliminate.derivation import Derivation, Step
from derive.expressions.tree import (
    ONE,
    Elided,
    Equation,
    Expression,
    Name,
    Negative,
    Power,
    Product,
    Quotient,
    Sum,
)
from derive.normalise import normalise
from derive.normalise.form import NominalNumbers
from derive.quantities.dimension import (
    CURRENT,
    RESISTANCE,
    TIME,
    VOLTAGE,
    Dimension,
)
from derive.readable.measure import leaves
from derive.sheet.document import Block, Line, Maths, Section, Text
from derive.sheet.wording import Wording
from derive.topology.topology import BandName

# More unknowns than this, and long coefficients are shown by their leading terms.
FULL_UNKNOWNS = 4
TERM_LIMIT = 60
LEADING_TERMS = 12
# Among words, and in the cells of tables, longer expressions are not printed.
MOST_LEAVES = 90


@dataclass(frozen=True, slots=True)
class View:
    """A result, its place among the results of the sheet, and the wording of its steps."""

    outcome: Outcome
    result: Result
    place: int
    wording: Wording

    @property
    def name(self) -> str:
        """The wanted quantity's name."""
        return self.result.solution.derivation.system.find.name

    @property
    def band(self) -> BandName:
        """The band of the result."""
        return self.result.solution.band_name

    @property
    def banded(self) -> bool:
        """Whether the band is to be named: there are several, or the one leaves parts out."""
        report = self.outcome.bands
        return report is not None and (len(report.bands) > 1 or self.band != "full")

    @property
    def title(self) -> str:
        """The quantity's name, and its band where results differ by it."""
        return f"{self.name}, {self.band} band" if self.banded else self.name

    @property
    def alone(self) -> bool:
        """Whether the sheet has no other result."""
        return len(self.outcome.results) == 1

    def section(self, title: str, blocks: tuple[Block, ...], *, folds: bool = False) -> Section:
        """Give a section on this result: a main one, or a part of the derivation of one of several."""
        return Section(title, blocks, 1 if self.alone else 2, folds=folds)

    @property
    def headline(self) -> tuple[Section, ...]:
        """Give the heading over this result's sections, where there are several results."""
        if self.alone:
            return ()
        title = f"{self.band.capitalize()} band: derivation of" if self.banded else "Derivation of"
        return (Section(title, (), about=Maths(Name(self.name))),)

    def step(self, rule: str) -> Step | None:
        """Give the last step of a rule, or None."""
        return next((s for s in reversed(self.result.solution.derivation.steps) if s.rule == rule), None)

    def shown(self, content: Expression, number: int) -> Expression:
        """Give an expression as it is shown: whole, or its leading terms and a pointer."""
        if len(self.result.solution.derivation.system.unknowns) <= FULL_UNKNOWNS:
            return content
        return abridged(content, f"ledger, result {self.title}, step {number}")

    def printed(self, content: Expression) -> Line:
        """Give an expression among words, or words in its place where it is too long for that."""
        count = leaves(content)
        if count <= MOST_LEAVES:
            return (Maths(content),)
        return (Text(f"too long to print: {count:,} names and numbers"),)

    def shown_equation(self, equation: Equation, number: int) -> Equation:
        """Give an equation as it is shown."""
        return Equation(self.shown(equation.left, number), self.shown(equation.right, number))


def views(outcome: Outcome) -> tuple[View, ...]:
    """Give a view of each result; equation numbers carry the result's place where there are several."""
    several = len(outcome.results) > 1
    return tuple(
        View(
            outcome,
            result,
            place,
            Wording(result.solution.derivation, f"{place + 1}." if several else "", _band(result)),
        )
        for place, result in enumerate(outcome.results)
    )


def same_poles(view: View) -> View | None:
    """Give the earlier result of the band that has the same denominator; None where this one is new."""
    own = view.result.solution.form
    for earlier in views(view.outcome)[: view.place]:
        form = earlier.result.solution.form
        same = (form.denominator, form.definitions) == (own.denominator, own.definitions)
        if earlier.band == view.band and same:
            return earlier
    return None


def _band(result: Result) -> str:
    band = result.solution.band
    return "" if band is None or band.band == "full" else band.band


def bias_wording(derivation: Derivation, place: int) -> Wording:
    """Give the wording of a derivation of the bias, its equations numbered apart from the others."""
    return Wording(derivation, f"B{place}.", f"bias-{place}")


def abridged(expression: Expression, pointer: str) -> Expression:
    """Replace all but the leading terms of every sum of over TERM_LIMIT terms."""
    if isinstance(expression, Sum):
        terms = expression.terms
        if len(terms) > TERM_LIMIT:
            return Sum((*terms[:LEADING_TERMS], Elided(len(terms) - LEADING_TERMS, pointer)))
        return Sum(tuple(abridged(term, pointer) for term in terms))
    if isinstance(expression, Product):
        return Product(tuple(abridged(factor, pointer) for factor in expression.factors))
    if isinstance(expression, Quotient):
        return Quotient(
            abridged(expression.numerator, pointer), abridged(expression.denominator, pointer)
        )
    if isinstance(expression, Negative):
        return Negative(abridged(expression.operand, pointer))
    return expression


def gain_dimension(view: View, extra: int = 0) -> Dimension:
    """Give the dimension of the wanted quantity per input, a power of s not counted.

    Given: `extra` powers of time, such as those of a ratio of coefficients.
    """
    system = view.result.solution.derivation.system
    if system.find.quantity == "impedance":
        wanted = RESISTANCE
    else:
        above = CURRENT if system.find.quantity == "current" else VOLTAGE
        wanted = above / _input_dimension(view)
    return wanted * TIME ** (view.result.solution.form.power_of_s + extra)


def gain_name(view: View) -> str:
    """Give the name of the gain in the normal form: K, or another where a part bears that name."""
    step = view.step(normalise.GAIN)
    return (step.subject if step else None) or "K"


def power_of_s(power: int) -> Expression:
    """Write what the gain is the factor of: s, s² or 1/s."""
    s: Expression = Name("s") if abs(power) == 1 else Power(Name("s"), abs(power))
    return s if power > 0 else Quotient(ONE, s)


def is_constant(view: View) -> bool:
    """Whether the response is the same at all frequencies."""
    form = view.result.solution.form
    return len(form.numerator) == len(form.denominator) == 1 and not form.power_of_s


def at_zero(view: View) -> Line:
    """Name what the gain of the normal form is: "A_v", "A_v at zero frequency" or "K, the factor of s in A_v"."""
    own, power = Maths(Name(view.name)), view.result.solution.form.power_of_s
    if is_constant(view):
        return (own,)
    if not power:
        return own, Text(" at zero frequency")
    factor = Maths(power_of_s(power))
    return Maths(Name(gain_name(view))), Text(", the factor of "), factor, Text(" in "), own


def far_value(view: View, numbers: NominalNumbers) -> Fraction | None:
    """Give the response far above all corners at the nominal values; None unless it begins with zero."""
    readable, bottom = view.result.solution.readable, numbers.bottom
    if readable is None or readable.far_gain is None or not numbers.top or not bottom or not bottom[-1]:
        return None
    return numbers.top[-1] / bottom[-1]


def coefficient_value(
    numbers: NominalNumbers, letter: str, power: int
) -> tuple[Fraction | None, Dimension]:
    """Give a coefficient of the normal form, a_k or b_k, at the nominal values, and its dimension."""
    values = numbers.top if letter == "a" else numbers.bottom
    if not values or not values[0]:
        return None, TIME**power
    return (values[power] / values[0] if power < len(values) else Fraction(0)), TIME**power


def _input_dimension(view: View) -> Dimension:
    system = view.result.solution.derivation.system
    kinds: Mapping[str, str] = {d.name: d.quantity for d in view.outcome.circuit.topology.drives}
    quantity = {kinds.get(name, "voltage") for name, _ in system.weights}
    return CURRENT if quantity == {"current"} else VOLTAGE


def mutual_names(outcome: Outcome) -> tuple[Coupling, ...]:
    """Give the couplings, whose mutual inductances are symbols of their own."""
    return tuple(e for e in outcome.circuit.elements if isinstance(e, Coupling))
