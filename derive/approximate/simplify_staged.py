"""Low-frequency gain and dominant pole of a circuit of stages, in short lines.

As K = G_I·R_I·A_II with the quantities of its stages, and p_1 = −1/(C·R), where R is what the capacitor sees: across
a stage, by Miller's theorem, the resistance at its input times one and the gain.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from derive.approximate.questions import Question, Simplified
from derive.approximate.simplify_desk import Desk, desk_of, product
from derive.approximate.simplify_form import LEFT, lined
from derive.approximate.simplify_lines import numeral
from derive.approximate.simplify_network import NOWHERE, Network, Stamp
from derive.approximate.simplify_original import Original
from derive.approximate.simplify_quantities import Quantity, Short, at_zero_frequency, short_quantity
from derive.approximate.simplify_setups import pole_asked
from derive.approximate.simplify_stages import LONGEST_LINE, PARTS, Way, staged
from derive.approximate.simplify_trials import matrices
from derive.expressions.polynomials import add, multiply, negate
from derive.expressions.tree import ONE, Expression, Name, Quotient
from derive.topology.topology import Budget

# The largest time constants alone are the pole's where they miss it by less than this part of the limit.
CONSTANTS_PART = 0.5
MOST_CONSTANTS = 3


def staged_form(question: Question, budget: Budget, original: Original) -> Simplified | None:
    """Give a question's answer in the lines of the circuit's stages; None where there is none within the budget."""
    if original.low_gain is None or original.low_gain[1]:
        return None
    limit = float(budget.gain)
    network = at_zero_frequency(original.network)
    constants = _constants(original)
    # The compensation's ends are where a designer cuts.
    through = constants[0].stamp.rows if constants else ()
    stages = original.kept_stages(limit, lambda: staged(network, limit, through))
    if stages is None:
        return None
    desk, ways = desk_of(original, network), stages.ways
    desk.assume(network, stages.changes, (), "all lines")
    form = _gain(desk, ways) if question.kind == "low-frequency gain" else None
    if question.kind == "dominant pole":
        form = _pole(desk, ways, constants, question, original, limit)
    if form is None:
        return None
    found = lined(question, budget, original, LEFT[question.kind], form, desk)
    return found if found.within else None


def _gain(desk: Desk, ways: Sequence[Way]) -> Expression:
    sign, form = product([factor for way, stem in _stems(ways) for factor in _factors(desk, way, stem)])
    return negate(form) if sign < 0 else form


def _stems(ways: Sequence[Way]) -> list[tuple[Way, str]]:
    return [(way, numeral(place)) for place, way in enumerate(ways, 1)]


def _factors(desk: Desk, way: Way, stem: str) -> list[tuple[int, Expression]]:
    return [
        desk.write(short, quantity, stem)
        for short, quantity in zip(way.shorts, way.quantities, strict=True)
    ]


@dataclass(frozen=True, slots=True)
class _Constant:
    """A capacitor with the time constant that it has by itself, all others open."""

    stamp: Stamp
    seconds: float


def _constants(original: Original) -> list[_Constant]:
    """Give the time constants of all capacitors, the largest first."""
    network = original.network
    constant, _, _, _ = matrices(network)
    inverse = np.linalg.inv(constant)
    table = np.zeros((len(constant) + 1, len(constant) + 1))
    table[:-1, :-1] = inverse
    found = []
    for stamp, size in zip(network.stamps, network.sizes, strict=True):
        if stamp.power == 1 and stamp.rows == stamp.columns and stamp.symbols and stamp.sign == 1:
            a, b = stamp.rows
            seen = table[a, a] - table[a, b] - table[b, a] + table[b, b]
            found.append(_Constant(stamp, float(size * seen)))
    return sorted(found, key=lambda each: -abs(each.seconds))


def _pole(
    desk: Desk,
    ways: Sequence[Way],
    constants: Sequence[_Constant],
    question: Question,
    original: Original,
    limit: float,
) -> Expression | None:
    """Write the dominant pole by the largest time constants."""
    pole = pole_asked(question, original)
    if pole is None or pole.imag:
        return None
    largest: list[_Constant] = []
    for each in constants[:MOST_CONSTANTS]:
        largest.append(each)
        off = -1 / sum(constant.seconds for constant in largest) / pole.real - 1
        if abs(off) <= CONSTANTS_PART * float(question.corner_limit):
            break
    else:
        return None
    terms = []
    for place, constant in enumerate(largest):
        written = _constant(desk, ways, constant, numeral(len(ways) + 1 + place), limit)
        if written is None:
            return None
        terms.append(written)
    return negate(Quotient(ONE, add(terms)))


def _constant(
    desk: Desk, ways: Sequence[Way], constant: _Constant, stem: str, limit: float
) -> Expression | None:
    """Write a time constant: across stages the resistance at the first times their gain, else what is seen."""
    capacitor = Name(constant.stamp.symbols[0])
    one, other = constant.stamp.rows
    for start, end in ((one, other), (other, one)):
        within = _between(ways, start, end)
        if within:
            size = float(np.prod([1 + 0.0] + [_size(way) for way in within]))
            found = _across(desk, ways, within, start, limit)
            if found is None:
                return None
            sign, resistance, gain = found
            # Below this, the one of Miller's 1 + A counts.
            whole = gain if abs(size) * limit > 1 else add([ONE, gain])
            return multiply([capacitor, resistance, whole]) if sign > 0 else None
    at, back = (one, other) if one != NOWHERE else (other, one)
    quantity = Quantity("resistance", None, at, back)
    short = _first(desk.network, quantity, limit)
    if short is None or short.value < 0:
        return None
    return multiply([capacitor, desk.write(short, quantity, stem)[1]])


def _size(way: Way) -> float:
    return float(np.prod([short.value for short in way.shorts]))


def _between(ways: Sequence[Way], start: int, end: int) -> list[Way]:
    """Give the stages from one node to another; [] where there are none."""
    starts = [place for place, way in enumerate(ways) if way.start == start]
    ends = [place for place, way in enumerate(ways) if way.end == end]
    return list(ways[starts[0] : ends[0] + 1]) if starts and ends and starts[0] <= ends[0] else []


def _across(
    desk: Desk, ways: Sequence[Way], within: Sequence[Way], start: int, limit: float
) -> tuple[int, Expression, Expression] | None:
    """Write the resistance at a node, and the gain from it over stages with its sign turned."""
    stems = {id(way): stem for way, stem in _stems(ways)}
    before = next((way for way in ways if way.end == start), None)
    quantity = Quantity("resistance", None, start)
    known = before is not None and before.start is None and before.quantities[-1] == quantity
    if before is not None and known:
        short, stem = before.shorts[-1], stems[id(before)]
    else:
        found = _first(desk.network, quantity, limit)
        if found is None:
            return None
        short, stem = found, numeral(len(ways) + 1)
    _, resistance = desk.write(short, quantity, stem)
    sign, gain = product([f for way in within for f in _factors(desk, way, stems[id(way)])])
    return -sign, resistance, gain


def _first(network: Network, quantity: Quantity, limit: float) -> Short | None:
    """Write a quantity as roughly as its line needs to be short enough."""
    for part in PARTS:
        short = short_quantity(network, quantity, part * limit)
        if short is not None and short.longest <= LONGEST_LINE:
            return short
    return None
