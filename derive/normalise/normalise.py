"""Bring a derivation's ratio into normal form: gain, power of s, and polynomials that begin with 1."""

from __future__ import annotations

from dataclasses import replace

from derive.algebra.ratio import coefficients, lowest_terms
from derive.algebra.ring import Polynomial
from derive.eliminate.derivation import Derivation
from derive.eliminate.scribe import Scribe, writer_for
from derive.expressions.polynomials import add, multiply
from derive.expressions.tree import ONE, ZERO, Equation, Expression, Name, Power, Quotient
from derive.normalise.form import NormalForm

GAIN = "name the gain"
COEFFICIENT = "name a coefficient"
NORMAL = "write the normal form"


def normalise(derivation: Derivation) -> tuple[NormalForm, Derivation]:
    """Give the normal form, and the derivation with the steps that lead to it."""
    scribe = Scribe(derivation.system, writer_for(derivation.system), list(derivation.steps))
    if derivation.numerator == 0:
        return NormalForm(ZERO, 0, (ONE,), (ONE,)), derivation
    ring = scribe.writer.ring
    top = coefficients(ring, derivation.numerator, "s")
    bottom = coefficients(ring, derivation.denominator, "s")
    low_top, low_bottom = min(top), min(bottom)
    form = NormalForm(
        _ratio(scribe, top[low_top], bottom[low_bottom]),
        low_top - low_bottom,
        _normalised(scribe, top),
        _normalised(scribe, bottom),
    )
    write_steps(scribe, form)
    return form, replace(derivation, steps=tuple(scribe.steps))


def _ratio(scribe: Scribe, numerator: Polynomial, denominator: Polynomial) -> Expression:
    return scribe.ratio(*lowest_terms(scribe.writer.ring, numerator, denominator))


def _normalised(scribe: Scribe, found: dict[int, Polynomial]) -> tuple[Expression, ...]:
    """Divide coefficients by the lowest; a power that does not occur has the coefficient 0."""
    lowest, highest = min(found), max(found)
    return tuple(
        ONE
        if power == lowest
        else _ratio(scribe, found[power], found[lowest])
        if power in found
        else ZERO
        for power in range(lowest, highest + 1)
    )


def write_steps(scribe: Scribe, form: NormalForm) -> None:
    """Define K, a_k and b_k, and write the response with them."""
    ratio = len(scribe.steps)
    taken = {*scribe.writer.ring.names, scribe.system.input}
    taken |= {unknown.name for unknown in scribe.system.unknowns}
    taken |= {name for name, _ in scribe.system.weights} | {scribe.system.find.name}
    gain = _define(scribe, GAIN, "K", form.gain, taken)
    top = _polynomial(scribe, "a", form.numerator, taken)
    bottom = _polynomial(scribe, "b", form.denominator, taken)
    power = abs(form.power_of_s)
    s: Expression = Name("s") if power == 1 else Power(Name("s"), power)
    above = multiply([gain, *([s] if form.power_of_s > 0 else []), top])
    below = multiply([*([s] if form.power_of_s < 0 else []), bottom])
    value = above if below == ONE else Quotient(above, below)
    equation = Equation(Name(scribe.system.find.name), value)
    scribe.follow(NORMAL, equation, [(ratio, ONE)], ONE)


def _define(scribe: Scribe, rule: str, name: str, value: Expression, taken: set[str]) -> Expression:
    """Name an expression; where a part bears the name, the find's name is added to it."""
    if name in taken:
        name = f"{name}_{scribe.system.find.name}"
    while name in taken:
        name += "_"
    scribe.add(rule, Equation(Name(name), value), defines=name, subject=name)
    return Name(name)


def _polynomial(
    scribe: Scribe, letter: str, found: tuple[Expression, ...], taken: set[str]
) -> Expression:
    terms: list[Expression] = [ONE]
    for power, value in enumerate(found):
        if power and value != ZERO:
            name = _define(scribe, COEFFICIENT, f"{letter}_{power}", value, taken)
            s: Expression = Name("s") if power == 1 else Power(Name("s"), power)
            terms.append(multiply([name, s]))
    return add(terms)
