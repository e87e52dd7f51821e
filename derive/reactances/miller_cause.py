"""What makes a gain between two nodes change with frequency: the part that most of its first corner hangs on."""

from __future__ import annotations

from collections.abc import Mapping
from fractions import Fraction

from derive.algebra.ratio import exact_value
from derive.algebra.ring import Polynomial, Ring
from derive.devices.elements import SmallSignal
from derive.reactances.miller_gain import NodeGain
from derive.reactances.states import states_of

# Of a coefficient that nobody owns more than this of, no part is the cause.
MOST = Fraction(1, 2)


def cause_of_change(gain: NodeGain, circuit: SmallSignal, values: Mapping[str, Fraction]) -> str:
    """Name the capacitor or inductor that owns most of the larger of the gain's two first coefficients.

    Gives "" where none owns more than half.
    """
    names = [state.symbol for state in states_of(circuit)]
    sides = [_slope(gain.ring, part, values, names) for part in (gain.top, gain.bottom)]
    total, owned = max(sides, key=lambda side: side[0])
    if not total or not owned:
        return ""
    name = max(owned, key=lambda known: owned[known])
    return name if owned[name] > MOST * total else ""


def _slope(
    ring: Ring, found: Mapping[int, Polynomial], values: Mapping[str, Fraction], names: list[str]
) -> tuple[Fraction, dict[str, Fraction]]:
    """Give the size of the coefficient of s over that of 1, and what each state has of it."""
    if 1 not in found:
        return Fraction(0), {}
    below = exact_value(ring, found[0], values, {})
    if not below:
        return Fraction(0), {}
    total = abs(exact_value(ring, found[1], values, {}) / below)
    owned = {}
    for name in names:
        place = ring.names.index(name)
        terms = {powers: value for powers, value in found[1].to_dict().items() if powers[place]}
        if terms:
            owned[name] = abs(exact_value(ring, ring.context.from_dict(terms), values, {}) / below)
    return total, owned
