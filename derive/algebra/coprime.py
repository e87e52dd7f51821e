"""Whether polynomials share a factor, judged on a random line modulo a prime.

Polynomials with a common factor have one on every line on which the factor is not constant, and it is
constant on a random line only by a chance of about 1e-17. So polynomials whose restrictions to the line
are coprime are coprime. The other way round proves nothing: then a real greatest common divisor decides.
"""

from __future__ import annotations

from collections.abc import Sequence

from flint import nmod_poly

from derive.algebra import modular
from derive.algebra.modular import PRIME
from derive.algebra.ring import Polynomial, Ring


def coprime(ring: Ring, one: Polynomial, other: Polynomial) -> bool:
    """Whether two polynomials certainly share no factor (but for a number)."""
    degree = max(one.total_degree(), other.total_degree())
    values = [(one(*point), other(*point)) for point in _line(ring, degree + 1)]
    first, second = ([int(value) for value in column] for column in zip(*values, strict=True))
    return bool(_interpolate(first).gcd(_interpolate(second)).degree() == 0)


def _line(ring: Ring, count: int) -> list[list[int]]:
    """Give the first points, at whole parameters, of a random line through the generators' space."""
    # Small numbers, because FLINT evaluates over the integers before they are reduced.
    width = len(ring.names) or 1
    base = [value % 65_521 + 1 for value in modular.residues(width, "coprime base")]
    slope = [value % 251 + 1 for value in modular.residues(width, "coprime slope")]
    return [
        [start + step * rise for start, rise in zip(base, slope, strict=True)] for step in range(count)
    ]


def _interpolate(values: Sequence[int]) -> nmod_poly:
    """Give the polynomial of least degree with these values at 0, 1, 2, … (Newton's form)."""
    table = [value % PRIME for value in values]
    for width in range(1, len(table)):
        gap = pow(width, -1, PRIME)
        for index in range(len(table) - 1, width - 1, -1):
            table[index] = (table[index] - table[index - 1]) * gap % PRIME
    result = nmod_poly([0], PRIME)
    for point in range(len(table) - 1, -1, -1):
        result = result * nmod_poly([-point % PRIME, 1], PRIME) + nmod_poly([table[point]], PRIME)
    return result
