"""Whether polynomials share a factor, judged on a random line modulo a prime.

Polynomials with a common factor have one on every line on which the factor is not constant, and it is
constant on a random line only by a chance of about 1e-17. So polynomials whose restrictions to the line
are coprime are coprime. The other way round proves nothing: then a real greatest common divisor decides.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence

from flint import nmod_poly

from derive.algebra import modular
from derive.algebra.modular import PRIME
from derive.algebra.ring import Polynomial, Ring

Line = Callable[[int], list[int]]


def line(ring: Ring, seed: str) -> Line:
    """Give a random line through the space of the ring's generators, as points by whole parameter."""
    # Small numbers, because FLINT evaluates over the integers before they are reduced.
    base = [value % 65_521 + 1 for value in modular.residues(len(ring.names) or 1, seed + " base")]
    slope = [value % 251 + 1 for value in modular.residues(len(ring.names) or 1, seed + " slope")]
    return lambda step: [start + step * rise for start, rise in zip(base, slope, strict=True)]


def coprime(ring: Ring, one: Polynomial, other: Polynomial) -> bool:
    """Whether two polynomials certainly share no factor (but for a number)."""
    degree = max(one.total_degree(), other.total_degree())
    points = line(ring, "coprime")
    values = [(one(*points(step)), other(*points(step))) for step in range(degree + 1)]
    return _shared_degree([int(a) for a, _ in values], [int(b) for _, b in values]) == 0


def cramer_shared_degree(ring: Ring, rows: Sequence[Mapping[int, Polynomial]], degree: int) -> int:
    """Give the degree, on a random line, of what Cramer's two determinants for the last unknown share.

    `degree` is the greater of their total degrees.
    """
    size = len(rows)
    points = line(ring, "cramer")
    above, below = [], []
    for step in range(degree + 1):
        dense = modular.evaluate_rows(rows, size + 1, points(step))
        below.append(int(modular.matrix([row[:size] for row in dense]).det()))
        above.append(int(modular.matrix([[*row[: size - 1], row[size]] for row in dense]).det()))
    return _shared_degree(above, below)


def _shared_degree(one: Sequence[int], other: Sequence[int]) -> int:
    return int(_interpolate(one).gcd(_interpolate(other)).degree())


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
