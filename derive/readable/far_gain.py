"""The gain far above all corners, for responses that begin with a zero at the origin."""

from __future__ import annotations

from derive.algebra.ratio import coefficients, lowest_terms
from derive.eliminate.derivation import Derivation
from derive.expressions.tree import Expression
from derive.readable.readable import read_ratio
from derive.readable.vocabulary import Vocabulary


def far_gain(derivation: Derivation, vocabulary: Vocabulary) -> Expression | None:
    """Give the response for s → ∞ in the fewest signs; None unless it is zero for s → 0 and finite there."""
    if derivation.numerator == 0:
        return None
    ring = derivation.system.ring.plain()
    top = coefficients(ring, derivation.numerator, "s")
    bottom = coefficients(ring, derivation.denominator, "s")
    if min(top) <= min(bottom) or max(top) != max(bottom):
        return None
    return read_ratio(ring, *lowest_terms(ring, top[max(top)], bottom[max(bottom)]), vocabulary)
