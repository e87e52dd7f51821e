"""Whether a line follows from those above it as they are written, right or wrong.

What the circuit is made of has random values modulo the prime; what a derivation finds out (node voltages, currents,
results) is left free. Lines above are then equations for these. Each is solved for one of them and put into the
others, and a line follows where nothing is left of it. So a line can follow from wrong ones and be wrong for no
other reason.
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping, Sequence
from dataclasses import dataclass
from itertools import combinations
from typing import Any

from derive.algebra.modular import PRIME
from derive.errors import DeriveError
from derive.expressions.tree import Expression, Name
from derive.expressions.walk import names_of
from derive.handcheck.rational import Pivot, Polynomial, TooLongError, Unknowns, put_in, solve_for_one

MOST_LINES = 3
# Combinations of lines that are tried for one line.
MOST_TRIES = 1500


@dataclass(frozen=True, slots=True, eq=False)
class Fact:
    """An equation that may be used: a line above (by its number), or what is so anyway (number 0).

    `free` facts say what a name means and cost no move. `names` are the unknowns in it; `explicit` tells that one
    stands alone on a side.
    """

    number: int
    left: Expression
    right: Expression
    right_of_circuit: bool
    free: bool = False
    explicit: bool = False
    names: frozenset[str] = frozenset()


class Follower:
    """The lines of one derivation as equations for its unknowns, at one point of the symbols."""

    def __init__(
        self, unknowns: Sequence[str], values: Mapping[str, int], facts: Iterable[Fact], numbers: Any
    ) -> None:
        self.ring = Unknowns(unknowns)
        self._values = values
        self._numbers = numbers
        self._facts = [self._with_names(fact) for fact in facts]
        self._polynomials: dict[int, Polynomial | None] = {}

    def _with_names(self, fact: Fact) -> Fact:
        known = set(self.ring.names)
        names = {n for side in (fact.left, fact.right) for n in names_of(side) if n in known}
        alone = any(isinstance(side, Name) and side.text in known for side in (fact.left, fact.right))
        return Fact(
            fact.number, fact.left, fact.right, fact.right_of_circuit, fact.free, alone, frozenset(names)
        )

    def polynomial(self, left: Expression, right: Expression) -> Polynomial | None:
        """Give the numerator of a line in the unknowns; None where it has none that can be worked with."""
        try:
            return self.ring.numerator(left, right, self._values)
        except (DeriveError, TooLongError, ZeroDivisionError):
            return None

    def _of(self, fact: Fact) -> Polynomial | None:
        if id(fact) not in self._polynomials:
            self._polynomials[id(fact)] = self.polynomial(fact.left, fact.right)
        return self._polynomials[id(fact)]

    def sources(
        self, left: Expression, right: Expression, above: int, *, wrong: bool
    ) -> tuple[int, ...] | None:
        """Give the numbers of the lines above that a line follows from; None where it does not.

        Given: the number that the lines above stay below; whether at least one of them is to be wrong, or none.
        """
        target = self.polynomial(left, right)
        if target is None:
            return None
        known = set(self.ring.names)
        names = {n for side in (left, right) for n in names_of(side) if n in known}
        for chosen in self._choices(names, above, wrong):
            if self._implied(target, chosen):
                return tuple(sorted({fact.number for fact in chosen if fact.number}))
        return None

    def _choices(self, names: set[str], above: int, wrong: bool) -> Iterator[list[Fact]]:
        """Give the combinations worth trying, those of few and of late lines first."""
        usable = [f for f in self._facts if f.number < above and not f.free and self._of(f) is not None]
        usable = [f for f in usable if wrong or f.right_of_circuit]
        usable.sort(key=lambda fact: -fact.number)
        tries = 0
        for size in range(0 if not wrong else 1, MOST_LINES + 1):
            for chosen in combinations(usable, size):
                if not _allowed(chosen, wrong):
                    continue
                whole = self._joined(names, chosen, above)
                if whole is None:
                    continue
                yield whole
                tries += 1
                if tries > MOST_TRIES:
                    return

    def _joined(self, names: set[str], chosen: Sequence[Fact], above: int) -> list[Fact] | None:
        """Add what their names mean; None where the lines have nothing to do with each other and the target."""
        present = set(names).union(*(fact.names for fact in chosen))
        whole = list(chosen)
        grown = True
        while grown:
            grown = False
            for fact in self._facts:
                if (
                    fact.free
                    and fact.number < above
                    and fact not in whole
                    and self._needed(fact, present)
                ):
                    whole.append(fact)
                    present |= fact.names
                    grown = True
        if not names <= set().union(*(fact.names for fact in whole), set()):
            return None
        for fact in chosen:
            others = set(names).union(*(o.names for o in whole if o is not fact))
            if fact.names and not fact.names & others:
                return None
        for name in set().union(*(f.names for f in chosen), set()) - names:
            if sum(name in fact.names for fact in whole) < 2:
                return None
        return whole

    def _needed(self, fact: Fact, present: set[str]) -> bool:
        """Whether the name that a free fact gives the meaning of is in use."""
        side = fact.left if isinstance(fact.left, Name) else fact.right
        if isinstance(side, Name) and side.text in self.ring.names:
            return side.text in present
        return bool(fact.names & present)

    def _implied(self, target: Polynomial, chosen: Sequence[Fact]) -> bool:
        pivots = self._solved(chosen)
        if pivots is None:
            return False
        try:
            for pivot in pivots:
                target = put_in(self.ring, target, pivot)
        except TooLongError:
            return False
        return bool(target == 0)

    def _solved(self, facts: Sequence[Fact], *, skip: bool = False) -> list[Pivot] | None:
        """Solve equations one after the other; None where they contradict one another or cannot be solved.

        Given: whether such an equation is to be passed over instead.
        """
        pivots: list[Pivot] = []
        for fact in facts:
            polynomial = self._of(fact)
            found = None if polynomial is None else self._next(polynomial, pivots)
            if found is False or found is None:
                if skip:
                    continue
                return None
            if isinstance(found, Pivot):
                pivots.append(found)
        return pivots

    def _next(self, polynomial: Polynomial, pivots: Sequence[Pivot]) -> Pivot | bool | None:
        """Give the next pivot; True where the equation says nothing new, False where it contradicts."""
        try:
            for pivot in pivots:
                polynomial = put_in(self.ring, polynomial, pivot)
        except TooLongError:
            return None
        if polynomial == 0:
            return True
        if polynomial.is_constant():
            return False
        return solve_for_one(self.ring, polynomial)

    def point_after(self, above: int) -> dict[str, int] | None:
        """Give values of all names at which the lines above hold as written, the latest first to be believed.

        A line that contradicts later ones is passed over. None where no values can be found.
        """
        lines = [f for f in self._facts if f.number < above]
        ordered = sorted(lines, key=lambda fact: (not fact.free, -fact.number))
        pivots = self._solved(ordered, skip=True) or []
        values = dict(self._values)
        for name in self.ring.names:
            values[name] = self._numbers.below(PRIME)
        for pivot in reversed(pivots):
            top, bottom = (_value(self.ring, p, values) for p in (pivot.rest, pivot.factor))
            if not bottom:
                return None
            values[pivot.name] = -top * pow(bottom, -1, PRIME) % PRIME
        return values


def _allowed(chosen: Sequence[Fact], wrong: bool) -> bool:
    """Whether lines make one move together: one law of the circuit at most, and of three two to be put in."""
    if sum(fact.number == 0 for fact in chosen) > 1:
        return False
    if wrong:
        return any(not fact.right_of_circuit for fact in chosen)
    return len(chosen) < MOST_LINES or sum(fact.explicit for fact in chosen) >= MOST_LINES - 1


def _value(ring: Unknowns, polynomial: Polynomial, values: Mapping[str, int]) -> int:
    total = 0
    for powers, value in polynomial.to_dict().items():
        term = int(value)
        for name, power in zip(ring.names, powers, strict=True):
            if power:
                term = term * pow(values[name], int(power), PRIME) % PRIME
        total += term
    return total % PRIME
