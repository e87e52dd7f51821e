"""The normal form of a circuit too large to be multiplied out: coefficients as nested definitions."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, replace
from fractions import Fraction
from typing import Any

from flint import Ordering, fmpq_mpoly_ctx, nmod_poly

from derive.algebra import modular
from derive.algebra.diagram_definitions import Sum as Products
from derive.algebra.diagram_definitions import definitions
from derive.algebra.modular import PRIME
from derive.algebra.rationals import fraction, rational
from derive.eliminate.derivation import Derivation
from derive.eliminate.names import names_used
from derive.eliminate.nested import restricted
from derive.eliminate.scribe import Scribe, positive_first, writer_for
from derive.expressions.polynomials import add, divide, multiply, negate
from derive.expressions.tree import ONE, ZERO, Expression, Name
from derive.expressions.walk import evaluate, evaluate_modulo
from derive.normalise.exact_response import determinants_of
from derive.normalise.form import NominalNumbers, NormalForm
from derive.normalise.nested_points import at_points, through
from derive.normalise.nested_terms import Determinants, fresh
from derive.normalise.normalise import write_steps
from derive.normalise.numbers import mutual_squares, numbers_of, values_of

# Beyond this many definitions of a diagram those at whole values of s are far fewer.
MOST_OF_DIAGRAM = 100_000
Definitions = tuple[tuple[str, Expression], ...]


@dataclass(frozen=True, slots=True)
class Coefficients:
    """The names of numerator's and denominator's coefficients by their power of s; what is zero is left out."""

    definitions: Definitions
    top: dict[int, Name]
    bottom: dict[int, Name]
    shared: int


def normalise_nested(
    derivation: Derivation, found: Determinants | None
) -> tuple[NormalForm, Derivation, NominalNumbers | None]:
    """Give the normal form, the derivation with the steps that lead to it, and the nominal numbers.

    Given: a nested derivation, and the determinants of its equations as a diagram; None where that would
    be too large, and the derivation's own lines are to be taken at several values of s.
    Raises: TooLargeError where even so there would be too much to write.
    """
    if found is not None and found.most_definitions > MOST_OF_DIAGRAM:
        found = None
    named = _at_points(derivation) if found is None else _named(derivation, found)
    numbers = _numbers(derivation, found, named)
    if not named.top:
        return NormalForm(ZERO, 0, (ONE,), (ONE,)), derivation, numbers
    low_top, low_bottom = min(named.top), min(named.bottom)
    form = NormalForm(
        divide(named.top[low_top], named.bottom[low_bottom]),
        low_top - low_bottom,
        _normalised(named.top),
        _normalised(named.bottom),
        named.definitions,
        named.shared,
        at_points=found is None,
    )
    scribe = Scribe(derivation.system, writer_for(derivation.system), list(derivation.steps))
    write_steps(scribe, form)
    return form, replace(derivation, steps=tuple(scribe.steps)), numbers


def _normalised(found: Mapping[int, Name]) -> tuple[Expression, ...]:
    lowest, highest = min(found), max(found)
    return tuple(
        ONE if power == lowest else divide(found[power], found[lowest]) if power in found else ZERO
        for power in range(lowest, highest + 1)
    )


def _named(derivation: Derivation, found: Determinants) -> Coefficients:
    """Define every coefficient by names; those that are zero for all values get none."""
    system = derivation.system
    taken = names_used(derivation) | {name for name, _ in found.meanings}
    prefix = "c_"
    while any(name.startswith(prefix) for name in taken):
        prefix = "c" + prefix
    nested = definitions(found.diagram, prefix)
    written = [*found.meanings, *((entry.name, _sum(entry.value)) for entry in nested.definitions)]
    taken |= {name for name, _ in written}
    names = system.ring.names
    residues = dict(zip(names, modular.residues(len(names), "normal form"), strict=True))
    for name, meaning in written:
        residues[name] = evaluate_modulo(meaning, residues, PRIME)
    sides = []
    values = []
    for letter, coefficients in zip(("D", "N"), nested.coefficients, strict=True):
        meanings = [_sum(products) for products in coefficients]
        values.append([evaluate_modulo(meaning, residues, PRIME) for meaning in meanings])
        sides.append(_coefficients(letter, meanings, values[-1], written, taken))
    return Coefficients(tuple(written), sides[1], sides[0], _shared_degree(*values))


def _at_points(derivation: Derivation) -> Coefficients:
    """Define every coefficient by the derivation's lines at whole values of s."""
    taken = names_used(derivation)
    found = at_points(derivation, taken)
    written = list(found.definitions)
    sides = []
    for letter, names, residues in (
        ("D", found.bottoms, found.bottom_residues),
        ("N", found.tops, found.top_residues),
    ):
        meanings = [through(names, power) for power in range(len(residues))]
        sides.append(_coefficients(letter, meanings, residues, written, taken))
    shared = _shared_degree(found.bottom_residues, found.top_residues)
    return Coefficients(tuple(written), sides[1], sides[0], shared)


def _coefficients(
    letter: str,
    meanings: Sequence[Expression],
    residues: Sequence[int],
    written: list[tuple[str, Expression]],
    taken: set[str],
) -> dict[int, Name]:
    """Name the coefficients of one side but for those that are zero."""
    side = {}
    for power, (meaning, residue) in enumerate(zip(meanings, residues, strict=True)):
        if residue:
            side[power] = Name(fresh(f"{letter}_{power}", taken))
            written.append((side[power].text, meaning))
    return side


def _sum(products: Products) -> Expression:
    """Write a sum of products, a positive one first where there is one."""
    terms = []
    for sign, factors in products:
        product = multiply([Name(factor) for factor in factors])
        terms.append(product if sign > 0 else negate(product))
    return add(positive_first(terms)) if terms else ZERO


def _shared_degree(first: Sequence[int], second: Sequence[int]) -> int:
    """Give the degree of what two polynomials share for all values, powers of s themselves not counted."""
    one, other = (nmod_poly(list(values), PRIME) for values in (first, second))
    if one.degree() < 0 or other.degree() < 0:
        return 0
    shared = one.gcd(other)
    at_origin = next(power for power, value in enumerate(shared.coeffs()) if int(value))
    return int(shared.degree()) - at_origin


def _numbers(
    derivation: Derivation, found: Determinants | None, named: Coefficients
) -> NominalNumbers | None:
    """Give the numbers at the nominal values; None where a value was left open."""
    known = values_of(derivation.system.small_signal)
    if known is None:
        return None
    if not named.top:
        return NominalNumbers(Fraction(0), (Fraction(0),), (Fraction(1),), (), (), ())
    top: Sequence[Fraction]
    bottom: Sequence[Fraction]
    if found is None:
        top, bottom = determinants_of(restricted(derivation.system, derivation.plan), known)
    else:
        for name, meaning in found.meanings:
            known[name] = evaluate(meaning, known, Fraction)
        bottom, top = _coefficients_at(derivation, found, known)
    return numbers_of(_dense(named.top, top), _dense(named.bottom, bottom))


def _coefficients_at(
    derivation: Derivation, found: Determinants, known: dict[str, Fraction]
) -> Sequence[Sequence[Fraction]]:
    """Give the coefficients of denominator and numerator; a mutual inductance's even powers are exact."""
    circuit = derivation.system.small_signal
    squares = mutual_squares(circuit, known)
    if not squares:
        return found.diagram.coefficients(known)
    context = fmpq_mpoly_ctx.get(["s", *squares], Ordering.lex)
    lookup = {name: context.constant(rational(value)) for name, value in known.items()}
    for place, name in enumerate(squares, 1):
        lookup[name] = context.gen(place)
    sides = found.diagram.values(lookup, context.gen(0), context.constant(1))
    return [_without_roots(side, known, squares) for side in sides]


def _without_roots(
    side: Any, known: Mapping[str, Fraction], squares: Mapping[str, Fraction]
) -> list[Fraction]:
    """Give the coefficients of s, squares of mutual inductances put in for their even powers."""
    # Each power of s apart by what is left of the roots, so that what cancels does so exactly.
    parts: dict[tuple[int, ...], Fraction] = {}
    for powers, value in side.to_dict().items():
        amount = fraction(value)
        for power, square in zip(powers[1:], squares.values(), strict=True):
            amount *= square ** (int(power) // 2)
        key = (int(powers[0]), *(int(power) % 2 for power in powers[1:]))
        parts[key] = parts.get(key, Fraction(0)) + amount
    dense = [Fraction(0)] * (max((key[0] for key in parts), default=0) + 1)
    for key, amount in parts.items():
        for odd, name in zip(key[1:], squares, strict=True):
            amount *= known[name] if odd else 1
        dense[key[0]] += amount
    return dense


def _dense(names: Mapping[int, Name], values: Sequence[Fraction]) -> tuple[Fraction, ...]:
    """Give the coefficients from the lowest power that occurs, without leading zeros."""
    powers = range(min(names), max(names) + 1)
    dense = [values[power] if power < len(values) else Fraction(0) for power in powers]
    while dense and not dense[-1]:
        dense.pop()
    return tuple(dense) or (Fraction(0),)
