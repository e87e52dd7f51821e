"""The nouns of time constants: what each capacitor and inductor sees, and what that makes of a coefficient."""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from typing import Literal

from derive.eliminate.derivation import Derivation
from derive.expressions.tree import Expression
from derive.readable.form import Definition

Kind = Literal["open-circuit", "short-circuit"]


@dataclass(frozen=True, slots=True)
class TimeConstant:
    """The resistance that one capacitor or inductor sees, and its time constant R·C or L/R.

    All drives are at zero. For an open-circuit time constant the other reactances are out of action
    (capacitors open, inductors short), for a short-circuit one they are the reverse. `resistance` is in
    the circuit's symbols, in lowest terms; `readable` says the same and may use `definitions`; both are
    None where the resistance is infinite. `constant` is the time constant in symbols, None where it is
    infinite. `seconds` is None where it is infinite or a value is open. `share` is its part of b_1
    of the circuit's own polynomial (the sum of all, and of what op amps' own poles add; for short-circuit
    ones of the sum of reciprocals), None likewise. Where modes are hidden it is its part of the sum of all.
    """

    part: str
    symbol: str
    element: str
    reactance: Literal["capacitor", "inductor"]
    kind: Kind
    between: tuple[str, str]
    derivation: Derivation | None
    resistance: Expression | None
    readable: Expression | None
    constant: Expression | None
    seconds: Fraction | None
    share: float | None
    definitions: tuple[Definition, ...] = ()


@dataclass(frozen=True, slots=True)
class Product:
    """One term of a higher coefficient: the time constants of elements, each with those before it turned.

    `symbols` are the elements' values in order; the first sees its zero-frequency resistance, each later
    one that with all earlier ones at their high-frequency state (capacitors short, inductors open).
    `term` is the product of time constants in symbols, `readable` the same for reading, `share` its part
    of the coefficient.
    """

    symbols: tuple[str, ...]
    term: Expression
    readable: Expression
    share: float | None


@dataclass(frozen=True, slots=True)
class Coefficient:
    """A coefficient of the normal form as a sum of products of time constants (times transfer ratios).

    `name` is b_1, b_2, a_1, …. `products` holds the terms that are not zero; their sum equals the
    coefficient of the normal form.
    """

    name: str
    products: tuple[Product, ...]


@dataclass(frozen=True, slots=True)
class TimeConstants:
    """All time constants of one response.

    `hidden` is the factor 1 + f_1·s + … by its coefficients that the circuit's own polynomial has beyond the
    response's denominator: modes that this response does not show; (1,) where there are none, () where
    that was not looked for because the circuit is too large. Where there are some, `hidden_says` tells so
    in sentences to stand before the table, `hidden_readable` is the same factor for reading, and
    `hidden_symbols` are the parts whose modes these are, () where they cannot be told from those of the
    response: then there are no coefficients.
    `remark` says in words why something could not be given, "" where nothing is missing. `definitions`
    are those that the readable forms of the products and of the hidden factor use.
    """

    open_circuit: tuple[TimeConstant, ...]
    short_circuit: tuple[TimeConstant, ...]
    coefficients: tuple[Coefficient, ...]
    hidden: tuple[Expression, ...]
    remark: str = ""
    definitions: tuple[Definition, ...] = ()
    hidden_says: str = ""
    hidden_readable: tuple[Expression, ...] = ()
    hidden_symbols: tuple[str, ...] = ()
