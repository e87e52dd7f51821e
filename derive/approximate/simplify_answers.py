"""From the expanded reduced circuit to the few terms that answer the question."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np

from derive.algebra.ratio import coefficients, lowest_terms
from derive.algebra.ring import Polynomial, Ring
from derive.approximate.questions import Question
from derive.approximate.simplify_expand import Expanded
from derive.approximate.simplify_measures import InBand, Measure, RootOfRatio
from derive.approximate.simplify_network import Network
from derive.approximate.simplify_original import Original
from derive.approximate.simplify_setups import pole_asked
from derive.approximate.simplify_terms import Kept, Terms, drop_terms, terms_of
from derive.approximate.simplify_trials import Change, Complex
from derive.topology.topology import Budget


@dataclass(frozen=True, slots=True, eq=False)
class Answer:
    """A ratio of two polynomials, what was dropped from them, and its error in parts of the budget.

    The answer is the ratio itself, or its root.
    """

    ring: Ring
    top: Polynomial
    bottom: Polynomial
    root: int
    error: float
    dropped: tuple[tuple[Terms, Kept], ...]

    @property
    def terms(self) -> int:
        """The number of terms in numerator and denominator."""
        return len(self.top) + len(self.bottom)


@dataclass(frozen=True, slots=True, eq=False)
class Draft:
    """An answer, the changes and ties that led to it, and the elements that are left."""

    answer: Answer
    changes: tuple[Change, ...]
    ties: tuple[tuple[str, str], ...]
    left: tuple[str, ...]


@dataclass(frozen=True, slots=True, eq=False)
class Candidate:
    """A ratio of coefficients that might be the value sought, and its error with all its terms."""

    top: Polynomial
    bottom: Polynomial
    measure: Measure
    root: int = 1


def band_answer(
    expanded: Expanded,
    network: Network,
    original: Original,
    budget: Budget,
    samples: Complex,
    limit: float,
) -> Answer | None:
    """Drop terms of the whole response; None where even with all of them it is too far off."""
    measure = InBand(original.at(samples), float(budget.magnitude_db), float(budget.phase_deg))
    return _dropped(
        expanded.ring, Candidate(expanded.top, expanded.bottom, measure), network, samples, limit
    )


def value_answer(
    expanded: Expanded, question: Question, budget: Budget, original: Original, limit: float
) -> tuple[Answer | None, float]:
    """Drop terms of the ratio of coefficients that comes nearest; also gives how near one comes at all."""
    network = original.network
    best: tuple[float, Candidate] | None = None
    for candidate in _candidates(expanded, question, budget, original):
        above, below = (
            terms_of(expanded.ring, p, network.values).values.sum()
            for p in (candidate.top, candidate.bottom)
        )
        with np.errstate(all="ignore"):
            ratio = np.array([[above / below + 0j]]) if below else np.array([[np.nan + 0j]])
        error = float(candidate.measure.errors(ratio, ratio)[0])
        if best is None or error < best[0]:
            best = error, candidate
    if best is None:
        return None, float("inf")
    if not best[0] <= limit:
        return None, best[0]
    one = np.ones(1, dtype=complex)
    return _dropped(expanded.ring, best[1], network, one, limit), best[0]


def _dropped(
    ring: Ring, candidate: Candidate, network: Network, samples: Complex, limit: float
) -> Answer | None:
    above = terms_of(ring, candidate.top, network.values)
    below = terms_of(ring, candidate.bottom, network.values)
    kept_above, kept_below, error = drop_terms(above, below, samples, candidate.measure, limit)
    if not error <= 1:
        return None
    top, bottom = lowest_terms(ring, above.polynomial(kept_above), below.polynomial(kept_below))
    dropped = ((above, kept_above), (below, kept_below))
    return Answer(ring, top, bottom, candidate.root, error, dropped)


def _candidates(
    expanded: Expanded, question: Question, budget: Budget, original: Original
) -> Iterator[Candidate]:
    ring = expanded.ring
    if expanded.top == 0:
        return
    top, bottom = (coefficients(ring, p, "s") for p in (expanded.top, expanded.bottom))
    limit = float(question.corner_limit)
    if question.kind == "low-frequency gain":
        gain, power = original.low_gain or (0.0, 0)
        if min(top) - min(bottom) == power:
            measure = RootOfRatio(gain, 1, float(budget.gain))
            yield Candidate(top[min(top)], bottom[min(bottom)], measure)
        return
    if question.kind == "unity-gain frequency":
        omega = original.unity_rad_per_s or 1.0
        yield from _of_unity(top, bottom, omega, limit, original.network, ring)
        return
    pole = pole_asked(question, original)
    if pole is None:
        return
    step = 1 if pole.imag == 0 else 2
    target = pole.real if step == 1 else abs(pole)
    for power in bottom:
        if power + step in bottom:
            sign = -1 if step == 1 else 1
            measure = RootOfRatio(target, step, limit)
            yield Candidate(sign * bottom[power], bottom[power + step], measure, step)


def _of_unity(
    top: dict[int, Polynomial],
    bottom: dict[int, Polynomial],
    omega: float,
    limit: float,
    network: Network,
    ring: Ring,
) -> Iterator[Candidate]:
    """Give ω_u from one power of s above and one below, where |N_i·s^i| = |D_j·s^j|."""
    for above, one in top.items():
        for below, other in bottom.items():
            root = below - above
            if abs(root) not in (1, 2):
                continue
            first, second = (one, other) if root > 0 else (other, one)
            values = [terms_of(ring, p, network.values).values.sum() for p in (first, second)]
            if values[0] * values[1] < 0:
                first = -first
            yield Candidate(first, second, RootOfRatio(omega, abs(root), limit), abs(root))
