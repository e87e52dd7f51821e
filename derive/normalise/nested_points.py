"""Coefficients of a nested derivation by its lines at several whole values of s.

Where even the diagram of the determinants would grow without end, its lines still do not: taken at s = 1,
2, 3, … they give the values of both determinants there, and the coefficients of the polynomials through
these values are sums of them with known numbers (Lagrange's interpolation). This is exact, whatever the
element; but coefficients so small beside one another are not to be had from rounded numbers this way.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from fractions import Fraction

from flint import fmpq_poly, nmod_poly

from derive.algebra import modular
from derive.algebra.modular import PRIME
from derive.eliminate.derivation import Derivation
from derive.errors import TooLargeError
from derive.expressions.polynomials import add, divide, multiply, negate
from derive.expressions.tree import Expression, Name, Negative, Number
from derive.expressions.walk import evaluate_modulo, names_of, substitute
from derive.normalise.nested_terms import fresh

Definitions = tuple[tuple[str, Expression], ...]


# A ledger of this many definitions has some 20 megabytes.
MOST_DEFINITIONS = 200_000


def too_many(derivation: Derivation) -> TooLargeError:
    """Make the error of a circuit whose coefficients would need too many definitions."""
    find = derivation.system.find
    return TooLargeError(
        f"the coefficients of {find.name} would take more than {MOST_DEFINITIONS:,} definitions, even nested",
        where=str(find.place),
        cure="split the circuit into stages, or merge its parallel and series parts",
    )


@dataclass(frozen=True, slots=True)
class AtPoints:
    """Definitions of the two determinants at s = 1, 2, …, and their coefficients modulo the prime.

    The coefficients of the numerator come first.
    """

    definitions: Definitions
    tops: tuple[Name, ...]
    bottoms: tuple[Name, ...]
    top_residues: tuple[int, ...]
    bottom_residues: tuple[int, ...]


def at_points(derivation: Derivation, taken: set[str]) -> AtPoints:
    """Give the determinants of a nested derivation at as many points as their degree asks for.

    Raises: TooLargeError where that takes more definitions than anyone can use.
    """
    lines = [(step.defines or "", step.equation.right) for step in derivation.steps if step.defines]
    system = derivation.system
    skipped = {system.find.name, *(name for name, _ in system.weights)}
    lines = [(name, meaning) for name, meaning in lines if name not in skipped]
    ratio = derivation.steps[-1].equation.right
    pivots = derivation.nested.pivots if derivation.nested else ()
    values = _residues(derivation, lines, ratio, pivots)
    degree = max(len(values[0]), len(values[1])) - 1
    moving = _moving(lines)
    if len(moving) * (degree + 1) > MOST_DEFINITIONS:
        raise too_many(derivation)
    written: list[tuple[str, Expression]] = []
    fixed: dict[str, Expression] = {}
    for name, meaning in lines:
        if name not in moving:
            own = fresh(f"{name}_fixed", taken)
            written.append((own, substitute(meaning, fixed)))
            fixed[name] = Name(own)
    tops, bottoms = [], []
    for point in range(1, degree + 2):
        here: dict[str, Expression] = {**fixed, "s": Number(Fraction(point))}
        for name, meaning in lines:
            if name in moving:
                own = fresh(f"{name}_at_{point}", taken)
                written.append((own, substitute(meaning, here)))
                here[name] = Name(own)
        bottom = Name(fresh(f"D_at_{point}", taken))
        written.append((bottom.text, substitute(multiply(list(pivots)), here)))
        top = Name(fresh(f"N_at_{point}", taken))
        written.append((top.text, multiply([bottom, substitute(ratio, here)])))
        tops.append(top)
        bottoms.append(bottom)
    return AtPoints(tuple(written), tuple(tops), tuple(bottoms), *values)


def through(values: Sequence[Name], power: int) -> Expression:
    """Give a coefficient of the polynomial with these values at 1, 2, 3, …."""
    terms = []
    for place, value in enumerate(values, 1):
        basis = fmpq_poly([1])
        for other in range(1, len(values) + 1):
            if other != place:
                basis = basis * fmpq_poly([-other, 1]) / (place - other)
        weight = basis[power]
        above = multiply([Number(Fraction(abs(int(weight.p)))), value])
        whole = divide(above, Number(Fraction(int(weight.q))))
        if weight != 0:
            terms.append(negate(whole) if weight < 0 else whole)
    return add(sorted(terms, key=lambda term: isinstance(term, Negative)))


def _moving(lines: Sequence[tuple[str, Expression]]) -> set[str]:
    """Give the names whose meaning hangs on s."""
    moving: set[str] = set()
    for name, meaning in lines:
        if any(used == "s" or used in moving for used in names_of(meaning)):
            moving.add(name)
    return moving


def _residues(
    derivation: Derivation,
    lines: Sequence[tuple[str, Expression]],
    ratio: Expression,
    pivots: Sequence[Expression],
) -> tuple[tuple[int, ...], tuple[int, ...]]:
    """Give the coefficients of both determinants at random values modulo the prime, without leading zeros."""
    ring = derivation.system.ring
    base = dict(zip(ring.names, modular.residues(len(ring.names), "points"), strict=True))
    most = sum(
        max(int(entry.degrees()[ring.names.index("s")]) for _, entry in equation.row)
        for equation in derivation.system.equations
    )
    found: tuple[list[int], list[int]] = ([], [])
    for point in range(1, most + 2):
        top, bottom = _at(base | {"s": point}, lines, ratio, pivots)
        found[0].append(top)
        found[1].append(bottom)
    return _through_residues(found[0]), _through_residues(found[1])


def _at(
    values: Mapping[str, int],
    lines: Sequence[tuple[str, Expression]],
    ratio: Expression,
    pivots: Sequence[Expression],
) -> tuple[int, int]:
    known = dict(values)
    for name, meaning in lines:
        known[name] = evaluate_modulo(meaning, known, PRIME)
    bottom = 1
    for pivot in pivots:
        bottom = bottom * evaluate_modulo(pivot, known, PRIME) % PRIME
    return bottom * evaluate_modulo(ratio, known, PRIME) % PRIME, bottom


def _through_residues(values: Sequence[int]) -> tuple[int, ...]:
    """Give the coefficients, modulo the prime, of the polynomial with these values at 1, 2, 3, …."""
    table = list(values)
    for width in range(1, len(table)):
        gap = pow(width, -1, PRIME)
        for index in range(len(table) - 1, width - 1, -1):
            table[index] = (table[index] - table[index - 1]) * gap % PRIME
    total = nmod_poly([0], PRIME)
    for point in range(len(table) - 1, -1, -1):
        total = total * nmod_poly([-(point + 1) % PRIME, 1], PRIME) + table[point]
    return tuple(int(value) for value in total.coeffs())
