"""The determinants of nodal equations as diagrams: numerator and denominator over shared forks.

With the equations as rows A·v + b·V = 0, the wanted v_w/V is the determinant of A bordered by b and by
the row that picks v_w, over that of A; as both are coefficients of one bordered matrix they share one
diagram. What stands in the equations as a part's value between two nodes becomes one rank-one term, so
that no products cancel; anything else is taken entry by entry.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from fractions import Fraction

from derive.algebra.diagram import Diagram
from derive.algebra.diagram_build import build
from derive.algebra.diagram_terms import Pair, Term
from derive.eliminate.derivation import Plan
from derive.eliminate.nested_entries import Monomial, term, terms_of
from derive.expressions.tree import Expression, Name
from derive.nodal.system import NodalSystem

# States of a diagram: beyond these its coefficients would fill a book of definitions.
STATE_LIMIT = 60_000
Places = dict[tuple[int, int], Fraction]


@dataclass(frozen=True, slots=True, eq=False)
class Determinants:
    """The diagram of denominator and numerator, in this order, and what the names of its terms stand for.

    `meanings` has the names that are not a part's own symbol. `distinct` says whether each name stands
    in one place, so that the count of terms is exact; else some of the products may cancel.
    """

    diagram: Diagram
    meanings: tuple[tuple[str, Expression], ...]
    distinct: bool

    @property
    def terms(self) -> int:
        """The number of products of the denominator, before any cancel."""
        return self.diagram.counts()[0]

    @property
    def most_definitions(self) -> int:
        """A bound on the number of definitions that the coefficients take: one a fork and power of s."""
        lowest, highest = [0, 0], [0, 0]
        total = 0
        for item, taken, left, _ in self.diagram.forks:
            degrees = [entry.degree for entry in self.diagram.bundles[item].entries]
            low, high = min(degrees) + lowest[taken], max(degrees) + highest[taken]
            if left:
                low, high = min(low, lowest[left]), max(high, highest[left])
            lowest.append(low)
            highest.append(high)
            total += high - low + 1
        return total


def determinants(
    system: NodalSystem, plan: Plan, taken: set[str], limit: int = STATE_LIMIT
) -> Determinants:
    """Make the diagram for the equations and unknowns of a plan.

    Given: the names that new ones must differ from; they are added to it.
    Raises: TooLargeError where the diagram would have more than `limit` states.
    """
    columns = {line.unknown: place for place, line in enumerate(plan.lines)}
    size = len(plan.lines)
    pieces = _Pieces(system, taken)
    for monomial, places in _by_monomial(system, plan, columns).items():
        if any(monomial):
            pieces.add(monomial, places)
        else:
            for own in _laws_and_currents(system, plan, places):
                pieces.add(monomial, own)
            pieces.distinct = False
    picks: tuple[Pair, Pair] = (size, None), (size, None)
    sought: tuple[Pair, Pair] = (size, None), (columns[system.wanted], None)
    diagram = build(pieces.terms, size + 1, [(picks,), (sought,)], limit)
    return Determinants(diagram, tuple(pieces.meanings.items()), pieces.distinct)


def _by_monomial(system: NodalSystem, plan: Plan, columns: Mapping[str, int]) -> dict[Monomial, Places]:
    """Give the places of every product of values in the bordered matrix; the input's column is the last."""
    weights = dict(system.weights)
    found: dict[Monomial, Places] = {}
    for row, line in enumerate(plan.lines):
        for name, polynomial in system.equations[line.equation].row:
            if name not in columns and name not in weights:
                continue
            column = columns.get(name, len(plan.lines))
            weight = Fraction(1) if name in columns else weights[name]
            for monomial, value in terms_of(polynomial, weight).items():
                places = found.setdefault(monomial, {})
                places[row, column] = places.get((row, column), Fraction(0)) + value
    kept = {
        key: {place: value for place, value in places.items() if value} for key, places in found.items()
    }
    return {key: places for key, places in kept.items() if places}


def _laws_and_currents(system: NodalSystem, plan: Plan, places: Places) -> list[Places]:
    """Part the plain numbers: a law's voltages belong together, and a current in the nodes it passes."""
    found: dict[tuple[str, int], Places] = {}
    for (row, column), value in places.items():
        is_law = not system.equations[plan.lines[row].equation].nodes
        key = ("law", row) if is_law else ("current", column)
        found.setdefault(key, {})[row, column] = value
    return list(found.values())


@dataclass(slots=True)
class _Pieces:
    """The terms so far, and the names that were given to what is not one part's symbol."""

    system: NodalSystem
    taken: set[str]
    terms: list[Term] = field(default_factory=list)
    meanings: dict[str, Expression] = field(default_factory=dict)
    names: dict[tuple[Monomial, Fraction], str] = field(default_factory=dict)
    distinct: bool = True

    def add(self, monomial: Monomial, places: Places) -> None:
        """Add a product of values at its places: as one piece where it is one, else place by place."""
        degree = monomial[self.system.ring.names.index("s")]
        pair = _rank_one(places)
        if pair is not None:
            self.terms.append(Term(self._name(monomial, Fraction(1)), *pair, degree))
            return
        self.distinct = False
        for (row, column), value in places.items():
            rows: Pair = (row, None) if value > 0 else (None, row)
            self.terms.append(Term(self._name(monomial, abs(value)), rows, (column, None), degree))

    def _name(self, monomial: Monomial, value: Fraction) -> str:
        ring = self.system.ring
        place = ring.names.index("s")
        key = (*monomial[:place], 0, *monomial[place + 1 :]), value
        if key not in self.names:
            meaning = term(ring, *key)
            if isinstance(meaning, Name):
                self.names[key] = meaning.text
            else:
                used = [name for name, power in zip(ring.names, key[0], strict=False) if power]
                if len(used) != 1 or sum(key[0]) != 1:
                    self.distinct = False
                plain = value == 1 and len(used) == 1
                self.names[key] = fresh(f"G_{used[0]}" if plain else "e_1", self.taken)
                self.meanings[self.names[key]] = meaning
        return self.names[key]


def _rank_one(places: Places) -> tuple[Pair, Pair] | None:
    """Give the pairs of rows and columns of a piece ±(e_a − e_b)·(e_c − e_d)ᵀ; None for anything else."""
    rows = sorted({row for row, _ in places})
    columns = sorted({column for _, column in places})
    if len(rows) > 2 or len(columns) > 2 or len(places) != len(rows) * len(columns):
        return None
    first = places[rows[0], columns[0]]
    if abs(first) != 1:
        return None
    for (row, column), value in places.items():
        turns = (row != rows[0]) + (column != columns[0])
        if value != (first if turns % 2 == 0 else -first):
            return None
    row_pair: Pair = (rows[0], rows[1] if len(rows) > 1 else None)
    column_pair: Pair = (columns[0], columns[1] if len(columns) > 1 else None)
    return (row_pair if first > 0 else (row_pair[1], row_pair[0])), column_pair


def fresh(name: str, taken: set[str]) -> str:
    """Give the name, or the next that is not taken, and note it as taken."""
    stem, _, number = name.rpartition("_")
    found, count = name, int(number) if number.isdigit() and stem == "e" else 0
    while found in taken:
        count += 1
        found = f"{stem}_{count}" if stem == "e" else f"{found}_"
    taken.add(found)
    return found
