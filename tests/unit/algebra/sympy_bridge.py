"""Takes this station's polynomials to SymPy, which knows nothing of how they were made."""

from __future__ import annotations

import sympy

from derive.algebra.ring import Polynomial, Ring


def symbol(name: str) -> sympy.Symbol:
    return sympy.Symbol(name)


def to_sympy(ring: Ring, polynomial: Polynomial) -> sympy.Expr:
    """Give a polynomial as an expression in the names; an inverted name becomes its reciprocal."""
    total = sympy.Integer(0)
    for exponents, coefficient in polynomial.to_dict().items():
        term = sympy.Integer(int(coefficient))
        for name, power in zip(ring.names, map(int, exponents), strict=False):
            term *= symbol(name) ** (-power if name in ring.inverted else power)
        total += term
    return total


def from_terms(ring: Ring, terms: dict[tuple[int, ...], int]) -> Polynomial:
    return ring.context.from_dict({key: value for key, value in terms.items() if value})


def matrix_of(ring: Ring, rows, columns) -> sympy.Matrix:
    return sympy.Matrix(
        [[to_sympy(ring, row[column]) if column in row else 0 for column in columns] for row in rows]
    )


def in_lowest_terms(numerator: sympy.Expr, denominator: sympy.Expr) -> bool:
    """Whether two polynomials over the integers share neither a factor nor a number."""
    return sympy.gcd(numerator, denominator) in (1, -1)
