"""The proof of a readable form: it is taken back to polynomials and compared with the ratio it came from.

Short forms are compared exactly, as polynomials multiplied out. Long ones are compared at three random points
modulo a prime, where two different ratios agree by a chance of less than (total degree/2^61)^3 (Schwartz,
J. ACM 27 (1980) 701-717; Zippel (1979); from memory).
"""

from __future__ import annotations

from collections.abc import Sequence
from fractions import Fraction

from derive.algebra.modular import PRIME, residues
from derive.algebra.ratio import lowest_terms
from derive.algebra.ring import Polynomial, Ring
from derive.algebra.unreduced import Unreduced
from derive.expressions.tree import Expression
from derive.expressions.walk import evaluate, evaluate_modulo, substitute
from derive.readable.form import Definition
from derive.readable.measure import leaves

# Forms of more leaves are compared modulo a prime.
EXACT_LEAVES = 60
POINTS = 3


def ratio_of(expression: Expression, ring: Ring) -> tuple[Polynomial, Polynomial]:
    """Give an expression in the ring's names as numerator and denominator in lowest terms.

    Raises: DeriveError for a name that the ring does not have; ZeroDivisionError.
    """
    pair = _pair(expression, ring)
    return lowest_terms(ring, pair.top, pair.bottom)


def _pair(expression: Expression, ring: Ring) -> Unreduced:
    names = {name: Unreduced(ring.generator(name), ring.one) for name in ring.names}

    def number(value: Fraction) -> Unreduced:
        return Unreduced(ring.constant(value.numerator), ring.constant(value.denominator))

    return evaluate(expression, names, number)


def expanded(expression: Expression, definitions: Sequence[Definition]) -> Expression:
    """Put what they stand for in the place of defined names."""
    known: dict[str, Expression] = {}
    for name, value in definitions:
        known[name] = substitute(value, known)
    return substitute(expression, known)


def same_ratio(
    expression: Expression,
    definitions: Sequence[Definition],
    ring: Ring,
    numerator: Polynomial,
    denominator: Polynomial,
) -> bool:
    """Whether an expression equals numerator/denominator for all values."""
    if leaves(expression) <= EXACT_LEAVES:
        try:
            pair = _pair(expanded(expression, definitions), ring)
        except ZeroDivisionError:
            return False
        return bool(pair.top * denominator == numerator * pair.bottom)
    return _same_modulo(expression, definitions, ring, numerator, denominator)


def _same_modulo(
    expression: Expression,
    definitions: Sequence[Definition],
    ring: Ring,
    numerator: Polynomial,
    denominator: Polynomial,
) -> bool:
    width = max(len(ring.names), 1)
    values = residues(POINTS * width, "readable form")
    for turn in range(POINTS):
        point = values[turn * width : (turn + 1) * width]
        known = dict(zip(ring.names, point, strict=False))
        try:
            for name, value in definitions:
                known[name] = evaluate_modulo(value, known, PRIME)
            found = evaluate_modulo(expression, known, PRIME)
        except ZeroDivisionError:
            return False
        # FLINT evaluates over the integers; residues keep the numbers of one word a factor.
        top, bottom = int(numerator(*point)) % PRIME, int(denominator(*point)) % PRIME
        if (found * bottom - top) % PRIME:
            return False
    return True
