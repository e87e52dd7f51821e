"""Lines in the symbols of the circuit alone: node voltages and results replaced by their exact solutions."""

from __future__ import annotations

from dataclasses import dataclass, replace
from fractions import Fraction

from derive.algebra.ratio import lowest_terms
from derive.algebra.ring import Polynomial, Ring
from derive.algebra.ring import ring as make_ring
from derive.check.points import Stream, values_exact
from derive.devices.elements import Capacitor, Inductor, Resistor
from derive.expressions.tree import (
    ONE,
    ZERO,
    Expression,
    Name,
    Negative,
    Number,
    Product,
    Quotient,
    Sum,
)
from derive.expressions.walk import evaluate, names_of, substitute
from derive.handcheck.names import COEFFICIENT, Names
from derive.handcheck.points import through
from derive.handcheck.rational import Pivot, Unknowns
from derive.handcheck.series import response_expression
from derive.handcheck.ties import Ties
from derive.normalise.form import NormalForm
from derive.normalise.nested_choice import derive_form
from derive.readable.measure import leaves
from derive.topology.topology import GROUND

# Lines of more leaves, once written in symbols, are not multiplied out.
LONGEST = 6000
# So many products of terms are multiplied out in one go.
MOST_PRODUCTS = 20_000
Ratio = tuple[Polynomial, Polynomial]


class TooLarge(Exception):
    """Raised where a line would be too long in the symbols of the circuit."""


@dataclass(frozen=True, slots=True, eq=False)
class _Pair:
    """A fraction of polynomials, with a limit on what is multiplied out."""

    top: Polynomial
    bottom: Polynomial

    def __add__(self, other: _Pair) -> _Pair:
        if self.bottom == other.bottom:
            return _Pair(self.top + other.top, self.bottom)
        shared = self.bottom.gcd(other.bottom)
        mine, theirs = self.bottom / shared, other.bottom / shared
        top = _times(self.top, theirs) + _times(other.top, mine)
        return _Pair(top, _times(self.bottom, theirs))

    def __mul__(self, other: _Pair) -> _Pair:
        return _Pair(_times(self.top, other.top), _times(self.bottom, other.bottom))

    def __truediv__(self, other: _Pair) -> _Pair:
        if other.top == 0:
            raise ZeroDivisionError("a divisor is zero for all values")
        return _Pair(_times(self.top, other.bottom), _times(self.bottom, other.top))

    def __neg__(self) -> _Pair:
        return _Pair(-self.top, self.bottom)

    def __pow__(self, exponent: int) -> _Pair:
        if exponent > 1 and max(len(self.top), len(self.bottom)) ** min(exponent, 8) > MOST_PRODUCTS:
            raise TooLarge
        return _Pair(self.top**exponent, self.bottom**exponent)


def _times(one: Polynomial, other: Polynomial) -> Polynomial:
    if len(one) * len(other) > MOST_PRODUCTS:
        raise TooLarge
    return one * other


class Solved:
    """What the names of a derivation come to in the symbols of the circuit, worked out as they are needed."""

    def __init__(self, names: Names, ties: Ties) -> None:
        self._names = names
        self._ties = {p.name: _expression(ties.ring, p) for p in ties.pivots}
        self._known: dict[str, Expression] = {}
        system = names.system.small_signal
        own = [symbol.name for symbol in system.symbols]
        more = [s.name for s in names.solution.judged.symbols if s.name not in own]
        mutual = [n for n in names.system.ring.names if n not in (*own, *more, "s")]
        drives = [n for n in dict.fromkeys((names.system.input, *names.drives)) if n not in mutual]
        self.ring: Ring = make_ring(("s", *own, *more, *mutual, *drives, "pi"))
        self._merged = (
            {m.name: set(m.parts) for m in names.solution.band.definitions}
            if (names.solution.band)
            else {}
        )

    def ratios(self, *sides: Expression) -> list[Ratio]:
        """Give expressions as ratios of polynomials in the symbols, in lowest terms.

        Raises: TooLarge; NameRefused; DeriveError for a root; ZeroDivisionError.
        """
        written = self.symbolic(*sides)
        one = self.ring.one
        names = {name: _Pair(self.ring.generator(name), one) for name in self.ring.names}
        pairs = [evaluate(side, names, self._number) for side in written]
        return [lowest_terms(self.ring, pair.top, pair.bottom) for pair in pairs]

    def _number(self, value: Fraction) -> _Pair:
        return _Pair(self.ring.constant(value.numerator), self.ring.constant(value.denominator))

    def symbolic(self, *sides: Expression) -> list[Expression]:
        """Give expressions in the ring's names, the ties put in, and parts merged in all of them or in none.

        Raises: TooLarge; NameRefused.
        """
        written = [self.in_symbols(side) for side in sides]
        used = {name for side in written for name in names_of(side)} | self._ties.keys()
        apart = {name for name, parts in self._merged.items() if parts & used}
        if apart:
            written = [self._taken_apart(side, apart) for side in written]
        if self._ties:
            written = [self._tied(side) for side in written]
        if sum(map(leaves, written)) > LONGEST:
            raise TooLarge
        return written

    def values(self, numbers: Stream) -> dict[str, Fraction]:
        """Give random whole values for the names that `symbolic` leaves."""
        names = [n for n in self.ring.names if n not in self._merged]
        known = dict(zip(names, map(Fraction, numbers.distinct(len(names), 2, 997)), strict=True))
        known |= values_exact(self._names.solution.judged, numbers)
        for merged in self._names.solution.band.definitions if self._names.solution.band else ():
            known[merged.name] = evaluate(merged.definition, known, Fraction)
        return known

    def _tied(self, expression: Expression) -> Expression:
        # A tie may be solved with symbols that later ties give.
        for _ in range(len(self._ties) + 1):
            after = substitute(expression, self._ties)
            if after is expression:
                break
            expression = after
            if leaves(expression) > LONGEST:
                raise TooLarge
        return expression

    def _taken_apart(self, expression: Expression, apart: set[str]) -> Expression:
        band = self._names.solution.band
        meanings = {m.name: m.definition for m in (band.definitions if band else ()) if m.name in apart}
        for _ in range(len(meanings) + 1):
            expression = substitute(expression, meanings)
        return expression

    def in_symbols(self, expression: Expression) -> Expression:
        """Give an expression in symbols, merged names, drives and s.

        Raises: NameRefused, TooLarge.
        """
        replacements: dict[str, Expression] = {}
        size = 0
        for name in names_of(expression):
            found = self._in_symbols(name)
            if found is not None:
                replacements[name] = found
                size += leaves(found)
        if size * max(1, leaves(expression)) > 400 * LONGEST or size > LONGEST:
            raise TooLarge
        return substitute(expression, replacements)

    def _in_symbols(self, name: str) -> Expression | None:
        if name in self._known:
            return self._known[name]
        meaning = self._names.look(name)
        if name in self._merged or meaning.kind in ("symbol", "s", "pi"):
            return None
        self._known[name] = Name(name)
        found: Expression | None = None
        if meaning.definition is not None:
            found = self.in_symbols(meaning.definition)
        elif meaning.kind == "drive":
            found = self._drive(name)
        elif meaning.kind == "voltage":
            found = self._voltage(meaning.subject)
        elif meaning.kind == "current":
            found = self._current(meaning.subject)
        elif meaning.kind == "quantity":
            system = self._names.system_of(name)
            own = system is self._names.system
            found = self._of_form(self._names.solution.form if own else derive_form(system)[1])
        elif meaning.kind == "coefficient":
            found = _coefficient(self._names.solution.form, name)
        if found is None:
            raise TooLarge
        self._known[name] = found
        return found

    def _drive(self, name: str) -> Expression:
        system = self._names.system
        if name == system.input:
            return Name(name)
        level = dict(system.weights).get(name)
        return Product((Number(level), Name(system.input))) if level else ZERO

    def _current(self, branch: str) -> Expression:
        own = {element.name for element in self._names.solution.judged.elements}
        for element in self._names.system.small_signal.elements:
            if element.name == branch and isinstance(element, Resistor | Capacitor | Inductor):
                ends = [
                    self._voltage(node)
                    for node in (element.between if branch in own else through(element))
                ]
                between: Expression = Sum((ends[0], Negative(ends[1])))
                if isinstance(element, Resistor):
                    return Quotient(between, Name(element.resistance))
                if isinstance(element, Capacitor):
                    return Product((Name("s"), Name(element.capacitance), between))
                return Quotient(between, Product((Name("s"), Name(element.inductance))))
        raise TooLarge

    def _voltage(self, node: str) -> Expression:
        if node == GROUND:
            return ZERO
        known = dict(self._names.system.known)
        if node in known:
            return self.in_symbols(known[node])
        return self._unknown(f"v_{node}")

    def _unknown(self, name: str) -> Expression:
        """Give an unknown of the circuit's equations: its response times the input."""
        system = self._names.system
        if not any(unknown.name == name for unknown in system.unknowns):
            raise TooLarge
        derived = derive_form(replace(system, wanted=name))
        return Product((self._of_form(derived[1]), Name(system.input)))

    def _of_form(self, form: NormalForm) -> Expression:
        if form.definitions or form.at_points:
            raise TooLarge
        return response_expression(form)


def _coefficient(form: NormalForm, name: str) -> Expression | None:
    if form.definitions:
        return None
    if name == "K":
        return form.gain
    matched = COEFFICIENT.fullmatch(name)
    if matched is None:
        return None
    row = form.numerator if matched[1] == "a" else form.denominator
    place = int(matched[2])
    return row[place] if place < len(row) else ZERO


def _expression(ring: Unknowns, pivot: Pivot) -> Expression:
    """Write a tie's solution for its symbol."""
    rest, factor = (ring.written(polynomial) for polynomial in (pivot.rest, pivot.factor))
    return Quotient(Negative(rest), factor) if factor != ONE else Negative(rest)
