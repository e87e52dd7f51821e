"""The nouns of the nodal equations: unknowns, equations with every term's part, and the system."""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from typing import Literal

from derive.algebra.ring import Polynomial, Ring
from derive.devices.elements import SmallSignal
from derive.expressions.tree import Equation, Expression
from derive.topology.topology import Find


@dataclass(frozen=True, slots=True)
class Unknown:
    """A node voltage, a branch current, or the wanted quantity; `subject` is its node or element."""

    name: str
    quantity: Literal["voltage", "current"]
    subject: str


@dataclass(frozen=True, slots=True)
class LeavingCurrent:
    """One term of Kirchhoff's current law: the current that leaves the node through an element."""

    element: str
    part: str
    current: Expression


@dataclass(frozen=True, slots=True)
class NodalEquation:
    """One equation of the circuit, in words, as written, and as a row.

    `row` holds (unknown or drive, coefficient) and means: the sum of coefficient times name is zero.
    `terms` is empty for an equation that is not a current law.
    """

    meaning: str
    nodes: tuple[str, ...]
    terms: tuple[LeavingCurrent, ...]
    equation: Equation
    row: tuple[tuple[str, Polynomial], ...]


@dataclass(frozen=True, slots=True)
class MatrixForm:
    """matrix · unknowns = right side; one row an equation, in the system's order."""

    rows: tuple[tuple[Expression, ...], ...]
    unknowns: tuple[Expression, ...]
    right: tuple[Expression, ...]


@dataclass(frozen=True, slots=True)
class NodalSystem:
    """All equations of one circuit for one wanted quantity.

    `input` is the name of the drive that the result is taken per (a test current for an impedance);
    `weights` gives each real drive in terms of it; drives not named there are at zero. `wanted` is
    the unknown sought: the find's own name stands for wanted/input. `known` gives the voltages of
    nodes that drives tie, as written in the equations; `matrix` is the equations once more, as printed.
    """

    small_signal: SmallSignal
    find: Find
    ring: Ring
    unknowns: tuple[Unknown, ...]
    equations: tuple[NodalEquation, ...]
    input: str
    weights: tuple[tuple[str, Fraction], ...]
    wanted: str
    known: tuple[tuple[str, Expression], ...]
    matrix: MatrixForm | None = None
