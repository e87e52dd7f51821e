"""Node voltages and branch currents modulo a prime, from the topology file's own words.

It reads the TOML afresh, writes the laws of the interface contract row by row, and eliminates. It uses
nothing of the package under test.
"""

from __future__ import annotations

import tomllib
from collections.abc import Mapping
from fractions import Fraction
from typing import Any

from ledger_arithmetic import PRIME, modular_root

Form = dict[str, int]
PARAMETERS = {"A_0": "A_0", "f_unity": "w_u", "w_unity": "w_u", "R_in": "R_in", "R_out": "R_out"}


def inverse(value: int) -> int:
    """Give the reciprocal modulo the prime."""
    return pow(value, -1, PRIME)


class Circuit:
    """One topology, ready to be solved at any values."""

    def __init__(self, text: str) -> None:
        self.data = tomllib.loads(text)
        self.drives: dict[str, dict[str, Any]] = self.data.get("drives", {})
        self.parts: dict[str, dict[str, Any]] = self.data["parts"]
        self.finds: dict[str, dict[str, Any]] = self.data["find"]
        self.opamps = [name for name, part in self.parts.items() if "opamp" in part]

    def symbols(self) -> list[str]:
        """Give the name of every value in the circuit."""
        names: list[str] = []
        for name, part in self.parts.items():
            if "opamp" in part:
                names += [self.opamp_symbol(name, PARAMETERS[key]) for key in part if key in PARAMETERS]
            elif "ideal_opamp" not in part:
                names.append(name)
        return names

    def coils(self) -> list[str]:
        """Give the names of the inductors."""
        return [name for name, part in self.parts.items() if "inductor" in part]

    def opamp_symbol(self, name: str, symbol: str) -> str:
        """Give an op amp's symbol: without index where it is the one op amp of its kind."""
        return symbol if len(self.opamps) == 1 else symbol + name[1:]

    def solve(self, values: Mapping[str, int], s: int) -> dict[str, int] | None:
        """Give the value of every find; None where the equations have no unique solution."""
        laws = Laws(self, values, s)
        return laws.solve()


class Laws:
    """The equations of one circuit at one point."""

    def __init__(self, circuit: Circuit, values: Mapping[str, int], s: int) -> None:
        self.circuit, self.values, self.s = circuit, values, s
        self.leaving: dict[str, Form] = {}
        self.rows: list[tuple[Form, dict[str, int]]] = []
        self.mutual: list[tuple[str, str, int]] = []
        for name, part in circuit.parts.items():
            if "coupling" in part:
                first, second = part["coils"]
                root = modular_root(values[first] * values[second] % PRIME)
                self.mutual.append((first, second, values[name] * root % PRIME))
        for name, drive in circuit.drives.items():
            self.drive(name, drive)
        for name, part in circuit.parts.items():
            self.part(name, part)

    def between(self, plus: str, minus: str, factor: int = 1) -> Form:
        """Give factor times the voltage between two nodes, as a form in the unknowns."""
        form: Form = {}
        add(form, {f"v {plus}": factor, f"v {minus}": -factor})
        form.pop("v gnd", None)
        return form

    def flows(self, first: str, second: str, current: Form) -> None:
        """Let a current leave the first node and enter the second."""
        add(self.leaving.setdefault(first, {}), current)
        add(self.leaving.setdefault(second, {}), current, -1)

    def branch(self, name: str, first: str, second: str, law: Form) -> None:
        """Give a branch a current of its own, and the law that settles it."""
        self.flows(first, second, {f"i {name}": 1})
        self.rows.append((law, {}))

    def drive(self, name: str, drive: Mapping[str, Any]) -> None:
        """Write an independent source."""
        if "voltage" in drive:
            plus, minus = drive["voltage"]
            self.flows(plus, minus, {f"i {name}": 1})
            self.rows.append((self.between(plus, minus), {name: 1}))
        else:
            for node in drive["current"]:
                self.leaving.setdefault(node, {})

    def part(self, name: str, part: Mapping[str, Any]) -> None:
        """Write one part's law."""
        if "resistor" in part or "capacitor" in part:
            self.flows(*part["between"], self.current(name))
        elif "transconductance" in part:
            self.flows(*part["flows"], self.current(name))
        elif "inductor" in part:
            self.inductor(name, part)
        elif "voltage_gain" in part:
            law = self.between(*part["output"])
            add(law, self.between(*part["senses"], self.values[name]), -1)
            self.branch(name, *part["output"], law)
        elif "current_gain" in part:
            law = {f"i {name}": 1}
            add(law, self.current(part["senses"]), -self.values[name])
            self.branch(name, *part["flows"], law)
        elif "transresistance" in part:
            law = self.between(*part["output"])
            add(law, self.current(part["senses"]), -self.values[name])
            self.branch(name, *part["output"], law)
        elif "ideal_opamp" in part:
            self.branch(name, part["output"], "gnd", self.between(*part["inputs"]))
        elif "opamp" in part:
            self.opamp(name, part)

    def inductor(self, name: str, part: Mapping[str, Any]) -> None:
        """Write V = s·L·I, with s·M·I of every coil that it is coupled to."""
        law = self.between(*part["between"])
        add(law, {f"i {name}": -self.s * self.values[name]})
        for first, second, mutual in self.mutual:
            if name in (first, second):
                other = second if name == first else first
                add(law, {f"i {other}": -self.s * mutual})
        self.branch(name, *part["between"], law)

    def opamp(self, name: str, part: Mapping[str, Any]) -> None:
        """Write an op amp of one pole, with its resistances."""
        values = {
            key: self.values[self.circuit.opamp_symbol(name, symbol)]
            for key, symbol in PARAMETERS.items()
            if key in part
        }
        unity = values.get("f_unity", values.get("w_unity"))
        inner = part["output"]
        if "R_in" in values:
            plus, minus = part["inputs"]
            self.flows(plus, minus, self.between(plus, minus, inverse(values["R_in"])))
        if "R_out" in values:
            inner = f"inside {name}"
            through = self.between(inner, part["output"], inverse(values["R_out"]))
            self.flows(inner, part["output"], through)
        gain = values.get("A_0")
        if gain is None and unity is None:
            law = self.between(*part["inputs"])
        elif gain is None:
            law = self.between(inner, "gnd", self.s)
            add(law, self.between(*part["inputs"], unity), -1)
        else:
            loss = 1 if unity is None else 1 + self.s * gain * inverse(unity)
            law = self.between(inner, "gnd", loss)
            add(law, self.between(*part["inputs"], gain), -1)
        self.branch(name, inner, "gnd", law)

    def current(self, name: str) -> Form:
        """Give the current of a part from its first node to its second, in the unknowns."""
        part = self.circuit.parts.get(name, {})
        if "resistor" in part:
            return self.between(*part["between"], inverse(self.values[name]))
        if "capacitor" in part:
            return self.between(*part["between"], self.s * self.values[name])
        if "transconductance" in part:
            return self.between(*part["senses"], self.values[name])
        return {f"i {name}": 1}

    def solve(self) -> dict[str, int] | None:
        """Eliminate once, for the drives of every find together."""
        finds = self.circuit.finds
        excitations = [self.excitation(find) for find in finds.values()]
        nodes = [node for node in self.leaving if node != "gnd"]
        matrix: list[tuple[Form, list[int]]] = []
        for node in nodes:
            matrix.append((dict(self.leaving[node]), [into.get(node, 0) for into, _ in excitations]))
        for law, driven in self.rows:
            right = [
                sum(weights.get(drive, 0) * factor for drive, factor in driven.items())
                for _, weights in excitations
            ]
            matrix.append((dict(law), right))
        solved = eliminate(matrix)
        if solved is None:
            return None
        return {
            name: sum(factor * solved[unknown][index] for unknown, factor in self.sought(find).items())
            % PRIME
            for index, (name, find) in enumerate(finds.items())
        }

    def excitation(self, find: Mapping[str, Any]) -> tuple[dict[str, int], dict[str, int]]:
        """Give the current driven into each node, and the value of each voltage drive."""
        into: dict[str, int] = {}
        if "impedance" in find:
            plus, minus = pair(find["impedance"])
            add(into, {plus: 1, minus: -1})
            return into, {}
        per = find["per"]
        weights = {per: "1"} if isinstance(per, str) else per
        values = {name: residue(weight) for name, weight in weights.items()}
        for name, value in values.items():
            if "current" in self.circuit.drives[name]:
                first, second = self.circuit.drives[name]["current"]
                add(into, {first: -value, second: value})
        return into, values

    def sought(self, find: Mapping[str, Any]) -> Form:
        """Give what a find asks for as a form in the unknowns."""
        if "current" in find:
            return self.current(find["current"])
        return self.between(*pair(find.get("voltage", find.get("impedance"))))


def pair(nodes: Any) -> tuple[str, str]:
    """Give two nodes; a single one is taken against ground."""
    return (nodes, "gnd") if isinstance(nodes, str) else (nodes[0], nodes[1])


def residue(ratio: str) -> int:
    """Give a ratio's image modulo the prime."""
    value = Fraction(ratio)
    return value.numerator * inverse(value.denominator) % PRIME


def add(form: Form, other: Mapping[str, int], factor: int = 1) -> None:
    """Add a multiple of one form to another, in place."""
    for name, value in other.items():
        form[name] = (form.get(name, 0) + factor * value) % PRIME


def eliminate(matrix: list[tuple[Form, list[int]]]) -> dict[str, list[int]] | None:
    """Solve square equations by Gauss and Jordan; None where the determinant is zero."""
    unknowns = list(dict.fromkeys(name for form, _ in matrix for name in form))
    rows = [([form.get(name, 0) for name in unknowns], list(right)) for form, right in matrix]
    if len(unknowns) != len(rows):
        return None
    size = len(rows)
    for column in range(size):
        pivot = next((row for row in range(column, size) if rows[row][0][column]), None)
        if pivot is None:
            return None
        rows[column], rows[pivot] = rows[pivot], rows[column]
        scale = inverse(rows[column][0][column])
        left = [value * scale % PRIME for value in rows[column][0]]
        right = [value * scale % PRIME for value in rows[column][1]]
        rows[column] = (left, right)
        for row in range(size):
            factor = rows[row][0][column]
            if row == column or not factor:
                continue
            rows[row] = (
                [(a - factor * b) % PRIME for a, b in zip(rows[row][0], left, strict=True)],
                [(a - factor * b) % PRIME for a, b in zip(rows[row][1], right, strict=True)],
            )
    return {name: rows[index][1] for index, name in enumerate(unknowns)}
