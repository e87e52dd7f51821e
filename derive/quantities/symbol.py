"""Symbols: what a name in an expression stands for."""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction

from derive.quantities.dimension import Dimension


@dataclass(frozen=True, slots=True)
class Value:
    """A value as the user wrote it, exactly; `exact` is None where the user wrote "?"."""

    exact: Fraction | None
    text: str


@dataclass(frozen=True, slots=True)
class Symbol:
    """A name with its dimension, its nominal value in SI base units and its origin.

    `value` is None for a value left open ("?"). `tolerance` is a fraction (1/100 for 1 %).
    `text` is the value as it was written ("4k7"); `origin` is a phrase such as "part R_E".
    """

    name: str
    dimension: Dimension
    value: Fraction | None
    origin: str
    text: str = ""
    tolerance: Fraction | None = None
    positive: bool = True
