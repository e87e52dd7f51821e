"""Poles and zeros in symbols, exactly: first and second order, and higher ones that come apart.

A factor c_0 + c_1·s has its root at −c_0/c_1. A factor c_0 + c_1·s + c_2·s² is 1 + s/(Q·ω_0) + s²/ω_0² with
ω_0 = √(c_0/c_2) and Q = √(c_0·c_2)/c_1. Where its roots are two real ones these are given instead if their
formula is short, and nothing if it is long.
"""

from __future__ import annotations

import math
from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from fractions import Fraction
from typing import Literal

from derive.algebra.ring import Polynomial
from derive.eliminate.derivation import Derivation
from derive.estimates.estimates import ClosedForm
from derive.estimates.factors import Section, sections_of
from derive.estimates.pen import Pen, inverse_root, root_of, written_value
from derive.expressions.polynomials import add, divide, multiply, negate
from derive.expressions.tree import ONE, ZERO, Expression, Negative, Number, Power
from derive.nodal.voltages import fresh
from derive.normalise.numbers import values_of
from derive.readable.vocabulary import Vocabulary

Kind = Literal["pole", "zero"]
# Beyond this many terms nobody reads a root off.
MOST_TERMS = 60
# The formula of two real roots holds b_1 twice and more: worth it for short ones only.
TERMS_OF_TWO = 5
# Up to here squares are taken out of the root of Q, which for R, L and C gives the textbook's form.
SHORT_TERMS = 8
OPEN = "complex pair where Q is above 1/2, else two real"


@dataclass(slots=True)
class Names:
    """Names for roots that clash with nothing in the circuit."""

    taken: set[str]
    suffix: str

    def free(self, name: str) -> str:
        """Give the name, with the wanted quantity's added where it is taken."""
        if name in self.taken:
            name = f"{name}_{self.suffix}"
        return fresh(self.taken, name)


def closed_forms(
    derivation: Derivation, vocabulary: Vocabulary, taken: Iterable[str]
) -> tuple[ClosedForm, ...]:
    """Give every pole and zero that has a closed form, poles first, the slowest first."""
    if derivation.numerator == 0:
        return ()
    ring = derivation.system.ring.plain()
    values = values_of(derivation.system.small_signal)
    names = Names(set(taken), derivation.system.find.name)
    pen = Pen.of(derivation, vocabulary)
    found: list[ClosedForm] = []
    sides: tuple[tuple[Kind, Polynomial], ...] = (
        ("pole", derivation.denominator),
        ("zero", derivation.numerator),
    )
    for kind, polynomial in sides:
        sections = sections_of(ring, polynomial, values)
        pairs = sum(section.order == 2 for section in sections)
        index, pair = 1, 1
        for section in sections:
            # A leading coefficient that vanishes at these values has sent its root to infinity.
            fits = section.size <= MOST_TERMS and (section.values is None or section.values[-1] != 0)
            if section.order == 1 and fits:
                found.append(_single(pen, names, kind, index, section))
            elif section.order == 2 and fits:
                mark = "" if pairs == 1 else str(pair)
                found += _double(pen, names, kind, index, mark, section)
                pair += 1
            index += section.order * section.multiplicity
    return tuple(found)


def _single(pen: Pen, names: Names, kind: Kind, index: int, section: Section) -> ClosedForm:
    """Give −c_0/c_1, with the sign that makes it positive at the nominal values."""
    below, above = section.coefficients[1], section.coefficients[0]
    right = _lies_right(section.values, above, below)
    if right:
        above = -above
    raw, readable = pen.ratio(above, below)
    value = None if section.values is None else abs(float(section.values[0] / section.values[1]))
    name = names.free(f"omega_{kind[0]}{index}")
    says = (
        f"{kind} at the origin at these values"
        if value == 0
        else _said(kind, right, section.multiplicity)
    )
    return ClosedForm(kind, name, raw, readable, value, says)


def _lies_right(values: Sequence[Fraction] | None, above: Polynomial, below: Polynomial) -> bool | None:
    """Whether the root of c_0 + c_1·s is positive; None where that hangs on values left open."""
    if values is not None:
        return bool(values[0] * values[1] < 0)
    signs = [{coefficient > 0 for coefficient in part.coeffs()} for part in (above, below)]
    if any(len(found) != 1 for found in signs):
        return None
    return signs[0] != signs[1]


def _said(kind: Kind, right: bool | None, multiplicity: int = 1) -> str:
    if right is None:
        return f"{kind} on the real axis; on which side hangs on the values"
    order = "" if multiplicity == 1 else f" of order {multiplicity}"
    return f"{'right' if right else 'left'} half-plane {kind}{order}"


def _double(
    pen: Pen, names: Names, kind: Kind, index: int, mark: str, section: Section
) -> list[ClosedForm]:
    """Give two real roots where their formula is short, and ω_0 and Q where they are no two real ones."""
    values = section.values
    opposed = values is not None and values[0] * values[2] < 0
    if values is not None and values[1] ** 2 > 4 * values[0] * values[2]:
        # By ω_0 and Q nobody tells two real roots: b_1 and b_2 do so with the rules of thumb.
        if section.multiplicity > 1 or not (opposed or section.size <= TERMS_OF_TWO):
            return []
        return _two_real(pen, names, kind, index, section, values[1] ** 2 - 4 * values[0] * values[2])
    if values is not None and not values[0]:
        return []
    return _pair(pen, names, kind, mark, section)


def _two_real(
    pen: Pen, names: Names, kind: Kind, index: int, section: Section, discriminant: Fraction
) -> list[ClosedForm]:
    """Give −2/(b_1 ± √…) and −(b_1 ± √…)/(2·b_2), the sign such that nothing cancels."""
    c_0, c_1, c_2 = section.coefficients
    values = section.values or ()
    b_1, b_2 = values[1] / values[0], values[2] / values[0]
    sign = -1 if b_1 < 0 else 1
    outer = float(b_1) + sign * math.sqrt(discriminant / values[0] ** 2)
    first, second = pen.ratio(c_1, c_0), pen.ratio(c_2, c_0)
    made = []
    for offset, value in enumerate((2 / outer, outer / (2 * float(b_2)))):
        forms = [_real_root(b_1, b_2, sign, offset) for b_1, b_2 in zip(first, second, strict=True)]
        if value < 0:
            forms = [negate(form) for form in forms]
        name = names.free(f"omega_{kind[0]}{index + offset}")
        says = f"{_said(kind, value < 0)}, one of two real ones"
        made.append(ClosedForm(kind, name, forms[0], forms[1], abs(value), says))
    return made


def _real_root(b_1: Expression, b_2: Expression, sign: int, offset: int) -> Expression:
    two, four = Number(Fraction(2)), Number(Fraction(4))
    square = b_1 if b_1 in (ZERO, ONE) else Power(_bare(b_1), 2)
    root = root_of(add([square, negate(multiply([four, b_2]))]))
    outer = add([b_1, root if sign > 0 else negate(root)])
    return divide(two, outer) if offset == 0 else divide(outer, multiply([two, b_2]))


def _bare(expression: Expression) -> Expression:
    """Give the expression without its sign: its square is the same."""
    return expression.operand if isinstance(expression, Negative) else expression


def _pair(pen: Pen, names: Names, kind: Kind, mark: str, section: Section) -> list[ClosedForm]:
    """Give ω_0 and Q of a quadratic."""
    c_0, c_1, c_2 = section.coefficients
    start = "omega_0" if kind == "pole" else "omega_z0"
    short = section.size <= SHORT_TERMS
    # Longer ones are written by b_1 and b_2, which the reader meets in the normal form as well.
    b_1, b_2 = (None, None) if short else (pen.ratio(c_1, c_0), pen.ratio(c_2, c_0))
    raw, readable = map(inverse_root, b_2) if b_2 else pen.root_of_ratio(c_0, c_2)
    values = section.values
    omega = None if values is None else written_value(values[0] / values[2])
    square = None if not values or not values[1] else values[0] * values[2] / values[1] ** 2
    quality = written_value(square)
    if quality is not None and values is not None and values[1] * values[0] < 0:
        quality = -quality
    order = "" if section.multiplicity == 1 else f", each of order {section.multiplicity}"
    says = _pair_said(kind, square, quality, undamped=_undamped(section)) + order
    made = [ClosedForm(kind, names.free(start + mark), raw, readable, omega, says)]
    if c_1 != 0 and not (values is not None and not values[1]):
        stem = "Q" if kind == "pole" else "Q_z"
        letter = stem if not mark else f"{stem}{mark}" if kind == "zero" else f"Q_{mark}"
        if b_1 and b_2:
            raw, readable = (divide(root_of(two), one) for one, two in zip(b_1, b_2, strict=True))
        else:
            raw, readable = pen.quality(c_0, c_1, c_2)
        made.append(ClosedForm(kind, names.free(letter), raw, readable, quality, says))
    return made


def _undamped(section: Section) -> bool:
    return section.coefficients[1] == 0 or (section.values is not None and not section.values[1])


def _pair_said(kind: Kind, square: Fraction | None, quality: float | None, *, undamped: bool) -> str:
    if undamped:
        return f"pair of {kind}s on the imaginary axis: Q is infinite"
    if square is None or quality is None:
        return f"{OPEN} {kind}s"
    side = "right" if quality < 0 else "left"
    if square == Fraction(1, 4):
        return f"two equal real {kind}s in the {side} half-plane: Q is 1/2"
    return f"complex pair of {kind}s in the {side} half-plane: Q is above 1/2"
