"""The search for the single change that mends a line: proposals, ranked, and each proved before it is told."""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass, replace

from derive.algebra.modular import PRIME
from derive.expressions.tree import Equation, Expression, Name
from derive.expressions.walk import names_of
from derive.handcheck.lexicon import Entry, Lexicon
from derive.handcheck.places import Place, places, replaced, taken_out, valued
from derive.handcheck.proposals import proposals_at
from derive.handcheck.report import Edit
from derive.handcheck.slips import Proposal
from derive.handcheck.whole_line import brackets_at, names_mistaken, names_swapped, size_of
from derive.quantities.dimension import Dimension

# How many changes are told, how many are looked at more closely, and how many places are looked at.
MOST_TOLD, MOST_PROVED, LEAST_PROVED = 5, 40, 4
# Nodes of a line up to which all that is looked at is proved.
SHORT = 200
MOST_PLACES = 4000
MOST_SWAPS = 300
# What it is worth that the changed line follows from the circuit's laws or the lines above, not by solving alone.
FOLLOWS = 2.0
Values = Mapping[str, int]


@dataclass(frozen=True, slots=True, eq=False)
class Bench:
    """What changes to lines are judged with.

    `proved` says whether a line is true; `idle` whether it says nothing; `follows` whether it follows from what
    stands above. `dimension` is that of a name, and `pool` the names that may be written for others.
    """

    lexicon: Lexicon
    multipliers: list[Entry]
    proved: Callable[[Expression, Expression], bool]
    idle: Callable[[Expression, Expression], bool]
    follows: Callable[[Expression, Expression], bool]
    consistent: Callable[[Expression, Expression], bool]
    dimension: Callable[[str], Dimension | None]
    pool: tuple[str, ...]
    is_resistance: Callable[[Expression], bool]

    def strange(self, name: str) -> float:
        """Give what a name costs that the derivation does not use itself."""
        return self.lexicon.cost(Name(name)) - 1


def find_edits(left: Expression, right: Expression, values: Values, bench: Bench) -> tuple[Edit, ...]:
    """Give the single changes that make a line true, the likeliest first; every one is proved.

    Given: values of all names at one point at which the changed line is to be true.
    """
    try:
        trees = valued(left, values), valued(right, values)
    except (KeyError, ZeroDivisionError):
        return ()
    found: list[Proposal] = []
    budget = MOST_PLACES
    for side in (1, 0):
        needed = trees[1 - side].value
        whole = (left, right)[side]
        # Of two names the right one is what is said of the left one.
        alone = isinstance(whole, Name) and (side == 0 or not isinstance(left, Name))
        for place in places(side, trees[side], needed):
            budget -= 1
            if budget < 0:
                break
            found += _at(place, bench, alone=alone, other=(left, right)[1 - side])
            if not alone and budget > MOST_PLACES - MOST_SWAPS:
                found += names_swapped(place, values, bench.dimension)
        found += names_mistaken(side, whole, needed, values, bench.dimension, bench.pool, bench.strange)
    found.sort(key=lambda proposal: (proposal.cost, proposal.way, proposal.says))
    return _proved(left, right, found, bench)


def _at(place: Place, bench: Bench, *, alone: bool, other: Expression) -> list[Proposal]:
    found = [
        *proposals_at(place, bench.lexicon, bench.multipliers, bench.is_resistance),
        *brackets_at(place),
    ]
    if alone:
        # A name that stands alone is what the line is about: it may be mistaken, nothing else.
        found = [replace(p, cost=p.cost + 1.5) for p in found if isinstance(p.after, Name)]
    return [p for p in found if p.after != other]


def _proved(
    left: Expression, right: Expression, found: Sequence[Proposal], bench: Bench
) -> tuple[Edit, ...]:
    kept: list[tuple[float, int, Edit]] = []
    size = size_of(left) + size_of(right)
    most = max(LEAST_PROVED, min(MOST_PROVED, MOST_PROVED * SHORT // size))
    seen: dict[Equation, None] = {}
    for proposal in found:
        if len(seen) >= most:
            break
        line = _changed(left, right, proposal)
        if line is None or line in seen:
            continue
        seen[line] = None
        if _goes_round(line, left, right) or bench.idle(line.left, line.right):
            continue
        if not bench.proved(line.left, line.right):
            continue
        cost = proposal.cost
        if not bench.consistent(line.left, line.right):
            cost += 3.0
        if len(kept) < 12 and size <= 2 * SHORT and bench.follows(line.left, line.right):
            cost -= FOLLOWS
        edit = Edit(proposal.kind, proposal.way, proposal.before, proposal.after, line, proposal.says)
        kept.append((cost, len(kept), edit))
    kept.sort(key=lambda item: item[:2])
    return tuple(edit for _, _, edit in kept[:MOST_TOLD])


def _goes_round(line: Equation, left: Expression, right: Expression) -> bool:
    """Whether a change says what a name is by means of that name."""
    return any(
        isinstance(after, Name) and after.text in names_of(other) and after.text not in names_of(before)
        for after, other, before in ((line.left, line.right, right), (line.right, line.left, left))
    )


def _changed(left: Expression, right: Expression, proposal: Proposal) -> Equation | None:
    side, *rest = proposal.way
    whole = (left, right)[side]
    if proposal.after is not None:
        after = replaced(whole, tuple(rest), proposal.after)
    elif not rest:
        return None
    else:
        found = taken_out(whole, tuple(rest))
        if found is None:
            return None
        after = found
    return Equation(left, after) if side else Equation(after, right)


def multipliers_of(names: Sequence[str], values: Values) -> list[Entry]:
    """Give what a missing term may be a multiple of: names, their reciprocals and products of two."""
    from derive.expressions.tree import ONE, Product, Quotient
    from derive.handcheck.places import inverse

    atoms: list[Entry] = [(Name(name), values[name]) for name in names if values.get(name)]
    found = list(atoms)
    for expression, value in atoms:
        found.append((Quotient(ONE, expression), inverse(value)))
    for place, (a, x) in enumerate(atoms):
        for b, y in atoms[place:]:
            found.append((Product((a, b)), x * y % PRIME))
    return found
