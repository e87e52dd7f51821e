"""Random RC-and-transconductance circuits, with their node equations written down beside them.

The matrices are stamped here from the drawn list alone, so that they owe nothing to the package.
"""

from __future__ import annotations

import random
from dataclasses import dataclass
from fractions import Fraction

Matrix = list[list[Fraction]]


@dataclass(frozen=True)
class Stage:
    """Parts as (kind, name, nodes...): node 0 is ground, node 1 is driven, all further ones are free."""

    nodes: int
    parts: tuple[tuple[str, str, tuple[int, ...]], ...]

    @property
    def text(self) -> str:
        """The stage as a topology file, with nominal values of unlike size."""
        lines = []
        for count, (kind, name, at) in enumerate(self.parts, 1):
            words = [f'"{"gnd" if node == 0 else f"n{node}"}"' for node in at]
            if kind == "R":
                lines.append(
                    f'{name} = {{ resistor = "{count * 370} ohm", between = [{", ".join(words)}] }}'
                )
            elif kind == "C":
                lines.append(
                    f'{name} = {{ capacitor = "{count * 13} pF", between = [{", ".join(words)}] }}'
                )
            else:
                flows, senses = ", ".join(words[:2]), ", ".join(words[2:])
                value = f'transconductance = "{count} mS"'
                lines.append(f"{name} = {{ {value}, flows = [{flows}], senses = [{senses}] }}")
        drive = 'V_s = { voltage = ["n1", "gnd"] }'
        find = f'[find.H]\nvoltage = "n{self.nodes - 1}"\nper = "V_s"'
        return "\n".join(['[sheet]\ntitle = "Stage"\n[drives]', drive, "[parts]", *lines, find, ""])

    @property
    def capacitors(self) -> list[tuple[str, tuple[int, ...]]]:
        return [(name, at) for kind, name, at in self.parts if kind == "C"]

    def matrices(self, values: dict[str, Fraction]) -> tuple[Matrix, Matrix]:
        """Give G and C of G·v + s·C·v = i for the free nodes, the driven one at zero."""
        size = self.nodes - 2
        conductances, capacitances = ([[Fraction(0)] * size for _ in range(size)] for _ in "GC")
        for kind, name, at in self.parts:
            if kind == "C":
                add(capacitances, at, at, values[name])
            else:
                value = 1 / values[name] if kind == "R" else values[name]
                add(conductances, at[:2], at[-2:], value)
        return conductances, capacitances


def add(matrix: Matrix, flows, senses, value: Fraction) -> None:
    """Add a current `value` times the voltage sensed, from the first node of `flows` to the second."""
    for node, leaves in zip(flows, (1, -1), strict=True):
        for sensed, sign in zip(senses, (1, -1), strict=True):
            if node >= 2 and sensed >= 2:
                matrix[node - 2][sensed - 2] += leaves * sign * value


def random_stage(chance: random.Random) -> Stage:
    """Draw a stage: every free node has a resistor towards ground's side, so that DC finds its way."""
    nodes = chance.choice((3, 4, 4, 5))
    parts: list[tuple[str, str, tuple[int, ...]]] = []
    for node in range(2, nodes):
        parts.append(("R", f"R_{len(parts) + 1}", (chance.randrange(node), node)))
    for _ in range(chance.randint(0, 1)):
        parts.append(("R", f"R_{len(parts) + 1}", _pair(chance, nodes)))
    for _ in range(chance.choice((1, 2, 2, 3, 3, 4))):
        parts.append(("C", f"C_{len(parts) + 1}", _pair(chance, nodes)))
    for _ in range(chance.randint(0, 2)):
        parts.append(("g", f"g_{len(parts) + 1}", (*_pair(chance, nodes), *_pair(chance, nodes))))
    return Stage(nodes, tuple(parts))


def _pair(chance: random.Random, nodes: int) -> tuple[int, int]:
    # Not both on the driven node and ground: such a part would only load the drive.
    while True:
        first, second = chance.sample(range(nodes), 2)
        if max(first, second) >= 2:
            return first, second


def determinant(matrix: Matrix) -> Fraction:
    """Give the determinant by elimination in exact rationals."""
    rows, total = [list(row) for row in matrix], Fraction(1)
    for column in range(len(rows)):
        pivot = next((k for k in range(column, len(rows)) if rows[k][column]), None)
        if pivot is None:
            return Fraction(0)
        if pivot != column:
            rows[column], rows[pivot], total = rows[pivot], rows[column], -total
        total *= rows[column][column]
        for row in rows[column + 1 :]:
            factor = row[column] / rows[column][column]
            for place in range(column, len(rows)):
                row[place] -= factor * rows[column][place]
    return total


def characteristic(conductances: Matrix, capacitances: Matrix) -> list[Fraction]:
    """Give the coefficients of det(G + s·C), by rising powers, through whole values of s."""
    size = len(conductances)
    values = []
    for s in range(size + 1):
        rows = [
            [g + s * c for g, c in zip(*pair, strict=True)]
            for pair in zip(conductances, capacitances, strict=True)
        ]
        values.append(determinant(rows))
    return interpolated(values)


def interpolated(values: list[Fraction]) -> list[Fraction]:
    """Give the polynomial with these values at 0, 1, 2, … (Newton's divided differences)."""
    table = list(values)
    for width in range(1, len(table)):
        for place in range(len(table) - 1, width - 1, -1):
            table[place] = (table[place] - table[place - 1]) / width
    result = [Fraction(0)] * len(table)
    for place in reversed(range(len(table))):
        shifted = [Fraction(0), *result[:-1]]
        result = [a - place * b for a, b in zip(shifted, result, strict=True)]
        result[0] += table[place]
    return result


def seen(conductances: Matrix, at: tuple[int, ...]) -> Fraction:
    """Give the resistance between two nodes by Cramer's rule: a conductance ε between them adds ε·R·det."""
    more = [list(row) for row in conductances]
    add(more, at, at, Fraction(1))
    return determinant(more) / determinant(conductances) - 1
