"""Carry out a plan of elimination as steps that a person can follow and a program can replay."""

from __future__ import annotations

from dataclasses import dataclass

from derive.algebra.common_factor import remove_common_monomial
from derive.algebra.exchange import exchange
from derive.algebra.linear_system import LinearSystem, solve
from derive.algebra.ring import Polynomial, negative
from derive.eliminate.derivation import Derivation, Plan
from derive.eliminate.rows import Row, RowBook
from derive.eliminate.rules import (
    cancel,
    clear,
    current_law,
    form_ratio,
    multiply_out,
    solve_for,
    substitute,
    wanted,
    weigh,
)
from derive.eliminate.scribe import Scribe, number, writer_for
from derive.expressions.tree import Expression
from derive.nodal.system import NodalSystem

# Up to this many terms, an equation is shown before its common factor is cancelled.
UNCANCELLED_LIMIT = 120


@dataclass(frozen=True, slots=True, eq=False)
class Numbered:
    """A row with the number of the step that states it."""

    number: int
    row: Row


def eliminate(system: NodalSystem, plan: Plan) -> Derivation:
    """Give the steps from the circuit's equations to the ratio sought, in lowest terms.

    Raises: TooLargeError before anything too large to read is written; SingularError.
    """
    scribe = Scribe(system, writer_for(system))
    book = RowBook.of(system, plan)
    rows = _write_down(scribe, book)
    for stage, line in enumerate(plan.lines[:-1]):
        pivot = rows[line.equation]
        solved = solve_for.apply(scribe, pivot.number, pivot.row, line.unknown)
        for index in line.into:
            rows[index] = _eliminate_one(scribe, book, stage, rows[index], pivot, solved, index)
    last = rows[plan.lines[-1].equation]
    found = form_ratio.apply(scribe, last.number, last.row)
    numerator, denominator = _lowest_terms(book)
    if _terms(numerator, denominator) < _terms(last.row.right, last.row.entries[system.wanted]):
        form_ratio.reduce(scribe, found, numerator, denominator)
    return Derivation(system, plan, tuple(scribe.steps), numerator, denominator)


def _write_down(scribe: Scribe, book: RowBook) -> dict[int, Numbered]:
    """State what is sought, the drives and the circuit's equations, as they are and collected."""
    system = scribe.system
    wanted.apply(scribe)
    for name, weight in system.weights:
        if name != system.input:
            weigh.apply(scribe, name, weight)
    written = [current_law.apply(scribe, index) for index in range(len(system.equations))]
    rows = {}
    for index, source in enumerate(written):
        row = book.row(index, 0)
        rows[index] = Numbered(multiply_out.apply(scribe, source, row, book.common), row)
    return rows


def _eliminate_one(
    scribe: Scribe,
    book: RowBook,
    stage: int,
    target: Numbered,
    pivot: Numbered,
    solved: int,
    index: int,
) -> Numbered:
    """Substitute, clear the fraction and cancel, in one row."""
    unknown = book.unknowns[stage]
    source = substitute.apply(scribe, target.number, target.row, solved, unknown)
    after = book.row(index, target.row.done | pivot.row.done | 1 << stage)
    divisor, extra = book.divisor(pivot.row, target.row, after, stage)
    denominator = pivot.row.entries[unknown]
    if negative(denominator):
        # The unknown was solved for with all signs turned.
        denominator, divisor = -denominator, -divisor
    if negative(divisor):
        after, divisor = after.times(book.system.ring.constant(-1)), -divisor
    factor = scribe.polynomial(denominator * extra)
    cleared = after.times(divisor)
    if divisor == 1 or cleared.size > UNCANCELLED_LIMIT:
        return _finish(scribe, source, after, factor, divisor)
    number_of_cleared = clear.apply(scribe, source, scribe.equation(cleared), factor, number(1))
    if after.negative:
        after, divisor = after.times(book.system.ring.constant(-1)), -divisor
    shared = scribe.polynomial(divisor)
    return Numbered(cancel.apply(scribe, number_of_cleared, scribe.equation(after), shared), after)


def _finish(scribe: Scribe, source: int, after: Row, factor: Expression, divisor: Polynomial) -> Numbered:
    """Clear the fraction and cancel in one step; turn all signs where all would be negative."""
    if after.negative:
        after, divisor = after.times(scribe.system.ring.constant(-1)), -divisor
    shared = scribe.polynomial(divisor)
    return Numbered(clear.apply(scribe, source, scribe.equation(after), factor, shared), after)


def _lowest_terms(book: RowBook) -> tuple[Polynomial, Polynomial]:
    """Solve the whole system at once, in lowest terms and without reciprocals."""
    ring = book.system.ring
    found = solve(LinearSystem(ring, tuple(book.minors.rows), "s"))
    (numerator, denominator), _ = exchange(ring, [found.numerator, found.denominator])
    return remove_common_monomial(numerator, denominator)


def _terms(*polynomials: Polynomial) -> int:
    return sum(len(polynomial) for polynomial in polynomials)
