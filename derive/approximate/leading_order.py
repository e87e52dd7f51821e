"""x >> y on coefficients: what is struck is small against a term that stays beside it.

The rule. The ratio x/y is written as P/Q, both polynomials in the circuit's symbols with nothing in common
(beta is g_m·r_pi). Numerator and denominator of the result, in lowest terms, are taken coefficient of s by
coefficient of s. A term of a coefficient that is m·Y, with Y a term of Q, is struck where the same
coefficient also holds m·X for every term X of P, all with the same sign relative to P. That is the leading
order in a bookkeeping parameter t, put as t·Y in the place of Y, within each group of terms that differ by
the factor x/y alone: a term that has no partner larger by that factor stays, however small x/y would make
it elsewhere. So R_B >> R_S strikes R_S·r_pi beside R_B·r_pi, and leaves R_S·r_pi where it stands alone; and
beta >> 1 makes R_E + beta·R_E into beta·R_E. What is struck is judged on what stood there before.
"""

from __future__ import annotations

from collections.abc import Collection
from dataclasses import dataclass
from typing import Literal

from derive.algebra.ring import Polynomial
from derive.approximate.register import ShownCoefficient, StruckTerm
from derive.approximate.space import Ratio, Space
from derive.expressions.polynomials import add
from derive.expressions.tree import Negative, Struck

Exponents = tuple[int, ...]
Terms = dict[Exponents, int]
# Coefficients of more terms are not shown; what was struck in them is listed.
MOST_SHOWN = 12


@dataclass(frozen=True, slots=True, eq=False)
class Thinned:
    """A ratio with terms struck; `left` is numerator and denominator before common factors were removed."""

    ratio: Ratio | None
    left: tuple[Polynomial, Polynomial]
    struck: tuple[StruckTerm, ...]
    shown: tuple[ShownCoefficient, ...]


def thin(space: Space, ratio: Ratio, larger: Polynomial, smaller: Polynomial) -> Thinned:
    """Strike from a ratio what is small where larger/smaller is large (both in lowest terms)."""
    whole: list[Polynomial] = []
    struck: list[StruckTerm] = []
    shown: list[ShownCoefficient] = []
    big, small = _terms(larger), _terms(smaller)
    s = space.ring.names.index("s")
    sides: tuple[Literal["numerator", "denominator"], ...] = ("numerator", "denominator")
    for of, polynomial in zip(sides, (ratio.top, ratio.bottom), strict=True):
        terms = _terms(polynomial)
        gone: dict[Exponents, list[Exponents]] = {}
        for exponents in sorted(terms, reverse=True):
            partners = _partners(terms, exponents, big, small)
            if partners:
                gone[exponents] = partners
        kept = {exponents: value for exponents, value in terms.items() if exponents not in gone}
        whole.append(space.ring.context.from_dict(kept))
        shown += _shown(space, of, terms, gone.keys())
        for exponents, partners in gone.items():
            bare = [_without(exponents, s), *(_without(partner, s) for partner in partners)]
            against = add([space.term(b, terms[p]) for b, p in zip(bare[1:], partners, strict=True)])
            term = space.term(bare[0], terms[exponents])
            struck.append(StruckTerm(of, exponents[s], term, against))
    top, bottom = whole
    left = space.ratio(top, bottom) if top != 0 and bottom != 0 else None
    return Thinned(left, (top, bottom), tuple(struck), tuple(shown))


def _shown(
    space: Space, of: Literal["numerator", "denominator"], terms: Terms, gone: Collection[Exponents]
) -> list[ShownCoefficient]:
    """Write the coefficients in which terms are struck, those terms struck through and behind the others."""
    s = space.ring.names.index("s")
    found = []
    for power in sorted({exponents[s] for exponents in gone}):
        own = sorted((e for e in terms if e[s] == power), key=lambda e: (e in gone, [-p for p in e]))
        if len(own) > MOST_SHOWN:
            continue
        pieces = []
        for exponents in own:
            term = space.term(_without(exponents, s), terms[exponents])
            if exponents in gone:
                term = Negative(Struck(term.operand)) if isinstance(term, Negative) else Struck(term)
            pieces.append(term)
        found.append(ShownCoefficient(of, power, add(pieces)))
    return found


def _partners(terms: Terms, exponents: Exponents, big: Terms, small: Terms) -> list[Exponents]:
    """Give the terms that one is small against; [] where it has to stay."""
    for factor in sorted(small, reverse=True):
        rest = tuple(a - b for a, b in zip(exponents, factor, strict=True))
        if any(power < 0 for power in rest):
            continue
        partners = [tuple(a + b for a, b in zip(rest, each, strict=True)) for each in sorted(big)]
        if exponents in partners or not all(partner in terms for partner in partners):
            continue
        signs = {terms[p] * big[each] > 0 for p, each in zip(partners, sorted(big), strict=True)}
        if len(signs) == 1:
            return partners
    return []


def _terms(polynomial: Polynomial) -> Terms:
    return {tuple(map(int, e)): int(c) for e, c in polynomial.to_dict().items()}


def _without(exponents: Exponents, place: int) -> Exponents:
    return tuple(0 if k == place else power for k, power in enumerate(exponents))
