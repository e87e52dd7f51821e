"""The nodal equations as a matrix, its entries written as admittances."""

from __future__ import annotations

from fractions import Fraction

from derive.algebra.ring import Polynomial, Ring
from derive.expressions.polynomials import add, divide, multiply
from derive.expressions.tree import Expression, Name, Negative, Number, Power
from derive.nodal.system import MatrixForm, NodalSystem

Term = tuple[tuple[int, ...], int]


def matrix_form(system: NodalSystem) -> MatrixForm:
    """Write the system's rows as a matrix; reciprocal generators show as 1/R."""
    ring = system.ring
    names = [unknown.name for unknown in system.unknowns]
    rows, right = [], []
    for equation in system.equations:
        row = dict(equation.row)
        rows.append(tuple(admittance(ring, row.get(name, ring.zero)) for name in names))
        drives = [
            multiply([admittance(ring, -entry), Name(name)])
            for name, entry in equation.row
            if name not in names
        ]
        right.append(add(drives))
    return MatrixForm(tuple(rows), tuple(Name(name) for name in names), tuple(right))


def admittance(ring: Ring, polynomial: Polynomial) -> Expression:
    """Write a polynomial with reciprocals term by term, those without s first."""
    place = ring.names.index("s")
    terms = [(exponents, int(value)) for exponents, value in polynomial.to_dict().items()]
    terms.sort(key=lambda term: (term[0][place], [-power for power in term[0]]))
    return add([_term(ring, exponents, value) for exponents, value in terms])


def _term(ring: Ring, exponents: tuple[int, ...], value: int) -> Expression:
    above: list[Expression] = [] if abs(value) == 1 else [Number(Fraction(abs(value)))]
    below: list[Expression] = []
    for name, power in zip(ring.names, exponents, strict=False):
        if power:
            factor: Expression = Name(name) if power == 1 else Power(Name(name), power)
            (below if name in ring.inverted else above).append(factor)
    term = divide(multiply(above), multiply(below))
    return Negative(term) if value < 0 else term
