"""The response at nominal values alone, exact: its polynomials by interpolation, nothing symbolic.

The determinants of the nodal equations are worked in exact rationals at whole values of s, and the
polynomials through them found by divided differences (Newton's interpolation).
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from fractions import Fraction

from flint import acb, acb_poly, ctx, fmpq, fmpq_mat, fmpq_poly

from derive.algebra.ratio import coefficients, exact_value
from derive.algebra.rationals import fraction, rational
from derive.algebra.roots import rational_polynomial, roots
from derive.devices.elements import SmallSignal
from derive.nodal.system import NodalSystem
from derive.nodal.write import write_equations
from derive.normalise.numbers import values_of
from derive.topology.topology import Find

EVALUATION_BITS = 256
Entry = dict[int, fmpq]


@dataclass(frozen=True, slots=True)
class ExactResponse:
    """H(s) = top/bottom in lowest terms: exact coefficients by rising powers of s."""

    top: tuple[Fraction, ...]
    bottom: tuple[Fraction, ...]

    @property
    def is_zero(self) -> bool:
        """Whether there is no response."""
        return not any(self.top)

    @property
    def corners_hz(self) -> tuple[float, ...]:
        """The magnitudes of the poles but for those at the origin, in Hz and rising."""
        found = [math.hypot(root.real, root.imaginary) / (2 * math.pi) for root in roots(self.bottom)]
        return tuple(corner for corner in found if corner > 0)


def exact_response(circuit: SmallSignal, find: Find) -> ExactResponse | None:
    """Give the response at the nominal values; None where one is open, or the circuit is singular.

    Raises: SingularError where voltage drives form a loop.
    """
    values = values_of(circuit)
    if values is None:
        return None
    top, bottom = _polynomials(write_equations(circuit, find), values)
    if bottom.degree() < 0:
        return None
    if top.degree() < 0:
        return ExactResponse((Fraction(0),), (Fraction(1),))
    shared = top.gcd(bottom)
    return ExactResponse(_fractions(top // shared), _fractions(bottom // shared))


def determinants_of(
    system: NodalSystem, values: dict[str, Fraction]
) -> tuple[tuple[Fraction, ...], tuple[Fraction, ...]]:
    """Give the two determinants of Cramer's rule by rising powers of s, nothing cancelled between them."""
    top, bottom = _polynomials(system, values)
    return _fractions(top), _fractions(bottom)


def _polynomials(system: NodalSystem, values: dict[str, Fraction]) -> tuple[fmpq_poly, fmpq_poly]:
    rows, degree = _rows(system, values)
    tops, bottoms = [], []
    for point in range(degree + 1):
        matrix, right, column = _at(rows, fmpq(point))
        bottoms.append(_determinant(matrix))
        tops.append(_determinant(_replaced(matrix, right, column)))
    return _through(tops), _through(bottoms)


def ratio_at(
    above: Sequence[ExactResponse], below: Sequence[ExactResponse], hertz: float
) -> complex | None:
    """Give the product of responses over that of others at a frequency; None where that is 0/0 or so."""
    with ctx.workprec(EVALUATION_BITS):
        s = acb(0, 2 * math.pi * hertz)
        total = acb(1)
        for responses, inverse in ((above, False), (below, True)):
            for response in responses:
                top, bottom = _value(response.top, s), _value(response.bottom, s)
                if top.contains(0) or bottom.contains(0):
                    return None
                total = total * bottom / top if inverse else total * top / bottom
        return complex(total)


def driving_point(circuit: SmallSignal, find: Find) -> Fraction | None:
    """Give the resistance of a circuit without reactances as an impedance find sees it.

    Gives None where it is infinite or not fixed.
    Raises: SingularError where voltage drives form a loop.
    """
    values = values_of(circuit)
    if values is None:
        return None
    rows, _ = _rows(write_equations(circuit, find), values)
    matrix, right, wanted = _at(rows, fmpq(0))
    size = len(matrix)
    # The wanted unknown comes last, so that its row of the reduced form holds it alone.
    order = [column for column in range(size) if column != wanted] + [wanted]
    flat = []
    for row, value in zip(matrix, right, strict=True):
        flat += [*(row[column] for column in order), value]
    reduced, rank = fmpq_mat(size, size + 1, flat).rref()
    table = reduced.tolist()[:rank]
    for row in table:
        pivot = next(column for column, entry in enumerate(row) if entry != 0)
        if pivot == size:
            return None
        if pivot == size - 1:
            return fraction(row[size])
    return None


def _rows(
    system: NodalSystem, values: dict[str, Fraction]
) -> tuple[tuple[list[list[Entry]], list[Entry], int], int]:
    """Give the matrix and right side, an entry by powers of s, and the bound on the degree."""
    names = [unknown.name for unknown in system.unknowns]
    weights = dict(system.weights)
    inverted = system.ring.inverted
    point = {name: 1 / value if name in inverted else value for name, value in values.items()}
    matrix, right, degree = [], [], 0
    for equation in system.equations:
        row: list[Entry] = [{} for _ in names]
        driven: Entry = {}
        for name, polynomial in equation.row:
            entry = {
                power: rational(exact_value(system.ring, part, point, {}))
                for power, part in coefficients(system.ring, polynomial, "s").items()
            }
            if name in names:
                row[names.index(name)] = entry
                continue
            weight = rational(weights.get(name, Fraction(name == system.input)))
            for power, value in entry.items():
                driven[power] = driven.get(power, fmpq(0)) - weight * value
        matrix.append(row)
        right.append(driven)
        degree += max((power for entry in (*row, driven) for power in entry), default=0)
    return (matrix, right, names.index(system.wanted)), degree


def _at(
    rows: tuple[list[list[Entry]], list[Entry], int], s: fmpq
) -> tuple[list[list[fmpq]], list[fmpq], int]:
    matrix, right, wanted = rows
    worked = [[_entry(entry, s) for entry in row] for row in matrix]
    return worked, [_entry(entry, s) for entry in right], wanted


def _entry(entry: Entry, s: fmpq) -> fmpq:
    total = fmpq(0)
    for power, value in entry.items():
        total += value * s**power
    return total


def _replaced(matrix: list[list[fmpq]], right: list[fmpq], column: int) -> list[list[fmpq]]:
    pairs = zip(matrix, right, strict=True)
    return [[*row[:column], value, *row[column + 1 :]] for row, value in pairs]


def _determinant(matrix: list[list[fmpq]]) -> fmpq:
    size = len(matrix)
    return fmpq(fmpq_mat(size, size, [entry for row in matrix for entry in row]).det())


def _through(values: Sequence[fmpq]) -> fmpq_poly:
    """Give the polynomial that has these values at 0, 1, 2 and so on."""
    differences = list(values)
    for order in range(1, len(differences)):
        for index in range(len(differences) - 1, order - 1, -1):
            differences[index] = (differences[index] - differences[index - 1]) / order
    total = fmpq_poly([0])
    for index in range(len(differences) - 1, -1, -1):
        total = total * fmpq_poly([-index, 1]) + differences[index]
    return total


def _value(polynomial: Sequence[Fraction], s: acb) -> acb:
    return acb_poly(rational_polynomial(polynomial))(s)


def _fractions(polynomial: fmpq_poly) -> tuple[Fraction, ...]:
    return tuple(fraction(value) for value in polynomial.coeffs())
