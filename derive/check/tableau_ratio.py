"""The response as a ratio of two determinants of the tableau: bordered for the numerator, plain below.

With A·x = b and the response w·x, the determinant of A bordered by b and w is −(w·A⁻¹·b)·|A|. As
polynomials in s both are found from their values at whole numbers (Newton's divided differences).
"""

from __future__ import annotations

from collections.abc import Sequence
from fractions import Fraction
from typing import Any

from flint import acb, acb_mat, fmpq, fmpq_mat, fmpq_poly, nmod_mat

from derive.check.solve import NoSolutionError, residue
from derive.check.stamp import Tableau


def exact_ratio(tableau: Tableau) -> tuple[Any, Any]:
    """Give numerator and denominator in lowest terms, as FLINT polynomials, of a tableau of rationals.

    Raises: NoSolutionError where the tableau fixes no response.
    """
    tops, bottoms = [], []
    for s in range(degree_of(tableau) + 1):
        tops.append(-_exact(tableau, s, bordered=True))
        bottoms.append(_exact(tableau, s, bordered=False))
    top, bottom = _through(tops), _through(bottoms)
    if bottom.degree() < 0:
        raise NoSolutionError("the circuit has no unique solution at these values")
    shared = top.gcd(bottom)
    return top // shared, bottom // shared


def lowest_modulo(tableau: Tableau, prime: int) -> tuple[int, int]:
    """Give the lowest coefficients in s that are not zero, of numerator and denominator, modulo the prime.

    Raises: NoSolutionError where the tableau fixes no response; ZeroDivisionError for an unlucky prime.
    """
    found = []
    for bordered in (True, False):
        values = [_modulo(tableau, s, prime, bordered=bordered) for s in range(degree_of(tableau) + 1)]
        found.append(next((c for c in _coefficients_modulo(values, prime) if c), 0))
    if not found[1]:
        raise NoSolutionError("the circuit has no unique solution at these values")
    return -found[0] % prime, found[1]


def determinant(tableau: Tableau, s: Any, *, bordered: bool) -> Any:
    """Give a determinant at a complex s as a ball, in the working precision."""
    size = tableau.size + bordered
    flat = [acb(0)] * (size * size)
    for (row, column), entry in tableau.constant.items():
        flat[row * size + column] += _ball(entry)
    for (row, column), entry in tableau.rising.items():
        flat[row * size + column] += s * _ball(entry)
    if bordered:
        _border(tableau, flat, size, _ball)
    return acb_mat(size, size, flat).det()


def degree_of(tableau: Tableau) -> int:
    """Bound the degree in s: one for each row that holds it."""
    return len({row for row, _ in tableau.rising})


def _exact(tableau: Tableau, s: int, *, bordered: bool) -> Any:
    size = tableau.size + bordered
    flat = [fmpq(0)] * (size * size)
    for entries, factor in ((tableau.constant, 1), (tableau.rising, s)):
        for (row, column), entry in entries.items():
            flat[row * size + column] += _rational(entry) * factor
    if bordered:
        _border(tableau, flat, size, _rational)
    return fmpq_mat(size, size, flat).det()


def _modulo(tableau: Tableau, s: int, prime: int, *, bordered: bool) -> int:
    size = tableau.size + bordered
    flat = [0] * (size * size)
    for entries, factor in ((tableau.constant, 1), (tableau.rising, s)):
        for (row, column), entry in entries.items():
            place = row * size + column
            flat[place] = (flat[place] + factor * residue(entry, prime)) % prime
    if bordered:
        _border(tableau, flat, size, lambda value: residue(value, prime))
    return int(nmod_mat(size, size, flat, prime).det())


def _border(tableau: Tableau, flat: list[Any], size: int, image: Any) -> None:
    for row, value in tableau.right.items():
        flat[row * size + size - 1] = image(value)
    for column, factor in tableau.wanted.items():
        flat[(size - 1) * size + column] = image(factor)


def _rational(value: Fraction | int) -> Any:
    exact = Fraction(value)
    return fmpq(exact.numerator, exact.denominator)


def _ball(value: Fraction | int) -> Any:
    return acb(_rational(value))


def _through(values: Sequence[Any]) -> Any:
    """Give the rational polynomial with these values at 0, 1, 2, …."""
    table = list(values)
    for width in range(1, len(table)):
        for index in range(len(table) - 1, width - 1, -1):
            table[index] = (table[index] - table[index - 1]) / width
    result = fmpq_poly([0])
    for point in range(len(table) - 1, -1, -1):
        result = result * fmpq_poly([-point, 1]) + table[point]
    return result


def _coefficients_modulo(values: Sequence[int], prime: int) -> list[int]:
    """Give the coefficients, modulo the prime, of the polynomial with these values at 0, 1, 2, …."""
    table = list(values)
    for width in range(1, len(table)):
        gap = pow(width, -1, prime)
        for index in range(len(table) - 1, width - 1, -1):
            table[index] = (table[index] - table[index - 1]) * gap % prime
    result = [0]
    for point in range(len(table) - 1, -1, -1):
        shifted = [0, *result]
        result = [(high - point * low) % prime for high, low in zip(shifted, [*result, 0], strict=True)]
        result[0] = (result[0] + table[point]) % prime
    return result
