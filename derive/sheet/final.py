"""The final equation as it stands in the box, and what has to be said of the names in it."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass
from typing import Literal

from derive.eliminate.derivation import Step
from derive.expressions.polynomials import add, divide, multiply
from derive.expressions.tree import (
    ONE,
    ZERO,
    Equation,
    Expression,
    Name,
    Negative,
    Power,
    Product,
    Quotient,
    Sum,
)
from derive.expressions.walk import children_of
from derive.normalise import normalise
from derive.readable.form import ReadableForm
from derive.readable.measure import leaves
from derive.sheet.document import Line, Text
from derive.sheet.figures import root_in_hertz
from derive.sheet.nested import is_nested, short_equation
from derive.sheet.view import View, power_of_s

# Up to so many names and numbers a final equation is shown whole, without names for its coefficients.
EXPLICIT_LEAVES = 14
# Factors of a polynomial, all of them together, stand in the box up to so many.
FACTORS_LEAVES = 20
# A gain of up to so many stands in the box itself where only the corner has a name.
SHORT_GAIN = 9
# A coefficient of s² or more that has more names and numbers than this is not read at a glance.
LONG_COEFFICIENT = 20
CORNER, PASS_BAND, ZERO_CORNER = "omega_L", "K_p", "omega_z"


@dataclass(frozen=True, slots=True)
class Named:
    """A name that stands in the box, its value, what is said of it, and the step that gives it."""

    name: str
    value: Expression
    says: Line
    step: int | None = None


@dataclass(frozen=True, slots=True)
class Final:
    """The equation in the box, and the names in it that the circuit does not know."""

    equation: Equation
    named: tuple[Named, ...] = ()


def reading(view: View) -> ReadableForm:
    """Give the result for reading; as it was derived where nothing better was found."""
    solution = view.result.solution
    form = solution.form
    return solution.readable or ReadableForm(form.gain, form.numerator, form.denominator)


def coefficient_steps(view: View) -> dict[tuple[str, int], Step]:
    """Give the step that names each coefficient, by ("a" or "b", its power)."""
    form = view.result.solution.form
    wanted = [
        (letter, power)
        for letter, found in (("a", form.numerator), ("b", form.denominator))
        for power, value in enumerate(found)
        if power and value != ZERO
    ]
    steps = view.result.solution.derivation.steps
    named = [step for step in steps if step.rule == normalise.COEFFICIENT]
    return dict(zip(wanted, named, strict=False))


def coefficient_name(view: View, letter: str, power: int) -> str:
    """Give the name of a coefficient in the derivation: b_1, or another where a part bears that name."""
    step = coefficient_steps(view).get((letter, power))
    return (step.subject if step else None) or f"{letter}_{power}"


def coefficient_of(view: View, entry: Named) -> tuple[str, int] | None:
    """Give which coefficient a name in the box stands for, ("b", 2); None where it is none."""
    for (letter, power), step in coefficient_steps(view).items():
        if step.number == entry.step and entry.name == coefficient_name(view, letter, power):
            return letter, power
    return None


def is_long(view: View, entry: Named) -> bool:
    """Whether a name stands for a coefficient of s² or more that is too long, or beside one too long, for a glance."""
    which, read = coefficient_of(view, entry), reading(view)
    if which is None or which[1] < 2:
        return False
    beside = read.numerator if which[0] == "a" else read.denominator
    return any(leaves(value) > LONG_COEFFICIENT for value in beside[2:] if value != ZERO)


def final(view: View) -> Final:
    """Give the final equation: explicit when short, else with names for gain and coefficients.

    A gain that would be all there is to name is written out, however long it is.
    A response with one zero at the origin and one pole is written by its corner, K/(1 + ω_L/s); a zero
    by itself by its corner too where it lies in the right half-plane: 1 − s/ω_z.
    """
    if is_nested(view):
        return Final(short_equation(view))
    read, power = reading(view), view.result.solution.form.power_of_s
    corner = _with_corner(view, read, power)
    if corner is not None:
        return corner
    if _is_short(read) or (read.gain != ONE and read.numerator == read.denominator == (ONE,)):
        zero = _zero_of(view, read) if _turned(read.numerator) else None
        pair = _pair_of(view)
        above = _polynomial(read.numerator) if zero is None else zero[0]
        below = _polynomial(read.denominator) if pair is None else pair[0]
        named = (*(() if zero is None else (zero[1],)), *(() if pair is None else pair[1]))
        value = _response(read.gain, power, above, below)
        if not _is_short(read):
            step = view.step(normalise.GAIN)
            value = view.shown(value, step.number if step else 0)
        return Final(Equation(Name(view.name), value), named)
    return _with_names(view, read, power)


def explicit(read: ReadableForm, power: int) -> Expression:
    """Write a response with its gain and coefficients written out, in one expression."""
    return _response(read.gain, power, _polynomial(read.numerator), _polynomial(read.denominator))


def _is_short(read: ReadableForm) -> bool:
    parts: Iterable[Expression] = (read.gain, *read.numerator[1:], *read.denominator[1:])
    return sum(leaves(part) for part in parts if part != ZERO) <= EXPLICIT_LEAVES


def _with_corner(view: View, read: ReadableForm, power: int) -> Final | None:
    """Write K·s/(1 + b_1·s) as K_p/(1 + ω_L/s); None where the response is of another kind."""
    if read.far_gain is None or power != 1 or read.numerator != (ONE,) or len(read.denominator) != 2:
        return None
    if _is_taken(view, CORNER) or _is_taken(view, PASS_BAND):
        return None
    corner = Named(CORNER, _corner(view, "pole", read.denominator[1]), (Text("the corner"),))
    below = Sum((ONE, Quotient(Name(CORNER), Name("s"))))
    if leaves(read.far_gain) <= SHORT_GAIN:
        return Final(Equation(Name(view.name), divide(read.far_gain, below)), (corner,))
    gain = Named(PASS_BAND, read.far_gain, (Text("the gain far above the corner"),))
    return Final(Equation(Name(view.name), Quotient(Name(PASS_BAND), below)), (gain, corner))


def _with_names(view: View, read: ReadableForm, power: int) -> Final:
    named: list[Named] = []
    step = view.step(normalise.GAIN)
    gain = read.gain
    if gain != ONE:
        gain = Name((step.subject if step else None) or "K")
        named.append(Named(gain.text, read.gain, (), step.number if step else None))
    zero = _zero_of(view, read)
    if zero is None and _come_apart(read.numerator_factors):
        above = _product_of(read.numerator_factors)
    elif zero is None:
        above = _named_polynomial(view, "a", read.numerator, named)
    else:
        above = zero[0]
        named.append(zero[1])
    pair = _pair_of(view)
    if pair is None and _come_apart(read.denominator_factors):
        below = _product_of(read.denominator_factors)
    elif pair is None:
        below = _named_polynomial(view, "b", read.denominator, named)
    else:
        below = pair[0]
        named += pair[1]
    value = _response(gain, power, above, below, draw_in=False)
    return Final(Equation(Name(view.name), value), tuple(named))


def _come_apart(factors: tuple[tuple[Expression, ...], ...]) -> bool:
    """Whether a polynomial is the product of factors that are short enough to stand in the box."""
    lengths = [leaves(entry) for factor in factors for entry in factor[1:] if entry != ZERO]
    return len(factors) > 1 and sum(lengths) <= FACTORS_LEAVES


def _product_of(factors: tuple[tuple[Expression, ...], ...]) -> Expression:
    return multiply([_polynomial(factor) for factor in factors])


def _zero_of(view: View, read: ReadableForm) -> tuple[Expression, Named] | None:
    """Give 1 + s/ω_z or 1 − s/ω_z for a numerator of first order, and what ω_z is."""
    if len(read.numerator) != 2 or _is_taken(view, ZERO_CORNER):
        return None
    turned = _turned(read.numerator)
    value = read.numerator[1]
    term = Quotient(Name("s"), Name(ZERO_CORNER))
    where = "the zero, in the right half-plane" if turned else "the zero, in the left half-plane"
    if not turned and _mixed(value):
        where = "the zero"
    step = coefficient_steps(view).get(("a", 1))
    number = step.number if step else None
    named = Named(ZERO_CORNER, _corner(view, "zero", value), (Text(where),), number)
    return Sum((ONE, Negative(term) if turned else term)), named


def _pair_of(view: View) -> tuple[Expression, tuple[Named, ...]] | None:
    """Give 1 + s/(Q·ω_0) + (s/ω_0)² for two poles that are a complex pair at the nominal values."""
    solution = view.result.solution
    estimates, numbers = solution.estimates, solution.numbers
    if estimates is None or numbers is None or len(solution.form.denominator) != 3:
        return None
    forms = [form for form in estimates.closed_forms if form.of == "pole"]
    if len(forms) != 2 or not numbers.poles or not numbers.poles[0].imaginary:
        return None
    if not forms[1].name.startswith("Q"):
        return None
    corner, quality = (Name(form.name) for form in forms)
    s = Name("s")
    below = Sum((ONE, Quotient(s, Product((quality, corner))), Power(Quotient(s, corner), 2)))
    steps = coefficient_steps(view)
    numbered = [steps[key].number if key in steps else None for key in (("b", 2), ("b", 1))]
    root = numbers.poles[0]
    says = (f"the poles, {root_in_hertz(root)}", f"{root.quality:.4g}" if root.quality else "infinite")
    return below, tuple(
        Named(form.name, form.readable, (Text(words),), step)
        for form, words, step in zip(forms, says, numbered, strict=True)
    )


def _corner(view: View, kind: Literal["pole", "zero"], coefficient: Expression) -> Expression:
    """Give the corner of 1 + coefficient·s as it was found in closed form, else 1/coefficient."""
    found = divide(ONE, coefficient.operand if isinstance(coefficient, Negative) else coefficient)
    estimates = view.result.solution.estimates
    roots = [form.readable for form in (estimates.closed_forms if estimates else ()) if form.of == kind]
    return roots[0] if len(roots) == 1 else found


def _turned(numerator: tuple[Expression, ...]) -> bool:
    return len(numerator) == 2 and isinstance(numerator[1], Negative) and not _mixed(numerator[1])


def _mixed(expression: Expression) -> bool:
    """Whether an expression holds a minus sign within, so that its own sign hangs on the values."""
    inner = expression.operand if isinstance(expression, Negative) else expression
    pending = [inner]
    while pending:
        node = pending.pop()
        if isinstance(node, Negative):
            return True
        pending.extend(children_of(node))
    return False


def _is_taken(view: View, name: str) -> bool:
    return name in view.wording.names or any(name == known for known, _ in reading(view).definitions)


def _named_polynomial(
    view: View, letter: str, found: tuple[Expression, ...], named: list[Named]
) -> Expression:
    steps = coefficient_steps(view)
    terms: list[Expression] = [ONE]
    for power, value in enumerate(found):
        if power and value != ZERO:
            step = steps.get((letter, power))
            name = coefficient_name(view, letter, power)
            named.append(Named(name, value, (), step.number if step else None))
            terms.append(multiply([Name(name), power_of_s(power)]))
    return add(terms)


def _response(
    gain: Expression, power: int, above: Expression, below: Expression, *, draw_in: bool = True
) -> Expression:
    """Write gain · s^power · above/below, with the gain drawn into the fraction where that is shorter."""
    s = power_of_s(abs(power))
    below = multiply([s, below]) if power < 0 else below
    before = [s] if power > 0 else []
    if below == ONE or not draw_in:
        return divide(multiply([gain, *before, above]), below)
    if not _has_fraction(gain):
        return divide(multiply([*before, gain, above]), below)
    if above == ONE and power < 0 and below == s:
        above, below = _merged(gain, above, below)
        return divide(above, below)
    return multiply([gain, divide(multiply([*before, above]), below)])


def _has_fraction(gain: Expression) -> bool:
    """Whether a gain is a fraction, or has one among its factors."""
    bare = gain.operand if isinstance(gain, Negative) else gain
    factors = bare.factors if isinstance(bare, Product) else (bare,)
    return any(isinstance(factor, Quotient) for factor in factors)


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
        if value != ZERO:
            terms.append(value if power == 0 else multiply([power_of_s(power), value]))
    return add(terms)
