"""A circuit of admittances as rank-one terms, so that its determinants can be counted before all else.

A resistor, capacitor or transconductance adds admittance·(e_a − e_b)(e_c − e_d)ᵀ to the nodal matrix: the
current it draws at nodes a, b times the voltage between c, d. A voltage drive adds a row (the voltage
between its nodes is given) and a column (its current is free), an ideal op amp likewise; each is a pair
of edges that every product of the determinant holds. Cramer's rule then replaces a pair's edges: the
response to a voltage drive has the wanted voltage's edge in the place of the drive's.
"""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from fractions import Fraction
from typing import Any

from derive.algebra.diagram import Diagram
from derive.algebra.diagram_build import STATE_LIMIT, Taken, build
from derive.algebra.diagram_terms import Pair, Term
from derive.devices.elements import (
    Capacitor,
    DriveElement,
    Element,
    Resistor,
    SmallSignal,
    Transconductance,
    VirtualShort,
    VoltageDrive,
)
from derive.nodal.ports import Port, port
from derive.nodal.write import nodes_of
from derive.topology.topology import GROUND, Find


@dataclass(frozen=True, slots=True)
class Part:
    """What one determinant adds to the numerator: weight times the factors, times s to the degree."""

    weight: Fraction
    factors: tuple[str, ...] = ()
    degree: int = 0


@dataclass(frozen=True, slots=True)
class AdmittanceTerms:
    """A response as (sum of parts times determinants) over the first determinant.

    `terms` belong to a matrix of `size` rows, one a node of `nodes`; `taken` are the pairs of edges of each
    determinant, that of the denominator first, then one for each of `parts`. A name in `inverted` is a
    resistance: its term stands for the reciprocal.
    """

    terms: tuple[Term, ...]
    nodes: tuple[str, ...]
    taken: tuple[Taken, ...]
    parts: tuple[Part, ...]
    inverted: frozenset[str]

    @property
    def size(self) -> int:
        """The number of rows of the matrix."""
        return len(self.nodes)

    def diagram(self, limit: int = STATE_LIMIT) -> Diagram:
        """Make the diagram of the denominator and of the numerator's parts.

        Raises: TooLargeError.
        """
        return build(self.terms, self.size, self.taken, limit)

    def lookup(self, values: Mapping[str, Fraction]) -> dict[str, Fraction]:
        """Give what each term's name stands for, from the symbols' values."""
        names = {term.name for term in self.terms} | {
            name for part in self.parts for name in part.factors
        }
        return {
            name: 1 / values[name] if name in self.inverted else values[name] for name in sorted(names)
        }

    def ratio(self, determinants: Sequence[Any], lookup: Mapping[str, Any], s: Any) -> tuple[Any, Any]:
        """Give numerator and denominator from the determinants' values, in their ring.

        The ring's elements are divided by whole numbers where a weight is no whole number.
        """
        total = determinants[0] - determinants[0]
        for part, value in zip(self.parts, determinants[1:], strict=True):
            for factor in (*(lookup[name] for name in part.factors), *(s,) * part.degree):
                value = value * factor
            value = value * part.weight.numerator
            total = total + (value if part.weight.denominator == 1 else value / part.weight.denominator)
        return total, determinants[0]

    def coefficients(
        self, diagram: Diagram, values: Mapping[str, Fraction]
    ) -> tuple[tuple[Fraction, ...], tuple[Fraction, ...]]:
        """Give the exact coefficients of numerator and denominator by rising power of s; () is zero.

        Given: the diagram of these terms, and the symbols' values. Nothing is cancelled.
        """
        lookup = self.lookup(values)
        bottom, *found = diagram.coefficients(lookup)
        top: list[Fraction] = []
        for part, determinant in zip(self.parts, found, strict=True):
            factor = math.prod((lookup[name] for name in part.factors), start=part.weight)
            top += [Fraction(0)] * (len(determinant) + part.degree - len(top))
            for power, value in enumerate(determinant, part.degree):
                top[power] += value * factor
        while top and not top[-1]:
            top.pop()
        return tuple(top), bottom


@dataclass(frozen=True, slots=True)
class _Wanted:
    """What is sought: factor times the voltage of an edge; or the current of a drive."""

    edge: Pair
    part: Part
    drive: str | None = None


def admittance_terms(circuit: SmallSignal, find: Find) -> AdmittanceTerms | None:
    """Give the terms of a circuit of resistors, capacitors, transconductances and ideal op amps.

    None where it has another element, or the current of another element is wanted. A circuit without a
    unique solution is given like any other: its denominator has no products.
    """
    nodes = nodes_of(circuit)
    place: dict[str, int | None] = {node: number for number, node in enumerate(nodes)}
    place[GROUND] = None
    terms = []
    tied: dict[str, tuple[Pair, Pair]] = {}
    for element in circuit.elements:
        if isinstance(element, VirtualShort):
            tied[element.name] = (place[element.output], None), _edge(element.inputs, place)
            continue
        term = _term(element, place)
        if term is None:
            return None
        terms.append(term)
    at_work = port(circuit, find, {find.name, *(drive.name for drive in circuit.drives)})
    tied |= {drive.name: (_edge(drive.nodes, place),) * 2 for drive in at_work.voltage_drives}
    wanted = _wanted(circuit, find, place)
    if wanted is None:
        return None
    weights = dict(at_work.weights)
    taken: list[Taken] = [tuple(tied.values())]
    parts = []
    for drive in _drives_at_work(at_work):
        sign, pairs = _numerator(tied, drive, _edge(drive.nodes, place), wanted)
        taken.append(pairs)
        parts.append(
            Part(sign * weights[drive.name] * wanted.part.weight, wanted.part.factors, wanted.part.degree)
        )
    inverted = frozenset(e.resistance for e in circuit.elements if isinstance(e, Resistor))
    return AdmittanceTerms(tuple(terms), nodes, tuple(taken), tuple(parts), inverted)


def _drives_at_work(at_work: Port) -> list[DriveElement]:
    drives: list[DriveElement] = [*at_work.voltage_drives, *at_work.current_drives]
    return [drive for drive in drives if drive.name in at_work.active]


def _numerator(
    tied: Mapping[str, tuple[Pair, Pair]], drive: DriveElement, edge: Pair, wanted: _Wanted
) -> tuple[int, Taken]:
    """Give the sign and the pairs of the numerator for one drive at work.

    The pair of edges that the drive brings to the rows goes with the edge that is sought in the columns.
    """
    left = dict(tied)
    rows = (edge[1], edge[0])  # what a current drive takes from its first node it brings to its second
    if isinstance(drive, VoltageDrive):
        rows = left.pop(drive.name)[0]
    if wanted.drive is None:
        return 1, (*left.values(), (rows, wanted.edge))
    if wanted.drive == drive.name:
        # The current into its first node is minus what the circuit takes there.
        return -1, tuple(left.values())
    return 1, (*(pair for name, pair in left.items() if name != wanted.drive), (rows, wanted.edge))


def _wanted(circuit: SmallSignal, find: Find, place: Mapping[str, int | None]) -> _Wanted | None:
    if find.quantity != "current":
        return _Wanted(_edge(find.nodes or (GROUND, GROUND), place), Part(Fraction(1)))
    for drive in circuit.drives:
        if drive.name == find.part and isinstance(drive, VoltageDrive):
            return _Wanted(_edge(drive.nodes, place), Part(Fraction(1)), drive.name)
    for element in circuit.elements:
        if element.name == find.part and (term := _term(element, place)) is not None:
            return _Wanted(term.columns, Part(Fraction(1), (term.name,), term.degree))
    return None


def _term(element: Element, place: Mapping[str, int | None]) -> Term | None:
    if isinstance(element, Resistor):
        edge = _edge(element.between, place)
        return Term(element.resistance, edge, edge)
    if isinstance(element, Capacitor):
        edge = _edge(element.between, place)
        return Term(element.capacitance, edge, edge, 1)
    if isinstance(element, Transconductance):
        return Term(element.transconductance, _edge(element.flows, place), _edge(element.senses, place))
    return None


def _edge(nodes: tuple[str, str], place: Mapping[str, int | None]) -> Pair:
    return place[nodes[0]], place[nodes[1]]
