"""Writes resistances and time constants in the circuit's own symbols."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from fractions import Fraction

from derive.algebra.ring import Polynomial
from derive.eliminate.derivation import Derivation
from derive.eliminate.scribe import writer_for
from derive.errors import DeriveError
from derive.expressions.polynomials import Writer, divide, multiply, negate
from derive.expressions.tree import Expression, Name, Negative, Number, Power, Product, Quotient
from derive.expressions.walk import evaluate
from derive.normalise.numbers import values_of
from derive.reactances.expansion import Expansion
from derive.reactances.states import State
from derive.readable.readable import read_ratio
from derive.readable.vocabulary import Vocabulary


@dataclass(frozen=True, slots=True)
class Reader:
    """The writer, the vocabulary and the nominal values (None where one is open) of one circuit."""

    writer: Writer
    vocabulary: Vocabulary
    values: Mapping[str, Fraction] | None

    @staticmethod
    def of(derivation: Derivation, vocabulary: Vocabulary) -> Reader:
        """Give the reader for a derivation's circuit."""
        values = values_of(derivation.system.small_signal)
        return Reader(writer_for(derivation.system), vocabulary, values)

    def raw(self, numerator: Polynomial, denominator: Polynomial) -> Expression:
        """Write a ratio multiplied out."""
        return self.writer.ratio(numerator, denominator)

    def readable(self, numerator: Polynomial, denominator: Polynomial) -> Expression:
        """Write a ratio in the fewest signs."""
        return read_ratio(self.writer.ring, numerator, denominator, self.vocabulary)

    def time_constant(self, expansion: Expansion, before: int, place: int) -> Expression:
        """Write a state's time constant with the states of `before` turned; none of it may vanish."""
        state = expansion.states[place]
        with_it, without = expansion.bottom[before | 1 << place], expansion.bottom[before]
        pair = (without, with_it) if state.kind == "inductor" else (with_it, without)
        return constant_of(state, self.readable(*expansion.ratio(*pair)))

    def number(self, expression: Expression) -> Fraction | None:
        """Give the value at the nominal values; None where one is open or the value is infinite."""
        if self.values is None:
            return None
        try:
            return evaluate(expression, self.values, Fraction)
        except (DeriveError, ZeroDivisionError):
            return None


def constant_of(state: State, resistance: Expression) -> Expression:
    """Write R·C, L/R or, for an op amp's pole, its ratio over w_u."""
    symbol = Name(state.symbol)
    if state.kind == "capacitor":
        return times(symbol, resistance)
    return divide(symbol, resistance) if state.kind == "inductor" else divide(resistance, symbol)


def times(symbol: Expression, factor: Expression) -> Expression:
    """Write R·C as engineers do, but C·(R_1 + R_2): the symbol before what needs parentheses."""
    if isinstance(factor, Negative):
        return negate(times(symbol, factor.operand))
    if isinstance(factor, Quotient):
        return divide(times(symbol, factor.numerator), factor.denominator)
    plain = isinstance(factor, Name | Number | Power | Product)
    return multiply([factor, symbol] if plain else [symbol, factor])


def shares(values: list[Fraction | None]) -> list[float | None]:
    """Give what part of their sum each value is; None for all where one is missing or the sum is zero."""
    known = [value for value in values if value is not None]
    total = sum(known, Fraction(0))
    if len(known) < len(values) or not total:
        return [None] * len(values)
    return [float(value / total) for value in known]
