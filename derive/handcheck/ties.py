"""Ties between parts, each solved for one symbol and imposed on the values that the circuit is given."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from fractions import Fraction
from typing import Any

from flint import fmpq

from derive.algebra.modular import PRIME
from derive.devices.elements import Coupling, Inductor
from derive.errors import DeriveError
from derive.expressions.tree import Expression, Name
from derive.expressions.walk import names_of, substitute
from derive.handcheck.names import NameRefused, Names
from derive.handcheck.rational import Pivot, Polynomial, TooLongError, Unknowns, put_in, solve_for_one
from derive.handcheck.report import HandTie
from derive.readable.measure import leaves

# What is written out may have so many leaves, by a rough count from above.
LONGEST = 20_000


class Ties:
    """Ties solved one after the other; those that cannot be imposed are listed with the reason."""

    def __init__(self, names: Names, given: Sequence[HandTie]) -> None:
        self.refused: list[tuple[HandTie, str]] = []
        self.pivots: list[Pivot] = []
        coupled = _coupled(names)
        read: list[tuple[HandTie, Expression, Expression]] = []
        for tie in given:
            try:
                sides = [written_out(names, side) for side in (tie.left, tie.right)]
                self._refuse(names, coupled, sides)
                read.append((tie, sides[0], sides[1]))
            except NameRefused as refused:
                self.refused.append((tie, f"{refused.what}; {refused.cure}".rstrip("; ")))
        used = [name for _, left, right in read for side in (left, right) for name in names_of(side)]
        self.ring = Unknowns(used, exact=True)
        for tie, left, right in read:
            said = self._impose(left, right)
            if said:
                self.refused.append((tie, said))

    def _refuse(self, names: Names, coupled: set[str], sides: Sequence[Expression]) -> None:
        for name in (name for side in sides for name in names_of(side)):
            if names.look(name).kind != "symbol":
                raise NameRefused(name, f"{name} is not the value of a part", "tie parts to parts")
            if name in coupled:
                raise NameRefused(name, f"{name} is of coupled coils", "define the ratio in the lines")

    def _impose(self, left: Expression, right: Expression) -> str:
        """Take in a tie; give why it cannot be imposed, "" where it was."""
        ring = self.ring
        try:
            polynomial = ring.numerator(left, right, {})
            for pivot in self.pivots:
                polynomial = put_in(ring, polynomial, pivot)
        except (DeriveError, TooLongError, ZeroDivisionError):
            return "it cannot be solved for one part; write it as NAME = expression, without a root"
        if polynomial == 0:
            return ""
        if polynomial.is_constant():
            return "it contradicts the ties before it, or holds for no values"
        wanted = [side.text for side in (left, right) if isinstance(side, Name)]
        found = solve_for_one(ring, polynomial, wanted)
        if found is None:
            return "it cannot be solved for one part; write it as NAME = expression"
        self.pivots.append(found)
        return ""

    @property
    def tied(self) -> tuple[str, ...]:
        """The symbols that have their values from ties."""
        return tuple(pivot.name for pivot in self.pivots)

    def imposed(self, symbols: Mapping[str, int]) -> dict[str, int]:
        """Give values modulo the prime in which the ties hold.

        Raises: ZeroDivisionError where a tie has no solution at these values.
        """
        values = dict(symbols)
        for pivot in reversed(self.pivots):
            top, bottom = (_residue(self.ring, p, values) for p in (pivot.rest, pivot.factor))
            if not bottom:
                raise ZeroDivisionError("a tie has no solution here")
            values[pivot.name] = -top * pow(bottom, -1, PRIME) % PRIME
        return values

    def imposed_exactly(self, symbols: Mapping[str, Fraction]) -> dict[str, Fraction]:
        """Give exact values in which the ties hold.

        Raises: ZeroDivisionError where a tie has no solution at these values.
        """
        values = dict(symbols)
        for pivot in reversed(self.pivots):
            top, bottom = (_exact(self.ring, p, values) for p in (pivot.rest, pivot.factor))
            values[pivot.name] = -top / bottom
        return values


def written_out(names: Names, expression: Expression) -> Expression:
    """Put what they stand for in the place of words, merged names and names of the user's own.

    Raises: NameRefused for a name that may not be used, is defined by itself, or comes to too long a line.
    """
    return _written_out(names, expression, {}, ())[0]


def _written_out(
    names: Names,
    expression: Expression,
    known: dict[str, tuple[Expression, int]],
    within: tuple[str, ...],
) -> tuple[Expression, int]:
    size = 0
    replacements: dict[str, Expression] = {}
    for name in names_of(expression):
        definition = names.look(name).definition
        if definition is None:
            continue
        if name in within:
            raise NameRefused(name, f"{name} is defined by itself", "define it by other names")
        if name not in known:
            known[name] = _written_out(names, definition, known, (*within, name))
        replacements[name], length = known[name]
        size += length * leaves(expression)
        if size > LONGEST:
            raise NameRefused(name, f"{name} is too long when written out", "use it by its name")
    return substitute(expression, replacements), size + leaves(expression)


def _coupled(names: Names) -> set[str]:
    elements = names.solution.judged.elements
    coils = {e.name: e.inductance for e in elements if isinstance(e, Inductor)}
    found: set[str] = set()
    for element in elements:
        if isinstance(element, Coupling):
            found |= {element.mutual, *(coils[coil] for coil in element.coils)}
    return found


def _terms(ring: Unknowns, polynomial: Polynomial) -> list[tuple[list[tuple[str, int]], Any]]:
    return [
        ([(name, int(e)) for name, e in zip(ring.names, powers, strict=True) if e], fmpq(value))
        for powers, value in polynomial.to_dict().items()
    ]


def _residue(ring: Unknowns, polynomial: Polynomial, values: Mapping[str, int]) -> int:
    total = 0
    for powers, value in _terms(ring, polynomial):
        term = int(value.p) * pow(int(value.q), -1, PRIME)
        for name, power in powers:
            term = term * pow(values[name], power, PRIME) % PRIME
        total += term
    return total % PRIME


def _exact(ring: Unknowns, polynomial: Polynomial, values: Mapping[str, Fraction]) -> Fraction:
    total = Fraction(0)
    for powers, value in _terms(ring, polynomial):
        term = Fraction(int(value.p), int(value.q))
        for name, power in powers:
            term *= values[name] ** power
        total += term
    return total
