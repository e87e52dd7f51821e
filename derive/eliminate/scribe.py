"""Writes rows as equations, and keeps the numbered steps of a derivation."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field
from fractions import Fraction
from typing import Any

from derive.algebra.ring import Polynomial, Ring
from derive.eliminate.derivation import Certificate, Step
from derive.eliminate.rows import Row
from derive.expressions.polynomials import Writer, add, divide, multiply, writing_order
from derive.expressions.tree import Equation, Expression, Name, Negative, Number
from derive.nodal.system import NodalSystem
from derive.quantities.dimension import (
    CAPACITANCE,
    CONDUCTANCE,
    INDUCTANCE,
    RATIO,
    RESISTANCE,
    Dimension,
)

# Engineers write g_m R C, and a pure number such as β or A before all.
RANKS = {RATIO: 1, CONDUCTANCE: 2, RESISTANCE: 3, INDUCTANCE: 4, CAPACITANCE: 5}


def writer_for(system: NodalSystem) -> Writer:
    """Give the writer of polynomials over the system's ring, factors in an engineer's order."""
    dimensions = {symbol.name: symbol.dimension for symbol in system.small_signal.symbols}
    return writer_of(system.ring.plain(), dimensions)


def writer_of(ring: Ring, dimensions: Mapping[str, Dimension]) -> Writer:
    """Give the writer of polynomials over a ring without inverted names, of which some have dimensions."""
    # What has none but s is a mutual inductance.
    ranks = {name: rank_of(dimensions.get(name, INDUCTANCE)) for name in ring.names}
    return Writer(ring, writing_order(ring, {**ranks, "s": 0}))


def rank_of(dimension: Dimension) -> int:
    """Give the place in a product of a quantity of this dimension."""
    return RANKS.get(dimension, len(RANKS) + 1)


@dataclass(slots=True)
class Scribe:
    """The steps so far; a step's number is also its equation's."""

    system: NodalSystem
    writer: Writer
    steps: list[Step] = field(default_factory=list)
    # Long polynomials stand in several equations. Kept by identity, as FLINT's cannot be hashed.
    written: dict[int, tuple[Polynomial, Expression]] = field(default_factory=dict)

    @property
    def next_number(self) -> int:
        """The number that the next step will have."""
        return len(self.steps) + 1

    def add(self, rule: str, equation: Equation, **details: Any) -> int:
        """Keep a step and give its number."""
        number = self.next_number
        self.steps.append(Step(number, rule, equation, **details))
        return number

    def follow(
        self,
        rule: str,
        equation: Equation,
        uses: Sequence[tuple[int, Expression]],
        divisor: Expression,
        **details: Any,
    ) -> int:
        """Keep a step that follows from earlier ones, with its certificate."""
        return self.add(rule, equation, certificate=Certificate(tuple(uses), divisor), **details)

    def polynomial(self, polynomial: Polynomial) -> Expression:
        """Write a polynomial collected in powers of s."""
        known = self.written.get(id(polynomial))
        if known is None:
            known = polynomial, self.writer.collected(polynomial)
            self.written[id(polynomial)] = known
        return known[1]

    def times(self, polynomial: Polynomial, name: str) -> Expression:
        """Write a polynomial times a name."""
        return multiply([self.polynomial(polynomial), Name(name)])

    def left_of(self, row: Row, names: Sequence[str] | None = None) -> Expression:
        """Write the sum of coefficient times unknown, of all of a row's unknowns or of some."""
        chosen = row.entries if names is None else names
        return add(positive_first([self.times(row.entries[name], name) for name in chosen]))

    def equation(self, row: Row) -> Equation:
        """Write a row as "unknowns = input"."""
        return Equation(self.left_of(row), self.times(row.right, self.system.input))

    def ratio(self, numerator: Polynomial, denominator: Polynomial) -> Expression:
        """Write a ratio of two polynomials."""
        return divide(self.polynomial(numerator), self.polynomial(denominator))


def number(value: int | Fraction) -> Expression:
    """Write a number."""
    return Number(Fraction(value))


def positive_first(terms: Sequence[Expression]) -> list[Expression]:
    """Bring the first positive term to the front, where there is one."""
    first = next((k for k, term in enumerate(terms) if not isinstance(term, Negative)), 0)
    return [*terms[first : first + 1], *terms[:first], *terms[first + 1 :]]
