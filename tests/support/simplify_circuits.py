"""Circuits for the tests of simplification, and their responses by a road of their own.

The responses are solved here from the lines of the topology by plain nodal analysis, a voltage drive at node
"in" and the response at node "out"; nothing of the package's numerics is used.
"""

from __future__ import annotations

import numpy as np

from derive.devices.linearise import linearise
from derive.reading.read import parse

DRIVE = 'V_s = { voltage = ["in", "gnd"] }'


def circuit_from(parts):
    """Linearise a circuit of tuples: (name, value, a, b), and (name, value, a, b, p, m) for a g_m."""
    lines = []
    for name, value, *nodes in parts:
        if name.startswith("g"):
            words = f'transconductance = "{value!r} S", flows = {_pair(nodes[:2])}, senses = {_pair(nodes[2:])}'
        elif name.startswith("C"):
            words = f'capacitor = "{value!r} F", between = {_pair(nodes)}'
        elif name.startswith("L"):
            words = f'inductor = "{value!r} H", between = {_pair(nodes)}'
        else:
            words = f'resistor = "{value!r} ohm", between = {_pair(nodes)}'
        lines.append(f"{name} = {{ {words} }}")
    text = (
        f"[sheet]\ntitle = 'Test'\n[drives]\n{DRIVE}\n[parts]\n"
        + "\n".join(lines)
        + '\n[find.A_v]\nvoltage = "out"\nper = "V_s"\n'
    )
    return linearise(parse(text, "test.toml"))


def _pair(nodes):
    return f'["{nodes[0]}", "{nodes[1]}"]'


def solved(parts, samples):
    """Give the voltage at "out" for 1 V at "in", at values of s, by nodal analysis."""
    nodes = []
    for _, _, *ends in parts:
        nodes += [node for node in ends if node not in ("gnd", "in") and node not in nodes]
    place = {node: index for index, node in enumerate(nodes)}
    found = []
    for s in np.atleast_1d(samples):
        matrix = np.zeros((len(nodes), len(nodes)), dtype=complex)
        right = np.zeros(len(nodes), dtype=complex)
        for name, value, a, b, *sensed in parts:
            admittance = {"C": s * value, "g": value, "L": 1 / (s * value) if s else np.inf}.get(
                name[0], 1 / value
            )
            p, m = sensed or (a, b)
            for row, one in ((a, 1), (b, -1)):
                for column, other in ((p, 1), (m, -1)):
                    if row not in place:
                        continue
                    if column == "in":
                        right[place[row]] -= one * other * admittance
                    elif column in place:
                        matrix[place[row], place[column]] += one * other * admittance
        found.append(np.linalg.solve(matrix, right)[place["out"]])
    return np.array(found)


def poles_of(parts):
    """Give all natural frequencies, as eigenvalues of the nodal matrices, by rising size."""
    nodes = []
    for _, _, *ends in parts:
        nodes += [node for node in ends if node not in ("gnd", "in") and node not in nodes]
    place = {node: index for index, node in enumerate(nodes)}
    constant, rising = np.zeros((2, len(nodes), len(nodes)))
    for name, value, a, b, *sensed in parts:
        table = rising if name[0] == "C" else constant
        entry = value if name[0] in "Cg" else 1 / value
        p, m = sensed or (a, b)
        for row, one in ((a, 1), (b, -1)):
            for column, other in ((p, 1), (m, -1)):
                if row in place and column in place:
                    table[place[row], place[column]] += one * other * entry
    inverse = np.linalg.eigvals(np.linalg.solve(constant, rising))
    kept = inverse[np.abs(inverse) > 1e-9 * np.abs(inverse).max()]
    return sorted((-1 / kept).tolist(), key=abs)


def random_parts(chance):
    """Draw a solvable circuit of resistors, capacitors and transconductances, 3 to 6 nodes."""
    nodes = ["in", *(f"n{k}" for k in range(1, chance.randint(1, 4) + 1)), "out"]
    parts = []
    count = {"R": 0, "C": 0, "g_m": 0}

    def add(letter, value, *ends):
        count[letter] += 1
        parts.append((f"{letter}{count[letter]}", float(f"{value:.3g}"), *ends))

    for index, node in enumerate(nodes[1:], 1):
        add("R", 10 ** chance.uniform(2, 5), nodes[chance.randrange(index)], node)
        if chance.random() < 0.7:
            add("R", 10 ** chance.uniform(3, 6.5), node, "gnd")
        if chance.random() < 0.8:
            add("C", 10 ** chance.uniform(-12, -9), node, "gnd")
    for _ in range(chance.randint(1, 6)):
        letter = chance.choice(["R", "C", "g_m"])
        if letter == "g_m":
            a, b = chance.choice(nodes[1:]), chance.choice(nodes)
            add("g_m", 10 ** chance.uniform(-5, -2), a, "gnd", b, "gnd")
            continue
        a, b = chance.sample([*nodes, "gnd"], 2)
        if {a, b} != {"in", "gnd"}:
            low, high = (3, 7) if letter == "R" else (-13, -10)
            add(letter, 10 ** chance.uniform(low, high), a, b)
    return parts
