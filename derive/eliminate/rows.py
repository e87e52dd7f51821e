"""Equations as rows of polynomials without reciprocals, each with its scale against the circuit's.

Every row that a derivation shows is a row of minors of the circuit's matrix, times a scale. The minors
are taken from a memo; that they are what elimination would have given is proved step by step by
certificates, which others replay.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from functools import reduce

from derive.algebra.common_factor import remove_common_factor
from derive.algebra.exchange import exchange
from derive.algebra.minors import Minors, refuse_large, too_large
from derive.algebra.ring import Polynomial, Ring, common_monomial, negative
from derive.eliminate.derivation import Plan
from derive.nodal.system import NodalSystem

# Beyond this many terms in a row, a common factor of several terms is not sought within it.
FACTOR_LIMIT = 400
# All rows of one derivation together: text beyond it would be read by nobody.
SHOWN_LIMIT = 300_000


@dataclass(frozen=True, slots=True, eq=False)
class Row:
    """An equation: the sum of entry times unknown equals `right` times the input.

    `done` has a bit for each stage of the plan whose unknown has been eliminated from it. As
    polynomials without reciprocals the row is `raised`/`content` times the row of minors over the
    equations of those stages and its own.
    """

    entries: dict[str, Polynomial]
    right: Polynomial
    done: int
    raised: Polynomial
    content: Polynomial

    @property
    def size(self) -> int:
        """The number of terms in the row."""
        return sum(len(entry) for entry in self.entries.values()) + len(self.right)

    @property
    def negative(self) -> bool:
        """Whether all of the equation's terms would be written with a minus sign."""
        return all(map(negative, self.entries.values())) and (self.right == 0 or negative(self.right))

    def times(self, factor: Polynomial) -> Row:
        """Give the same equation times a factor, its scale still true."""
        entries = {name: entry * factor for name, entry in self.entries.items()}
        return Row(entries, self.right * factor, self.done, self.raised * factor, self.content)


@dataclass(slots=True, eq=False)
class RowBook:
    """The rows of a derivation, by equation and by the stages that have been eliminated from it."""

    system: NodalSystem
    unknowns: tuple[str, ...]
    equations: tuple[int, ...]
    common: int
    minors: Minors
    shown: int = 0

    @staticmethod
    def of(system: NodalSystem, plan: Plan) -> RowBook:
        """Order the system's equations and unknowns by the plan."""
        unknowns = tuple(line.unknown for line in plan.lines)
        equations = tuple(line.equation for line in plan.lines)
        common, rows = input_rows(system, unknowns, equations)
        refuse_large(rows)
        return RowBook(system, unknowns, equations, common, Minors(system.ring, rows))

    def row(self, equation: int, done: int) -> Row:
        """Give an equation after the unknowns of the stages in `done` have been eliminated."""
        source = self.minors.rows[self.equations.index(equation)]
        width = len(self.unknowns)
        columns = [column for column in range(width + 1) if not done >> column & 1]
        entries = [self.minors.bordered(done, source, done | 1 << column) for column in columns]
        self.shown += sum(len(entry) for entry in entries)
        if self.shown > SHOWN_LIMIT:
            raise too_large(SHOWN_LIMIT)
        plain, raised, content = _tidy(self.system.ring, entries)
        present = {
            self.unknowns[column]: entry
            for column, entry in zip(columns[:-1], plain, strict=False)
            if entry != 0
        }
        return Row(present, plain[-1], done, raised, content)

    def principal(self, done: int) -> Polynomial:
        """Give the minor over the pivots of some stages."""
        return self.minors.minor(done, done)

    def divisor(self, pivot: Row, row: Row, after: Row, stage: int) -> tuple[Polynomial, Polynomial]:
        """Give the factor that pivot·row − entry·pivot row has beyond the row that comes after.

        It is a ratio, without common factor: the second polynomial is 1 but where rows were too long for
        all that they share to be cancelled.

        With reduced rows r = minors/principal minor, elimination is r_i − (r_ip/r_pp)·r_p; what remains
        when both sides are written with minors is a product of principal minors.
        """
        ring = self.system.ring
        with_pivot = pivot.done | 1 << stage
        above, below = self.principal(row.done), self.principal(after.done)
        if after.done == with_pivot:
            below = ring.one
        else:
            above = above * self.principal(with_pivot)
        (top, bottom), _ = exchange(ring, [above, below])
        top = top * pivot.raised * row.raised * after.content
        bottom = bottom * pivot.content * row.content * after.raised
        return remove_common_factor(top, bottom)


def input_rows(
    system: NodalSystem, unknowns: Sequence[str], equations: Sequence[int]
) -> tuple[int, list[dict[int, Polynomial]]]:
    """Give the common denominator of the drives' weights, and equations as `input_row` does times it."""
    common = reduce(math.lcm, (weight.denominator for _, weight in system.weights), 1)
    return common, [input_row(system, unknowns, common, index) for index in equations]


def input_row(
    system: NodalSystem, unknowns: Sequence[str], common: int, index: int
) -> dict[int, Polynomial]:
    """Give one equation as {column: entry}, the last column being what the input makes of its drives.

    All of it is multiplied by `common`, the common denominator of the drives' weights.
    """
    weights = {name: int(weight * common) for name, weight in system.weights}
    places = {name: place for place, name in enumerate(unknowns)}
    row: dict[int, Polynomial] = {}
    right = system.ring.zero
    for name, entry in system.equations[index].row:
        if name in places:
            row[places[name]] = entry * common
        elif weights[name]:
            right -= weights[name] * entry
    if right != 0:
        row[len(unknowns)] = right
    return row


def _tidy(ring: Ring, entries: list[Polynomial]) -> tuple[list[Polynomial], Polynomial, Polynomial]:
    """Write minors without reciprocals and divide them by what they share."""
    plain, raised = exchange(ring, entries)
    content = common_monomial(plain)
    plain = [entry / content for entry in plain]
    filled = [entry for entry in plain if entry != 0]
    if len(filled) == 1:
        # An unknown that is zero: its coefficient, which is not zero, is all that there is to divide by.
        return [ring.one if entry != 0 else entry for entry in plain], raised, content * filled[0]
    if all(len(e) > 1 for e in filled) and sum(map(len, filled)) < FACTOR_LIMIT:
        shared = reduce(lambda a, b: a.gcd(b), filled)
        if len(shared) > 1:
            return [entry / shared for entry in plain], raised, content * shared
    return plain, raised, content
