"""The tableau with capacitors and inductors at rest or turned, and its polynomials in s.

At rest is zero frequency: s is zero in the tableau. One that is turned, as at infinite frequency, is
replaced: a capacitor by a drive of zero volts, an inductor by one of zero amperes, and an op amp with one
pole by zero volts at its output. The part that looks in is replaced by a drive of one ampere.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field, replace
from fractions import Fraction

from flint import nmod_mat, nmod_poly

from derive.check.excitation import Excitation
from derive.check.solve import NoSolutionError, residue, solve_modulo
from derive.check.stamp import Tableau, assemble
from derive.devices.elements import (
    Capacitor,
    Coupling,
    CurrentDrive,
    DriveElement,
    Element,
    Inductor,
    OnePoleGain,
    SmallSignal,
    VirtualShort,
    VoltageDrive,
)
from derive.topology.topology import GROUND

Holding = Capacitor | Inductor | OnePoleGain


@dataclass(slots=True)
class Turned:
    """One circuit at one point modulo a prime."""

    circuit: SmallSignal
    values: Mapping[str, int]
    prime: int
    _resistances: dict[tuple[str, frozenset[str]], int] = field(default_factory=dict)
    _at_zero: frozenset[str] | None = None

    @property
    def names(self) -> frozenset[str]:
        """The elements that have a state of their own."""
        return frozenset(element.name for element in _holding(self.circuit))

    @property
    def element_of(self) -> dict[str, str]:
        """The element that each symbol of a state belongs to."""
        return {_symbol(element): element.name for element in _holding(self.circuit)}

    @property
    def op_amp_symbols(self) -> set[str]:
        """The symbols of op amps that have a pole of their own."""
        return {_symbol(item) for item in _holding(self.circuit) if isinstance(item, OnePoleGain)}

    def resistance(self, name: str, turned: frozenset[str]) -> int:
        """Give the resistance that a part sees, states that bring a pole at zero and no more turned.

        Raises: NoSolutionError where it is infinite or not fixed.
        """
        others = self._alone() - {name} - turned
        try:
            return self.resistance_at_rest(name, turned | others)
        except NoSolutionError:
            if not others:
                raise
            return self.resistance_at_rest(name, turned)

    def resistance_at_rest(self, name: str, turned: frozenset[str]) -> int:
        """Give the resistance that a part sees, every state at rest that is not turned.

        Raises: NoSolutionError where it is infinite or not fixed.
        """
        key = name, turned
        if key not in self._resistances:
            element = next(item for item in _holding(self.circuit) if item.name == name)
            if isinstance(element, OnePoleGain):
                raise NoSolutionError("an op amp's pole sees no resistance")
            # The drive takes one ampere out of the second node and gives it to the first.
            excitation = Excitation("I_t", ((name, Fraction(-1)),), element.between, None, None)
            self._resistances[key] = self._at_rest(excitation, turned, name)
        return self._resistances[key]

    def has_resistance(self, name: str, turned: frozenset[str]) -> bool:
        """Whether a part sees a resistance that is neither infinite nor left open, either way."""
        try:
            self.resistance(name, turned)
            self.resistance_at_rest(name, turned)
        except NoSolutionError:
            return False
        return True

    def constant(self, name: str, turned: frozenset[str]) -> int:
        """Give the time constant of a part: see `resistance`.

        Raises: NoSolutionError likewise; ZeroDivisionError where it is infinite.
        """
        return self.constant_of(name, self.resistance(name, turned))

    def constant_of(self, name: str, resistance: int) -> int:
        """Give R·C or L/R.

        Raises: ZeroDivisionError where it is infinite.
        """
        element = next(item for item in _holding(self.circuit) if item.name == name)
        value = self.values[_symbol(element)]
        if not isinstance(element, Inductor):
            return value * resistance % self.prime
        if not resistance:
            raise ZeroDivisionError("an inductor sees a short")
        return value * pow(resistance, -1, self.prime) % self.prime

    def response(self, excitation: Excitation, turned: frozenset[str]) -> int:
        """Give the response with some states turned and the others at rest.

        Raises: NoSolutionError where there is none.
        """
        return self._at_rest(excitation, turned, None)

    def polynomials(self, excitation: Excitation) -> tuple[list[int], list[int]]:
        """Give numerator and denominator of the response, nothing cancelled, up to a factor in common."""
        tops, bottoms = [], []
        points = range(1, len(self.names) + 2)
        for s in points:
            tableau = assemble(self.circuit, excitation, self.values.__getitem__)
            bottom = _determinant(tableau, s, self.prime)
            tops.append(solve_modulo(tableau, s, self.prime).response * bottom % self.prime)
            bottoms.append(bottom)
        return _through(points, tops, self.prime), _through(points, bottoms, self.prime)

    def _at_rest(self, excitation: Excitation, turned: frozenset[str], subject: str | None) -> int:
        circuit = _replaced(self.circuit, turned, subject)
        tableau = assemble(circuit, excitation, self.values.__getitem__)
        return int(solve_modulo(tableau, 0, self.prime).response)

    def _alone(self) -> frozenset[str]:
        """Give the states that bring a pole at zero and change nothing else: without each, no solution.

        As nothing else depends on them they may be turned where at rest they leave a node in the air.
        """
        if self._at_zero is None:
            drives = Excitation("", (), (GROUND, GROUND), None, None)
            found = set()
            for element in _holding(self.circuit):
                circuit = _at_rest(self.circuit, element)
                tableau = assemble(circuit, drives, self.values.__getitem__)
                if not _determinant(tableau, 3, self.prime):
                    found.add(element.name)
            self._at_zero = frozenset(found)
        return self._at_zero


def normalised(coefficients: Sequence[int], prime: int) -> list[int]:
    """Give coefficients from the lowest that is not zero, divided by it, without zeros at the end."""
    kept = list(coefficients)
    while kept and not kept[-1]:
        kept.pop()
    while kept and not kept[0]:
        kept.pop(0)
    return [value * pow(kept[0], -1, prime) % prime for value in kept] or [1]


def _holding(circuit: SmallSignal) -> list[Holding]:
    return [
        element
        for element in circuit.elements
        if isinstance(element, Capacitor | Inductor)
        or (isinstance(element, OnePoleGain) and element.unity is not None)
    ]


def _symbol(element: Holding) -> str:
    if isinstance(element, Capacitor):
        return element.capacitance
    return element.inductance if isinstance(element, Inductor) else element.unity or ""


def _replaced(circuit: SmallSignal, turned: frozenset[str], subject: str | None) -> SmallSignal:
    elements: list[Element] = []
    drives: list[DriveElement] = list(circuit.drives)
    for element in circuit.elements:
        if isinstance(element, Coupling):
            continue
        if isinstance(element, Capacitor | Inductor) and element.name == subject:
            drives.append(CurrentDrive(element.name, element.between))
        elif element.name not in turned:
            elements.append(element)
        elif isinstance(element, Capacitor):
            drives.append(VoltageDrive(element.name, element.between))
        elif isinstance(element, Inductor):
            drives.append(CurrentDrive(element.name, element.between))
        elif isinstance(element, OnePoleGain):
            drives.append(VoltageDrive(element.name, (element.output, GROUND)))
    return replace(circuit, elements=tuple(elements), drives=tuple(drives))


def _at_rest(circuit: SmallSignal, subject: Holding) -> SmallSignal:
    """Give the circuit with one state at rest and the others as they are."""
    elements: list[Element] = []
    drives: list[DriveElement] = list(circuit.drives)
    for element in circuit.elements:
        if element.name != subject.name:
            elements.append(element)
        elif isinstance(element, Capacitor):
            drives.append(CurrentDrive(element.name, element.between))
        elif isinstance(element, Inductor):
            drives.append(VoltageDrive(element.name, element.between))
        elif isinstance(element, OnePoleGain) and element.dc_gain is None:
            elements.append(VirtualShort(element.name, element.part, element.output, element.inputs))
        elif isinstance(element, OnePoleGain):
            elements.append(replace(element, unity=None))
    coupled = [e for e in elements if isinstance(e, Coupling) and subject.name in e.coils]
    return replace(circuit, elements=tuple(e for e in elements if e not in coupled), drives=tuple(drives))


def _determinant(tableau: Tableau, s: int, prime: int) -> int:
    size = tableau.size
    flat = [0] * (size * size)
    for entries, factor in ((tableau.constant, 1), (tableau.rising, s)):
        for (row, column), entry in entries.items():
            place = row * size + column
            flat[place] = (flat[place] + factor * residue(entry, prime)) % prime
    return int(nmod_mat(size, size, flat, prime).det())


def _through(points: Sequence[int], values: Sequence[int], prime: int) -> list[int]:
    """Give the coefficients of the polynomial through the points (Lagrange's form)."""
    total = nmod_poly([0], prime)
    for one, value in zip(points, values, strict=True):
        term = nmod_poly([value], prime)
        for other in points:
            if other != one:
                term = term * nmod_poly([-other % prime, 1], prime)
                term = term * nmod_poly([pow(one - other, -1, prime)], prime)
        total = total + term
    return [int(coefficient) for coefficient in total.coeffs()]
