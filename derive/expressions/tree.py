"""The nouns of an expression: a small immutable tree that every printer and every check reads."""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from typing import Literal


@dataclass(frozen=True, slots=True)
class Number:
    """An exact rational number."""

    value: Fraction


@dataclass(frozen=True, slots=True)
class Name:
    """A symbol, by the name that the user gave it: `R_E`, `v_b`, `s`."""

    text: str


@dataclass(frozen=True, slots=True)
class Sum:
    """Terms added in the order in which they are read; a term to be taken off is a `Negative`."""

    terms: tuple[Expression, ...]


@dataclass(frozen=True, slots=True)
class Product:
    """Factors multiplied in the order in which they are read."""

    factors: tuple[Expression, ...]


@dataclass(frozen=True, slots=True)
class Quotient:
    """A numerator over a denominator."""

    numerator: Expression
    denominator: Expression


@dataclass(frozen=True, slots=True)
class Power:
    """A base to a whole exponent, which may be negative."""

    base: Expression
    exponent: int


@dataclass(frozen=True, slots=True)
class Negative:
    """The operand with its sign changed."""

    operand: Expression


@dataclass(frozen=True, slots=True)
class Parallel:
    """The parallel combination of impedances: the reciprocal of the sum of reciprocals."""

    branches: tuple[Expression, ...]


@dataclass(frozen=True, slots=True)
class Root:
    """The square root of its radicand."""

    radicand: Expression


@dataclass(frozen=True, slots=True)
class Elided:
    """Stands, in print only, for `count` further terms that are written out at `pointer`."""

    count: int
    pointer: str


@dataclass(frozen=True, slots=True)
class Struck:
    """A term that an assumption takes out, shown struck, in print only; it has no value."""

    operand: Expression


Relation = Literal["=", "~"]
Expression = (
    Number | Name | Sum | Product | Quotient | Power | Negative | Parallel | Root | Elided | Struck
)


@dataclass(frozen=True, slots=True)
class Equation:
    """The statement that `left` and `right` are equal, or nearly so where `relation` is "~"."""

    left: Expression
    right: Expression
    relation: Relation = "="


ZERO = Number(Fraction(0))
ONE = Number(Fraction(1))
