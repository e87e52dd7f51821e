"""What the gain becomes as one part goes to zero or to infinity: a line of sanity under the result.

The gain is a ratio of polynomials in any one symbol, so its limit is that of the terms with the lowest
power (towards 0) or the highest (towards ∞): exact, and no approximation.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import Literal

from derive.algebra.ratio import coefficients, lowest_terms
from derive.algebra.ring import Polynomial, Ring
from derive.devices.elements import Coupling, Inductor
from derive.eliminate.derivation import Derivation
from derive.estimates.estimates import Limit
from derive.expressions.tree import ZERO, Expression
from derive.readable.readable import read_ratio
from derive.readable.vocabulary import Vocabulary

# Limits of a longer gain would be as unreadable as itself.
MOST_TERMS = 200
# A line of sanity is read at a glance: longer ones are left out, and all together keep within a page.
MOST_TERMS_EACH = 12
MOST_TERMS_WRITTEN = 60

End = Literal["0", "inf"]
ENDS: tuple[End, ...] = ("0", "inf")
_Ratio = tuple[Polynomial, Polynomial]


def limits_of_gain(derivation: Derivation, vocabulary: Vocabulary) -> tuple[Limit, ...]:
    """Give what K becomes at either end of every symbol that it depends on, finite limits first.

    Long limits are left out, the longest first, and so are values that a mutual inductance is made of, as
    it would go with them. () where the gain is too long to read, or is one symbol and no more.
    """
    if derivation.numerator == 0:
        return ()
    ring = derivation.system.ring.plain()
    top, bottom = gain_of(ring, derivation)
    if len(top) + len(bottom) > MOST_TERMS or _is_one_part(top, bottom):
        return ()
    tied = _tied(derivation)
    parts = {part.name for part in derivation.system.small_signal.topology.parts}
    found: list[tuple[str, End, _Ratio]] = []
    for symbol in derivation.system.small_signal.symbols:
        for end in ENDS if symbol.name not in tied else ():
            limit = limit_of(ring, top, bottom, symbol.name, end)
            if limit is not None:
                found.append((symbol.name, end, limit))
    # The shortest first, and of equal ones those of parts before those of devices' parameters.
    order = sorted(found, key=lambda one: (_size(one[2]), one[0] not in parts))
    desk = _Desk(ring, vocabulary)
    written = {(name, end): desk.write(*limit) for name, end, limit in order if limit[1] != 0}
    kept = [
        Limit(name, end, written.get((name, end)))
        for name, end, limit in found
        if limit[1] == 0 or written[name, end] is not None
    ]
    return tuple(sorted(kept, key=lambda limit: limit.limit is None))


def _size(limit: _Ratio) -> int:
    return len(limit[0]) + len(limit[1])


def _is_one_part(top: Polynomial, bottom: Polynomial) -> bool:
    """Whether the gain is a single symbol, whose limits tell nothing."""
    return len(top) == len(bottom) == 1 and sum(top.degrees()) + sum(bottom.degrees()) == 1


@dataclass(slots=True)
class _Desk:
    """Writes ratios for reading, equal ones once, as long as there is room."""

    ring: Ring
    vocabulary: Vocabulary
    written: list[tuple[Polynomial, Polynomial, Expression]] = field(default_factory=list)
    terms: int = 0

    def write(self, above: Polynomial, below: Polynomial) -> Expression | None:
        """Write a ratio; None where it is too long."""
        if above == 0:
            return ZERO
        for top, bottom, expression in self.written:
            if top == above and bottom == below:
                return expression
        size = _size((above, below))
        if size > MOST_TERMS_EACH or self.terms + size > MOST_TERMS_WRITTEN:
            return None
        self.terms += size
        self.written.append((above, below, read_ratio(self.ring, above, below, self.vocabulary)))
        return self.written[-1][2]


def gain_of(ring: Ring, derivation: Derivation) -> tuple[Polynomial, Polynomial]:
    """Give the gain of the normal form as numerator and denominator in lowest terms."""
    top = coefficients(ring, derivation.numerator, "s")
    bottom = coefficients(ring, derivation.denominator, "s")
    return lowest_terms(ring, top[min(top)], bottom[min(bottom)])


def limit_of(
    ring: Ring, top: Polynomial, bottom: Polynomial, name: str, end: End
) -> tuple[Polynomial, Polynomial] | None:
    """Give the limit as a ratio, its denominator 0 where it is infinite; None where nothing changes."""
    above, below = coefficients(ring, top, name), coefficients(ring, bottom, name)
    if set(above) | set(below) == {0}:
        return None
    last = min if end == "0" else max
    power, power_below = last(above), last(below)
    order = power - power_below if end == "0" else power_below - power
    if order > 0:
        return ring.zero, ring.one
    if order < 0:
        return ring.one, ring.zero
    return lowest_terms(ring, above[power], below[power_below])


def _tied(derivation: Derivation) -> set[str]:
    """Give the symbols that mutual inductances are made of."""
    elements = derivation.system.small_signal.elements
    couplings = [element for element in elements if isinstance(element, Coupling)]
    coils = {coil for coupling in couplings for coil in coupling.coils}
    own = {e.inductance for e in elements if isinstance(e, Inductor) and e.name in coils}
    return own | {coupling.coefficient for coupling in couplings}
