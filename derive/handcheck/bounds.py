"""By what chance a wrong line could have passed: the degree of the line over the prime, for every point."""

from __future__ import annotations

import math

from derive.algebra.modular import PRIME
from derive.check.degree import Degrees, degree_of_circuit, degree_of_form, degrees, weights_of
from derive.errors import DeriveError
from derive.expressions.tree import Expression
from derive.expressions.walk import names_of
from derive.handcheck.names import NameRefused, Names
from derive.handcheck.ties import Ties

_RAISED = str.maketrans("0123456789-", "⁰¹²³⁴⁵⁶⁷⁸⁹⁻")


class Bounds:
    """The degrees that the names of one derivation have in the numbers drawn."""

    def __init__(self, names: Names, ties: Ties) -> None:
        self._names = names
        band = names.solution.band
        self._weights = weights_of(names.solution.judged, band.definitions if band else ())
        for pivot in ties.pivots:
            self._weights[pivot.name] = pivot.rest.total_degree(), pivot.factor.total_degree()
        # A tied symbol stands in the circuit's own determinant too.
        stretch = max((max(w) for w in self._weights.values() if isinstance(w, tuple)), default=1)
        self._circuit = degree_of_circuit(names.solution.judged) * max(1, stretch) + 1
        self._known: dict[str, Degrees] = {}

    def degree(self, left: Expression, right: Expression) -> int | None:
        """Give the degree of the polynomial that vanishes where both sides agree; None where it has none."""
        try:
            for side in (left, right):
                for name in names_of(side):
                    self._learn(name, 0)
            (a, b), (c, d) = (degrees(side, self._weights | self._known) for side in (left, right))
        except (DeriveError, NameRefused):
            return None
        return max(a + d, c + b, 1)

    def _learn(self, name: str, depth: int) -> None:
        if name in self._known or name in self._weights:
            return
        meaning = self._names.look(name)
        if meaning.definition is not None and depth < 60:
            for inner in names_of(meaning.definition):
                self._learn(inner, depth + 1)
            self._known[name] = degrees(meaning.definition, self._weights | self._known)
        elif meaning.kind == "coefficient":
            form = self._names.solution.form
            for defined, value in form.definitions:
                self._known[defined] = degrees(value, self._weights | self._known)
            self._known[name] = degree_of_form(form, self._weights | self._known)
        elif meaning.kind in ("voltage", "current", "quantity"):
            self._known[name] = self._circuit, self._circuit

    def said(self, left: Expression, right: Expression, points: int) -> str:
        """Say how a line was tried, and the chance that a wrong one passes."""
        degree = self.degree(left, right)
        tried = f"equal at {points} random points modulo 2⁶¹ − 1"
        if degree is None:
            return tried
        exponent = math.floor(points * (math.log10(PRIME) - math.log10(degree)))
        power = str(-exponent).translate(_RAISED)
        return f"{tried}; degree {degree}, so a wrong line passes with a chance below 10{power}"
