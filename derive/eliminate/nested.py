"""Elimination as a sequence of short named expressions, for circuits too large to write out.

Every equation keeps names in place of what its entries have become: an entry that changes gets a new
name, defined in one line by older names. The number of lines grows with the number of entries that the
order of elimination touches, not with the number of terms that they would expand into.
"""

from __future__ import annotations

from dataclasses import dataclass, replace

from derive.algebra.modular import PRIME
from derive.eliminate.derivation import Derivation, Nested, Plan, PlanLine
from derive.eliminate.names import names_taken
from derive.eliminate.nested_entries import Entry, Naming, combined, fraction, naming, terms_of
from derive.eliminate.rules import (
    current_law,
    form_ratio,
    name_entry,
    name_ratio,
    take_off,
    wanted,
    weigh,
    write_short,
)
from derive.eliminate.scribe import Scribe, positive_first, writer_for
from derive.expressions.polynomials import add, negate
from derive.expressions.tree import ONE, ZERO, Equation, Expression, Name, Product, Quotient
from derive.nodal.system import NodalSystem

# The input's column of a row; the empty name is no unknown's.
INPUT = ""


@dataclass(slots=True)
class ShortRow:
    """sum of entry·unknown = entry of the input·input, and the number of the step that states it."""

    entries: dict[str, Entry]
    number: int


def eliminate_nested(system: NodalSystem, plan: Plan, nested: Nested) -> Derivation:
    """Give the steps from the circuit's equations to the ratio sought, in short named lines.

    Given: an order of elimination, and what is to be said of the choice of this form. Lines that the
    wanted quantity does not need are left out, of the plan too. The derivation has no polynomials.
    """
    kept = needed(plan)
    scribe = Scribe(system, writer_for(system))
    wanted.apply(scribe)
    for name, weight in system.weights:
        if name != system.input:
            weigh.apply(scribe, name, weight)
    written = [current_law.apply(scribe, index) for index in range(len(system.equations))]
    names = naming(system.ring, names_taken(system))
    rows = {
        line.equation: _short(scribe, names, line.equation, written[line.equation]) for line in kept.lines
    }
    for line in kept.lines[:-1]:
        pivot = rows[line.equation]
        for index in line.into:
            rows[index] = _taken_off(scribe, names, rows[index], pivot, line.unknown)
    _form_ratio(scribe, rows[kept.lines[-1].equation])
    pivots = tuple(rows[line.equation].entries[line.unknown].what for line in kept.lines)
    return Derivation(system, kept, tuple(scribe.steps), None, None, replace(nested, pivots=pivots))


def needed(plan: Plan) -> Plan:
    """Give the part of a plan that the wanted quantity, its last unknown, hangs on."""
    last = plan.lines[-1]
    rows, lines = {last.equation}, [last]
    for line in reversed(plan.lines[:-1]):
        into = tuple(row for row in line.into if row in rows)
        if into:
            rows.add(line.equation)
            lines.append(PlanLine(line.unknown, line.equation, into, line.terms))
    return Plan(tuple(reversed(lines)))


def restricted(system: NodalSystem, plan: Plan) -> NodalSystem:
    """Give the system of a plan's equations and unknowns only."""
    kept = {line.unknown for line in plan.lines}
    return replace(
        system,
        equations=tuple(system.equations[line.equation] for line in plan.lines),
        unknowns=tuple(unknown for unknown in system.unknowns if unknown.name in kept),
        matrix=None,
    )


def _short(scribe: Scribe, names: Naming, index: int, source: int) -> ShortRow:
    """Name the entries of an equation of the circuit, and write it with the names."""
    system = scribe.system
    unknowns = {unknown.name for unknown in system.unknowns}
    weights = dict(system.weights)
    driven = []
    entries: dict[str, Entry] = {}
    for name, polynomial in system.equations[index].row:
        if name in unknowns:
            entries[name] = _named(scribe, names.entry(terms_of(polynomial)))
        else:
            driven.append(terms_of(polynomial, -weights[name]))
    right = combined(driven)
    if right:
        entries[INPUT] = _named(scribe, names.entry(right))
    return ShortRow(entries, write_short.apply(scribe, source, _equation(system, entries)))


def _named(scribe: Scribe, found: tuple[Entry, tuple[Name, Expression] | None]) -> Entry:
    entry, new = found
    if new is not None:
        name_entry.apply(scribe, *new)
    return entry


def _taken_off(scribe: Scribe, names: Naming, row: ShortRow, pivot: ShortRow, unknown: str) -> ShortRow:
    """Take the unknown out of a row; what is zero for all values is left out."""
    multiple = _ratio(scribe, names, row.entries[unknown], pivot.entries[unknown])
    entries: dict[str, Entry] = {}
    for name in dict.fromkeys((*row.entries, *pivot.entries)):
        old, shared = row.entries.get(name), pivot.entries.get(name)
        if name == unknown:
            continue
        if shared is None:
            entries[name] = row.entries[name]
            continue
        residue = ((old.residue if old else 0) - multiple.residue * shared.residue) % PRIME
        if residue:
            entries[name] = _updated(scribe, names, old, multiple, shared, residue)
    # The input stands last in a row, as it does in print.
    entries = {name: entries[name] for name in sorted(entries, key=lambda name: name == INPUT)}
    # An equation in which every unknown had a minus sign is turned.
    turned = all(entry.sign < 0 for name, entry in entries.items() if name != INPUT)
    if turned:
        entries = {name: entry.negated for name, entry in entries.items()}
    equation = _equation(scribe.system, entries)
    number = take_off.apply(
        scribe, row.number, pivot.number, multiple.expression, equation, unknown, turned=turned
    )
    return ShortRow(entries, number)


def _ratio(scribe: Scribe, names: Naming, above: Entry, below: Entry) -> Entry:
    """Name above/below; where that is plus or minus one, or nothing is divided, no name is needed."""
    residue = above.residue * pow(below.residue, -1, PRIME) % PRIME
    sign = above.sign * below.sign
    if above.what == below.what:
        return Entry(sign, ONE, residue)
    if below.what == ONE:
        return Entry(sign, above.what, residue)
    name = names.fresh("m")
    name_ratio.apply(scribe, name, fraction([above.what], [below.what]), below.what)
    return Entry(sign, name, residue)


def _updated(
    scribe: Scribe, names: Naming, old: Entry | None, multiple: Entry, shared: Entry, residue: int
) -> Entry:
    """Name old − multiple·shared, with the sign that lets the line begin with a positive term."""
    product = fraction([multiple.what, shared.what])
    sign = -multiple.sign * shared.sign
    if old is not None:
        meaning = add([old.what, product if sign == old.sign else negate(product)])
        sign = old.sign
    elif isinstance(product, Product | Quotient) and product != shared.what:
        meaning = product
    else:
        return Entry(sign, product, residue)
    name = names.fresh("y")
    name_entry.apply(scribe, name, meaning)
    return Entry(sign, name, residue)


def _form_ratio(scribe: Scribe, row: ShortRow) -> int:
    """Divide the last equation by its coefficient and the input."""
    system = scribe.system
    pivot = row.entries[system.wanted]
    right = row.entries.get(INPUT)
    value = ZERO if right is None else fraction([right.expression], [pivot.expression])
    divisor = fraction([pivot.expression, Name(system.input)])
    return form_ratio.write(scribe, row.number, value, divisor, None if pivot.what == ONE else pivot.what)


def _equation(system: NodalSystem, entries: dict[str, Entry]) -> Equation:
    """Write a row as "unknowns = input"."""
    terms = [fraction([entry.expression, Name(name)]) for name, entry in entries.items() if name != INPUT]
    right = entries.get(INPUT)
    driven = ZERO if right is None else fraction([right.expression, Name(system.input)])
    return Equation(add(positive_first(terms)), driven)
