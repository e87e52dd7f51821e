"""Random stages with random assumptions, and their errors worked from matrices that are stamped here alone.

Nothing of the package is used to work them: a file's lines are drawn here, the equations are stamped from
them with SymPy (for what is struck) and with numpy (for what is removed), and the rule for what is struck is
the one that the sheet states, written anew.
"""

from __future__ import annotations

import itertools
import random
from dataclasses import dataclass

import numpy as np
import sympy

VALUES = {
    "R": ("47R", "330R", "1k", "4k7", "22k", "150k", "1M"),
    "C": ("3p3", "47p", "1n", "22n", "470n"),
    "g": ("2 mS", "10 mS", "40 mS"),
}
NUMBERS = {
    **{"47R": 47.0, "330R": 330.0, "1k": 1e3, "4k7": 4.7e3, "22k": 22e3, "150k": 150e3, "1M": 1e6},
    **{"3p3": 3.3e-12, "47p": 47e-12, "1n": 1e-9, "22n": 22e-9, "470n": 470e-9},
    **{"2 mS": 2e-3, "10 mS": 10e-3, "40 mS": 40e-3},
}


@dataclass(frozen=True)
class Stage:
    """A drawn stage: (name, nodes, value) of every part, and (form, left, right) of every assumption.

    A part of four nodes is a transconductance: its current leaves the first and enters the second.
    """

    parts: tuple[tuple[str, tuple[str, ...], str], ...]
    assumptions: tuple[tuple[str, str, str], ...]

    @property
    def text(self) -> str:
        lines = ['[sheet]\ntitle = "Drawn stage"\n[drives]\nV_s = { voltage = ["n0", "gnd"] }\n[parts]']
        for name, nodes, value in self.parts:
            if len(nodes) == 4:
                entries = (
                    f'transconductance = "{value}", flows = ["{nodes[0]}", "{nodes[1]}"], '
                    f'senses = ["{nodes[2]}", "{nodes[3]}"]'
                )
            else:
                kind = "resistor" if name[0] == "R" else "capacitor"
                entries = f'{kind} = "{value}", between = ["{nodes[0]}", "{nodes[1]}"]'
            lines.append(f"{name} = {{ {entries} }}")
        lines += ['[find.H]\nvoltage = "n2"\nper = "V_s"', '[budget]\nrange = ["10 Hz", "10 MHz"]']
        for form, left, right in self.assumptions:
            that = f"{left} -> {right}" if form == "->" else f"{left} {form} {right}"
            lines.append(f'[[assume]]\nthat = "{that}"')
        return "\n".join(lines) + "\n"

    @property
    def values(self) -> dict[str, float]:
        return {name: NUMBERS[value] for name, _, value in self.parts}


def draw(chance: random.Random) -> Stage:
    """Draw a stage of three or four nodes whose answer is at node n2."""
    nodes = ["n1", "n2", *(["n3"] if chance.random() < 0.5 else [])]
    parts: list[tuple[str, tuple[str, ...], str]] = []
    counts = {"R": 0, "C": 0, "g": 0}

    def put(letter: str, *between: str) -> None:
        counts[letter] += 1
        parts.append((f"{letter}_{counts[letter]}", between, chance.choice(VALUES[letter])))

    chain = ["n0", *nodes]
    for before, node in itertools.pairwise(chain):
        put("R", before, node)
        put(chance.choice("RC"), node, "gnd")
    for _ in range(chance.randint(0, 2)):
        put(chance.choice("RCC"), *chance.sample([*chain, "gnd"], 2))
    if chance.random() < 0.6:
        put("g", chance.choice(nodes), "gnd", "n1", "gnd")
    names = [name for name, _, _ in parts]
    made = tuple(_assumption(chance, names) for _ in range(chance.randint(1, 3)))
    return Stage(tuple(parts), made)


def _assumption(chance: random.Random, names: list[str]) -> tuple[str, str, str]:
    resistors = [name for name in names if name[0] == "R"]
    gains = [name for name in names if name[0] == "g"]
    kind = chance.choice((">>", ">>", "<<", "->", "->", "=", "g"))
    if kind == "g" and gains:
        return ">>", f"{gains[0]}*{chance.choice(resistors)}", "1"
    if kind == "->":
        name = chance.choice(names)
        return "->", name, "0" if name[0] == "g" else chance.choice(("0", "inf"))
    if kind == "g" or len(resistors) < 2:
        return "->", chance.choice(resistors), "inf"
    one, other = chance.sample(resistors, 2)
    return kind, one, other


def symbolic(stage: Stage) -> tuple[sympy.Expr, dict[str, sympy.Symbol]]:
    """Give the response in symbols, by Cramer's rule on the stamped matrix."""
    s = sympy.Symbol("s")
    symbols = {name: sympy.Symbol(name, positive=True) for name, _, _ in stage.parts} | {"s": s}
    nodes = sorted({node for _, own, _ in stage.parts for node in own} - {"gnd", "n0"})
    matrix, right = sympy.zeros(len(nodes)), sympy.zeros(len(nodes), 1)

    def stamp(row: str, column: str, value: sympy.Expr) -> None:
        if row in nodes and column in nodes:
            matrix[nodes.index(row), nodes.index(column)] += value
        elif row in nodes and column == "n0":
            right[nodes.index(row)] -= value

    for name, own, _ in stage.parts:
        if len(own) == 4:
            for row, sign in ((own[0], 1), (own[1], -1)):
                stamp(row, own[2], sign * symbols[name])
                stamp(row, own[3], -sign * symbols[name])
            continue
        y = 1 / symbols[name] if name[0] == "R" else s * symbols[name]
        for row, other in (own, own[::-1]):
            stamp(row, row, y)
            stamp(row, other, -y)
    replaced = matrix.copy()
    replaced[:, nodes.index("n2")] = right
    return sympy.cancel(replaced.det(method="berkowitz") / matrix.det(method="berkowitz")), symbols


def reduce(
    response: sympy.Expr, symbols: dict[str, sympy.Symbol], assumption: tuple[str, str, str]
) -> sympy.Expr:
    """Make one assumption on a response, by the rules that the sheet states."""
    form, left, right = assumption
    if form == "->":
        x = symbols[left]
        return sympy.cancel(sympy.limit(response, x, sympy.oo if right == "inf" else 0))
    if form == "=":
        return sympy.cancel(response.subs(symbols[left], symbols[right]))
    if form == "<<":
        left, right = right, left
    product = sympy.prod(symbols[name] for name in left.split("*"))
    small = sympy.Integer(1) if right == "1" else symbols[right]
    order = list(symbols.values())
    sides = []
    for side in sympy.fraction(sympy.cancel(response)):
        terms = dict(sympy.Poly(sympy.expand(side), *order).terms())
        big = sympy.Poly(product, *order).monoms()[0]
        little = sympy.Poly(small, *order).monoms()[0]
        kept = {}
        for powers, value in terms.items():
            rest = tuple(p - q for p, q in zip(powers, little, strict=True))
            partner = tuple(p + q for p, q in zip(rest, big, strict=True))
            if min(rest) < 0 or partner not in terms:
                kept[powers] = value
        sides.append(sympy.Poly(kept, *order).as_expr())
    return sympy.cancel(sides[0] / sides[1])


def polynomials(response: sympy.Expr, stage: Stage) -> tuple[list[float], list[float]]:
    """Give the coefficients of numerator and denominator by falling power of s, at the values."""
    s = sympy.Symbol("s")
    values = {
        sympy.Symbol(name, positive=True): sympy.Rational(repr(value))
        for name, value in stage.values.items()
    }
    # Side by side, so that what cancels at these values only stays in both.
    above, below = (sympy.Poly(side.subs(values), s) for side in sympy.fraction(response))
    return [float(c) for c in above.all_coeffs()], [float(c) for c in below.all_coeffs()]


def worst_errors(
    reduced: tuple[list[float], list[float]],
    exact: tuple[list[float], list[float]],
    low: float,
    high: float,
) -> tuple[float, float]:
    """Give the largest errors in dB and degrees of 8,001 frequencies."""
    s = 2j * np.pi * np.geomspace(low, high, 8_001)
    error = np.polyval(reduced[0], s) / np.polyval(reduced[1], s)
    error *= np.polyval(exact[1], s) / np.polyval(exact[0], s)
    magnitude, phase = 20 * np.log10(np.abs(error)), np.degrees(np.angle(error))
    return magnitude[np.argmax(np.abs(magnitude))], phase[np.argmax(np.abs(phase))]


def removed_response(stage: Stage, gone: dict[str, str], frequencies: np.ndarray) -> np.ndarray:
    """Solve the stage in numbers with parts taken out ("inf" for a resistor) or shorted, by a tableau.

    A short is a branch of its own that holds no voltage; parts of no effect are not stamped.
    """
    nodes = sorted({node for _, own, _ in stage.parts for node in own} - {"gnd"})
    shorts = [
        own
        for name, own, _ in stage.parts
        if len(own) == 2 and gone.get(name) == ("0" if name[0] == "R" else "inf")
    ]
    size = len(nodes) + 1 + len(shorts)
    found = []
    for frequency in frequencies:
        s = 2j * np.pi * frequency
        matrix, right = np.zeros((size, size), dtype=complex), np.zeros(size, dtype=complex)

        def add(row: str, column: str, value: complex, matrix: np.ndarray = matrix) -> None:
            if row != "gnd" and column != "gnd":
                matrix[nodes.index(row), nodes.index(column)] += value

        for name, own, value in stage.parts:
            if name in gone:
                continue
            number = NUMBERS[value]
            if len(own) == 4:
                for row, sign in ((own[0], 1), (own[1], -1)):
                    add(row, own[2], sign * number)
                    add(row, own[3], -sign * number)
                continue
            y = 1 / number if name[0] == "R" else s * number
            for row, other in (own, own[::-1]):
                add(row, row, y)
                add(row, other, -y)
        for place, own in enumerate([("n0", "gnd"), *shorts], start=len(nodes)):
            for node, sign in zip(own, (1, -1), strict=True):
                if node != "gnd":
                    matrix[nodes.index(node), place] += sign
                    matrix[place, nodes.index(node)] += sign
        right[len(nodes)] = 1
        solution = np.linalg.lstsq(matrix, right, rcond=None)[0]
        found.append(solution[nodes.index("n2")])
    return np.array(found)
