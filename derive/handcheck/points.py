"""The circuit at random points modulo a prime: what every name comes to when the circuit is solved.

The circuit is that of the band, nothing merged, solved by its tableau: no line of the derivation is believed. Its
drives have random values that agree with what the wanted quantity is taken per, so that a line which is not
homogeneous in them is caught.
"""

from __future__ import annotations

import hashlib
from collections.abc import Callable, Mapping, Sequence
from dataclasses import replace
from fractions import Fraction
from typing import Any

from derive.algebra.modular import PRIME
from derive.check.excitation import Excitation, excite
from derive.check.points import Stream, values_modulo
from derive.check.reading import form_modulo
from derive.check.solve import NoSolutionError, State, solve_modulo
from derive.check.stamp import assemble
from derive.devices.elements import Capacitor, Inductor, Resistor
from derive.errors import DeriveError
from derive.expressions.tree import Expression
from derive.expressions.walk import evaluate_modulo, names_of
from derive.handcheck.names import COEFFICIENT, NameRefused, Names
from derive.handcheck.series import coefficients_modulo, response_expression
from derive.handcheck.ties import Ties
from derive.topology.topology import GROUND

POINTS = 3
TRIES = 12


class UndecidedError(Exception):
    """Raised where a line has no value at the points that were tried."""


class Point:
    """One solution of the circuit modulo the prime, in which names are looked up as they are needed.

    Raises: NameRefused for a name that has no value here; ZeroDivisionError for one that divides by zero.
    """

    def __init__(
        self, names: Names, symbols: Mapping[str, int], numbers: Stream, others: Mapping[str, int]
    ) -> None:
        self.names = names
        self.symbols = symbols
        self.values: dict[str, int] = {**symbols, "pi": numbers.below(PRIME)}
        self._pending: set[str] = set()
        self._states: dict[str, State] = {}
        self.input = numbers.below(PRIME)
        self._others = others
        own = excite(names.system)
        self._own = own
        self._state = self._solved(replace(own, levels=self._levels(own)))
        if names.solution.form.is_zero:
            self.response = 0
        else:
            self.response = self._response(own)

    def _levels(self, own: Excitation) -> tuple[tuple[str, Fraction], ...]:
        """Give the drives' levels for an input of 1: those not called for are at zero, or as told."""
        per = pow(self.input, -1, PRIME)
        extra = {name: Fraction(value * per % PRIME) for name, value in self._others.items()}
        return tuple({**extra, **dict(own.levels)}.items())

    def _solved(self, excitation: Excitation) -> State:
        circuit = self.names.solution.judged
        return solve_modulo(
            assemble(circuit, excitation, self.symbols.__getitem__), self.symbols["s"], PRIME
        )

    def _response(self, own: Excitation) -> int:
        return int(self._solved(own).response if self._others else self._state.response)

    def __getitem__(self, name: str) -> int:
        if name not in self.values:
            self.values[name] = self._found(name)
        return self.values[name]

    def _found(self, name: str) -> int:
        meaning = self.names.look(name)
        if meaning.kind in ("meaning", "line"):
            if name in self._pending:
                raise NameRefused(name, f"{name} is defined by itself", "define it by other names")
            self._pending.add(name)
            try:
                return self.value(meaning.definition)
            except NameRefused as refused:
                if refused.name == name:
                    raise
                raise NameRefused(name, f"{name} is defined with {refused.what}", refused.cure) from None
            finally:
                self._pending.discard(name)
        if meaning.kind == "drive":
            if name == self.names.system.input:
                return self.input
            level = dict(self._levels(self._own)).get(name, Fraction(0))
            return level.numerator * pow(level.denominator, -1, PRIME) * self.input % PRIME
        if meaning.kind == "voltage":
            return self._voltage(meaning.subject)
        if meaning.kind == "current":
            return self._current(meaning.subject)
        if meaning.kind == "quantity":
            return self._quantity(name)
        return self._coefficient(name)

    def value(self, expression: Expression | None) -> int:
        """Give the value of an expression at this point."""
        if expression is None:
            raise UndecidedError("it has no value")
        for name in names_of(expression):
            self[name]
        return evaluate_modulo(expression, self.values, PRIME)

    def _voltage(self, node: str) -> int:
        if node == GROUND:
            return 0
        if node not in self._state.nodes:
            raise NameRefused(f"v_{node}", f"the circuit leaves v_{node} open")
        return int(self._state.nodes[node]) * self.input % PRIME

    def _current(self, branch: str) -> int:
        if branch in self._state.branches:
            return int(self._state.branches[branch]) * self.input % PRIME
        for element in self.names.system.small_signal.elements:
            if element.name == branch and isinstance(element, Resistor | Capacitor | Inductor):
                first, second = (self._voltage(node) for node in through(element))
                return (first - second) * self._admittance(element) % PRIME
        raise NameRefused(f"i_{branch}", f"the circuit leaves i_{branch} open")

    def _admittance(self, element: Resistor | Capacitor | Inductor) -> int:
        if isinstance(element, Resistor):
            return pow(self[element.resistance], -1, PRIME)
        if isinstance(element, Capacitor):
            return self["s"] * self[element.capacitance]
        return pow(self["s"] * self[element.inductance], -1, PRIME)

    def _quantity(self, name: str) -> int:
        system = self.names.system_of(name)
        if system is self.names.system:
            return self.response
        return int(self._solved(excite(system)).response)

    def _coefficient(self, name: str) -> int:
        form = self.names.solution.form
        if form.definitions:
            for defined, meaning in form.definitions:
                self.values.setdefault(defined, evaluate_modulo(meaning, _Reader(self), PRIME))
        if name == "K":
            return evaluate_modulo(form.gain, _Reader(self), PRIME)
        matched = COEFFICIENT.fullmatch(name)
        row = form.numerator if matched and matched[1] == "a" else form.denominator
        place = int(matched[2]) if matched else 0
        return evaluate_modulo(row[place], _Reader(self), PRIME) if place < len(row) else 0

    def reduced_coefficients(self) -> dict[str, int] | None:
        """Give K, a_k and b_k of the response in lowest terms at these values; None where it has none."""
        form = self.names.solution.form
        whole = response_expression(form)
        if form.definitions:
            return None
        return coefficients_modulo(whole, {name: self[name] for name in names_of(whole)})

    def agrees(self) -> bool:
        """Whether the normal form, which a_k and b_k are read from, is that of the circuit here."""
        form = self.names.solution.form
        names = {n for part in (form.gain, *form.numerator, *form.denominator) for n in names_of(part)}
        for name, meaning in form.definitions:
            self.values.setdefault(name, evaluate_modulo(meaning, _Reader(self), PRIME))
        values = {name: self[name] for name in names}
        return form_modulo(form, {**values, "s": self["s"]}, PRIME) == self.response % PRIME


def through(element: Resistor | Capacitor | Inductor) -> tuple[str, str]:
    """Give the nodes from and to which the current of a merged part is counted: to ground where one is ground."""
    first, second = element.between
    return (second, first) if first == GROUND else (first, second)


class _Reader(Mapping[str, int]):
    """A point as the mapping that evaluation wants."""

    def __init__(self, point: Point) -> None:
        self._point = point

    def __getitem__(self, name: str) -> int:
        return self._point[name]

    def __iter__(self) -> Any:
        return iter(self._point.values)

    def __len__(self) -> int:
        return len(self._point.values)


def stream_of(names: Names, text: str, purpose: str) -> Stream:
    """Give the stream of numbers for one derivation and purpose: the same for the same texts."""
    solution = names.solution
    texts = (solution.judged.topology.text, names.system.find.name, solution.band_name, text, purpose)
    return Stream(hashlib.sha256(repr(texts).encode()).hexdigest())


def points_of(
    names: Names, ties: Ties, numbers: Stream, *, count: int = POINTS, all_drives: bool = False
) -> tuple[Point, ...]:
    """Give random points of the circuit, the ties imposed.

    Given: whether drives that the wanted quantity is not taken per are to have values too.
    Raises: UndecidedError where no point of the circuit can be found.
    """
    found: list[Point] = []
    for _ in range(TRIES + count):
        if len(found) == count:
            return tuple(found)
        try:
            symbols = values_modulo(names.solution.judged, numbers, PRIME)
            symbols = ties.imposed({**symbols, "s": numbers.below(PRIME)})
            quiet = [n for n in names.drives if n not in dict(names.system.weights)]
            others = {name: numbers.below(PRIME) for name in quiet} if all_drives else {}
            found.append(Point(names, symbols, numbers, others))
        except (NoSolutionError, ZeroDivisionError):
            continue
    if len(found) == count:
        return tuple(found)
    raise UndecidedError("the circuit has no solution under these ties")


def holds(
    left: Expression, right: Expression, points: Sequence[Mapping[str, int] | Point]
) -> bool | None:
    """Whether both sides are equal at all points; None where they have no value at any.

    Raises: NameRefused for a name that may not be used; DeriveError for a root.
    """
    tried = 0
    for point in points:
        value: Callable[[Expression], int]
        value = point.value if isinstance(point, Point) else _valuer(point)
        try:
            if (value(left) - value(right)) % PRIME:
                return False
            tried += 1
        except ZeroDivisionError:
            continue
    return True if tried else None


def _valuer(values: Mapping[str, int]) -> Callable[[Expression], int]:
    def value(expression: Expression) -> int:
        try:
            return evaluate_modulo(expression, values, PRIME)
        except KeyError as error:
            raise DeriveError(f"{error} has no value") from None

    return value
