"""The circuit once more, from the laws of its elements alone: a full tableau, not nodal equations.

Every node but ground gets a current law and every element and drive a branch current and a row of
its own, so no division is needed: each entry is a product of values, of first degree in s at most.
That makes it as unlike the nodal equations as it can be, and lets it be read over any ring.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, field
from fractions import Fraction
from functools import singledispatch
from typing import Any

from derive.check.excitation import Excitation
from derive.devices.elements import (
    Capacitor,
    Coupling,
    CurrentGain,
    Element,
    Inductor,
    OnePoleGain,
    Resistor,
    SmallSignal,
    Transconductance,
    Transresistance,
    VirtualShort,
    VoltageDrive,
    VoltageGain,
)
from derive.topology.topology import GROUND

Column = tuple[str, str]
Value = Any  # an element of whichever ring the caller computes in: int, Fraction, float


@dataclass(slots=True)
class Tableau:
    """(constant + s·rising) · x = right, for an input of 1; `wanted` picks the response out of x.

    `columns` names the unknowns: ("node", name) or ("branch", element). The entries of the two
    matrices are held by (row, column); those of `right` by row; those of `wanted` by column.
    """

    columns: dict[Column, int] = field(default_factory=dict)
    meanings: list[str] = field(default_factory=list)
    constant: dict[tuple[int, int], Value] = field(default_factory=dict)
    rising: dict[tuple[int, int], Value] = field(default_factory=dict)
    right: dict[int, Fraction] = field(default_factory=dict)
    wanted: dict[int, int] = field(default_factory=dict)

    @property
    def size(self) -> int:
        """The number of unknowns, which is the number of rows."""
        return len(self.columns)

    def _row(self, meaning: str) -> int:
        self.meanings.append(meaning)
        return len(self.meanings) - 1

    def _add(self, row: int, kind: str, name: str, value: Value, *, times_s: bool = False) -> None:
        if kind == "node" and name == GROUND:
            return
        entries = self.rising if times_s else self.constant
        key = (row, self.columns[kind, name])
        entries[key] = entries[key] + value if key in entries else value

    def _add_voltage(
        self, row: int, pair: tuple[str, str], value: Value, *, times_s: bool = False
    ) -> None:
        self._add(row, "node", pair[0], value, times_s=times_s)
        self._add(row, "node", pair[1], -value, times_s=times_s)


def terminals(element: Any) -> tuple[str, str] | None:
    """Give the nodes between which the element's own current is counted; None where it has none."""
    for name in ("between", "flows", "nodes"):
        if hasattr(element, name):
            pair: tuple[str, str] = getattr(element, name)
            return pair
    output = getattr(element, "output", None)
    if isinstance(output, str):
        return output, GROUND
    return output


def _sensed_nodes(element: Any) -> tuple[str, ...]:
    senses = getattr(element, "senses", ())
    return () if isinstance(senses, str) else tuple(senses)


def node_names(circuit: SmallSignal, excitation: Excitation) -> list[str]:
    """Give every node but ground, in the order in which the circuit names them."""
    seen: dict[str, None] = {}
    for item in (*circuit.elements, *circuit.drives):
        for node in (
            *(terminals(item) or ()),
            *_sensed_nodes(item),
            *getattr(item, "inputs", ()),
        ):
            seen[node] = None
    for node in excitation.nodes or ():
        seen[node] = None
    seen.pop(GROUND, None)
    return list(seen)


def assemble(circuit: SmallSignal, excitation: Excitation, value_of: Callable[[str], Value]) -> Tableau:
    """Write the circuit's tableau with the values that `value_of` gives for its symbols.

    Raises: KeyError where an element refers to another that is not there.
    """
    tableau = Tableau()
    for node in node_names(circuit, excitation):
        tableau.columns["node", node] = len(tableau.columns)
    branches: list[tuple[str, tuple[str, str]]] = []
    for item in (*circuit.elements, *circuit.drives):
        pair = terminals(item)
        if pair is not None:
            branches.append((item.name, pair))
    if excitation.test_nodes is not None:
        branches.append((excitation.input, excitation.test_nodes))
    for name, _ in branches:
        if ("branch", name) in tableau.columns:
            raise KeyError(f"two elements are called {name}")
        tableau.columns["branch", name] = len(tableau.columns)
    _current_laws(tableau, branches)
    for element in circuit.elements:
        if isinstance(element, Coupling):
            continue
        _law(element, tableau, tableau._row(f"law of {element.name}"), value_of)
    for element in circuit.elements:
        if isinstance(element, Coupling):
            _couple(tableau, element, value_of)
    _drive_rows(tableau, circuit, excitation)
    _want(tableau, circuit, excitation)
    return tableau


def _current_laws(tableau: Tableau, branches: list[tuple[str, tuple[str, str]]]) -> None:
    rows = {
        name: tableau._row(f"currents at node {name}") for kind, name in tableau.columns if kind == "node"
    }
    for name, (first, second) in branches:
        if first == second:
            continue
        if first in rows:
            tableau._add(rows[first], "branch", name, 1)
        if second in rows:
            tableau._add(rows[second], "branch", name, -1)


def _couple(tableau: Tableau, coupling: Coupling, value_of: Callable[[str], Value]) -> None:
    mutual = value_of(coupling.mutual)
    for own, other in (coupling.coils, coupling.coils[::-1]):
        row = tableau.meanings.index(f"law of {own}")
        tableau._add(row, "branch", other, -mutual, times_s=True)


def _drive_rows(tableau: Tableau, circuit: SmallSignal, excitation: Excitation) -> None:
    for drive in circuit.drives:
        row = tableau._row(f"drive {drive.name}")
        if isinstance(drive, VoltageDrive):
            tableau._add_voltage(row, drive.nodes, 1)
        else:
            tableau._add(row, "branch", drive.name, 1)
        tableau.right[row] = excitation.level(drive.name)
    if excitation.test_nodes is not None:
        row = tableau._row(f"test current {excitation.input}")
        tableau._add(row, "branch", excitation.input, 1)
        tableau.right[row] = Fraction(1)


def _want(tableau: Tableau, circuit: SmallSignal, excitation: Excitation) -> None:
    if excitation.nodes is None:
        name = excitation.branch_of_part(circuit)
        tableau.wanted[tableau.columns["branch", name]] = 1
        return
    for node, sign in zip(excitation.nodes, (1, -1), strict=True):
        if node != GROUND:
            column = tableau.columns["node", node]
            tableau.wanted[column] = tableau.wanted.get(column, 0) + sign


@singledispatch
def _law(element: Element, tableau: Tableau, row: int, value_of: Callable[[str], Value]) -> None:
    raise KeyError(f"no law is known here for {type(element).__name__}")


@_law.register
def _(element: Resistor, tableau: Tableau, row: int, value_of: Callable[[str], Value]) -> None:
    tableau._add_voltage(row, element.between, 1)
    tableau._add(row, "branch", element.name, -value_of(element.resistance))


@_law.register
def _(element: Capacitor, tableau: Tableau, row: int, value_of: Callable[[str], Value]) -> None:
    capacitance = value_of(element.capacitance)
    tableau._add_voltage(row, element.between, capacitance, times_s=True)
    tableau._add(row, "branch", element.name, -1)


@_law.register
def _(element: Inductor, tableau: Tableau, row: int, value_of: Callable[[str], Value]) -> None:
    tableau._add_voltage(row, element.between, 1)
    tableau._add(row, "branch", element.name, -value_of(element.inductance), times_s=True)


@_law.register
def _(element: Transconductance, tableau: Tableau, row: int, value_of: Callable[[str], Value]) -> None:
    tableau._add(row, "branch", element.name, 1)
    tableau._add_voltage(row, element.senses, -value_of(element.transconductance))


@_law.register
def _(element: VoltageGain, tableau: Tableau, row: int, value_of: Callable[[str], Value]) -> None:
    tableau._add_voltage(row, element.output, 1)
    tableau._add_voltage(row, element.senses, -value_of(element.gain))


@_law.register
def _(element: CurrentGain, tableau: Tableau, row: int, value_of: Callable[[str], Value]) -> None:
    tableau._add(row, "branch", element.name, 1)
    tableau._add(row, "branch", element.senses, -value_of(element.gain))


@_law.register
def _(element: Transresistance, tableau: Tableau, row: int, value_of: Callable[[str], Value]) -> None:
    tableau._add_voltage(row, element.output, 1)
    tableau._add(row, "branch", element.senses, -value_of(element.transresistance))


@_law.register
def _(element: VirtualShort, tableau: Tableau, row: int, value_of: Callable[[str], Value]) -> None:
    tableau._add_voltage(row, element.inputs, 1)


@_law.register
def _(element: OnePoleGain, tableau: Tableau, row: int, value_of: Callable[[str], Value]) -> None:
    # Both sides times w_u and (1 + s·A_0/w_u), so that nothing is divided.
    dc_gain = None if element.dc_gain is None else value_of(element.dc_gain)
    unity = None if element.unity is None else value_of(element.unity)
    output = (element.output, GROUND)
    if unity is None:
        tableau._add_voltage(row, output, 1)
        tableau._add_voltage(row, element.inputs, -1 if dc_gain is None else -dc_gain)
    elif dc_gain is None:
        tableau._add_voltage(row, output, 1, times_s=True)
        tableau._add_voltage(row, element.inputs, -unity)
    else:
        tableau._add_voltage(row, output, unity)
        tableau._add_voltage(row, output, dc_gain, times_s=True)
        tableau._add_voltage(row, element.inputs, -(dc_gain * unity))
