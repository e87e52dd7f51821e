"""A pole by three coefficients, where no ratio of two comes near: b_k + b_(k+1)·s + b_(k+2)·s² = 0.

With τ_I = b_(k+1)/b_k and τ_II = b_(k+2)/b_(k+1), the root nearer to the origin is −2/(τ_I + √(τ_I·(τ_I − 4·τ_II))),
and about −1/(τ_I − τ_II), which is shorter: the first of the terms of its series in τ_II/τ_I.
"""

from __future__ import annotations

from collections.abc import Callable, Iterator, Sequence
from dataclasses import dataclass
from fractions import Fraction
from typing import Any

import numpy as np
import numpy.typing as npt

from derive.algebra.ratio import coefficients, lowest_terms
from derive.algebra.ring import Polynomial, Ring
from derive.approximate.simplify_expand import Expanded
from derive.approximate.simplify_network import Network
from derive.approximate.simplify_quantities import Piece
from derive.approximate.simplify_terms import Terms, terms_of
from derive.approximate.simplify_trials import Floats
from derive.expressions.polynomials import negate
from derive.expressions.tree import ONE, Expression, Number, Product, Quotient, Root, Sum

# Of more terms to begin with, few enough are not found one by one.
MOST_TERMS = 400
# Rounding must not pass the limit.
TERM_PART = 0.98
Sums = tuple[Any, Any, Any]


@dataclass(frozen=True, slots=True)
class Shape:
    """A way to write the root: its value by the three coefficients, and as an expression in τ_I and τ_II."""

    value: Callable[[Sums], Any]
    written: Callable[[Expression, Expression], Expression]


def _corrected(sums: Sums) -> Any:
    return -1 / (sums[1] / sums[0] - sums[2] / sums[1])


def _written_corrected(one: Expression, other: Expression) -> Expression:
    return negate(Quotient(ONE, Sum((one, negate(other)))))


def _of_square(sums: Sums) -> Any:
    first, second = sums[1] / sums[0], sums[2] / sums[1]
    return -2 / (first + np.sqrt(first * (first - 4 * second)))


def _written_of_square(one: Expression, other: Expression) -> Expression:
    two, four = Number(Fraction(2)), Number(Fraction(4))
    inner = Product((one, Sum((one, negate(Product((four, other)))))))
    return negate(Quotient(two, Sum((one, Root(inner)))))


SHAPES = (Shape(_corrected, _written_corrected), Shape(_of_square, _written_of_square))


@dataclass(frozen=True, slots=True, eq=False)
class ThreeTerms:
    """A root by three coefficients, each with what was dropped from it, and its error in parts of a limit."""

    shape: Shape
    ring: Ring
    parts: tuple[Polynomial, Polynomial, Polynomial]
    dropped: tuple[tuple[Terms, npt.NDArray[np.bool_]], ...]
    error: float

    @property
    def terms(self) -> int:
        """The number of terms of τ_I and τ_II together."""
        return sum(len(top) + len(bottom) for top, bottom in self.constants)

    @property
    def constants(self) -> tuple[tuple[Polynomial, Polynomial], tuple[Polynomial, Polynomial]]:
        """τ_I and τ_II as ratios in lowest terms."""
        first, second, third = self.parts
        return lowest_terms(self.ring, second, first), lowest_terms(self.ring, third, second)

    def pieces(self, ties: tuple[tuple[str, str], ...]) -> tuple[Piece, Piece]:
        """τ_I and τ_II, each with what was dropped for it."""
        one, other = self.constants
        return (
            Piece(self.ring, *one, self.dropped[:2], ties),
            Piece(self.ring, *other, self.dropped[2:], ties),
        )


def three_term_roots(
    expanded: Expanded, network: Network, target: float, limit: float
) -> Iterator[ThreeTerms]:
    """Give every root by three neighbouring coefficients that lies within a limit of the pole, in few terms."""
    bottom = coefficients(expanded.ring, expanded.bottom, "s")
    for power in sorted(bottom):
        if power + 1 not in bottom or power + 2 not in bottom:
            continue
        terms = [terms_of(expanded.ring, bottom[power + step], network.values) for step in range(3)]
        if sum(len(each.keys) for each in terms) > MOST_TERMS:
            continue
        for shape in SHAPES:
            kept, error = _few_terms(terms, shape, target, limit)
            if error <= 1:
                parts = [each.polynomial(keep) for each, keep in zip(terms, kept, strict=True)]
                dropped = tuple(zip(terms, kept, strict=True))
                yield ThreeTerms(shape, expanded.ring, (parts[0], parts[1], parts[2]), dropped, error)


def _few_terms(
    terms: Sequence[Terms], shape: Shape, target: float, limit: float
) -> tuple[list[npt.NDArray[np.bool_]], float]:
    """Drop the term that costs least, again and again; give what is kept, and the error with it."""
    values: Floats = np.concatenate([each.values for each in terms])
    owner = np.concatenate([np.full(len(each.keys), place) for place, each in enumerate(terms)])
    kept = np.ones(len(values), dtype=bool)

    def errors(sums: Sums) -> Any:
        with np.errstate(all="ignore"):
            found = np.abs(shape.value(sums) / target - 1) / limit
        return np.nan_to_num(found, nan=np.inf)

    def sums_of(chosen: npt.NDArray[np.bool_]) -> Sums:
        first, second, third = (values[chosen & (owner == place)].sum() for place in range(3))
        return first, second, third

    while True:
        sums, places = sums_of(kept), np.flatnonzero(kept)
        tried = [np.where(owner[places] == k, sums[k] - values[places], sums[k]) for k in range(3)]
        costs = errors((tried[0], tried[1], tried[2]))
        # No coefficient may go whole.
        for k in range(3):
            if (owner[places] == k).sum() == 1:
                costs[owner[places] == k] = np.inf
        best = int(np.argmin(costs))
        if not costs[best] <= TERM_PART:
            break
        kept[places[best]] = False
    return [kept[owner == place] for place in range(3)], float(errors(sums_of(kept)))
