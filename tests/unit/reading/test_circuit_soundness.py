"""No circuit with a unique solution is refused: random circuits against the rank of their equations.

The equations are written here anew, by modified nodal analysis over a prime field with random values
(a determinant that is not zero identically is zero there with a chance of about 1 in 10^18).
"""

from __future__ import annotations

import random

import pytest

from derive.errors import InputError
from derive.quantities.symbol import Value
from derive.reading.circuit import check_feedback, check_islands, check_loops
from derive.reading.document import Document
from derive.reading.lines import LineIndex
from derive.topology.topology import Drive, Part, Place, TitleBlock, Topology

PRIME = 2**61 - 1
PLACE = Place("a.toml", 1)
NODES = ("gnd", "a", "b", "c", "d", "e")
DOCUMENT = Document("a.toml", {}, LineIndex({}, ()))
OPEN = Value(None, "?")


def pair(rng, count):
    return tuple(rng.sample(NODES[: count + 1], 2))


def random_part(rng, name, count, earlier):
    kind = rng.choice(
        (
            *("resistor", "capacitor", "inductor", "transconductance", "transconductance"),
            *("voltage_gain", "current_gain", "transresistance", "ideal_opamp", "opamp"),
        )
    )
    sensed = None
    parameters: tuple[tuple[str, Value], ...] = ()
    if kind in ("resistor", "capacitor", "inductor"):
        wires = (("between", pair(rng, count)),)
    elif kind == "transconductance":
        wires = (("flows", pair(rng, count)), ("senses", pair(rng, count)))
    elif kind == "voltage_gain":
        wires = (("output", pair(rng, count)), ("senses", pair(rng, count)))
    elif kind in ("current_gain", "transresistance"):
        if not earlier:
            return random_part(rng, name, count, earlier)
        wires = (("flows" if kind == "current_gain" else "output", pair(rng, count)),)
        sensed = rng.choice(earlier)
    else:
        output = rng.choice(NODES[1 : count + 1])
        wires = (("output", (output,)), ("inputs", pair(rng, count)))
        if kind == "opamp":
            chosen = [key for key in ("R_in", "R_out") if rng.random() < 0.4]
            parameters = (("A_0", OPEN), *((key, OPEN) for key in chosen))
    return Part(name, kind, PLACE, OPEN, None, wires, sensed, None, parameters)


def random_topology(rng):
    count = rng.randint(2, 5)
    parts: list[Part] = []
    drives = ()
    if rng.random() < 0.7:
        quantity = rng.choice(("voltage", "voltage", "current"))
        drives = (Drive("V_1", PLACE, quantity, pair(rng, count)),)
    for number in range(rng.randint(2, 8)):
        carriers = [p.name for p in parts if p.kind not in ("ideal_opamp", "opamp")]
        carriers += [drive.name for drive in drives if drive.quantity == "voltage"]
        parts.append(random_part(rng, f"X_{number}", count, carriers))
    inductors = [p.name for p in parts if p.kind == "inductor"]
    if len(inductors) > 1:
        coils = (inductors[0], inductors[1])
        parts.append(Part("K_1", "coupling", PLACE, OPEN, coils=coils))
    return Topology("a.toml", "", TitleBlock("x"), (), drives, tuple(parts), ())


class Equations:
    """One row a node, then one row a branch whose current is an unknown of its own."""

    def __init__(self, topology, rng):
        self.rng = rng
        named = [node for drive in topology.drives for node in drive.nodes]
        named += [node for part in topology.parts for node in part.all_nodes]
        self.index = {node: i for i, node in enumerate(dict.fromkeys(named)) if node != "gnd"}
        self.index = {node: i for i, node in enumerate(self.index)}
        branches = [d.name for d in topology.drives if d.quantity == "voltage"]
        branches += [part.name for part in topology.parts if part.kind != "coupling"]
        self.branch = {name: len(self.index) + i for i, name in enumerate(branches)}
        size = len(self.index) + len(self.branch)
        self.rows = [[0] * size for _ in range(size)]
        for drive in topology.drives:
            if drive.quantity == "voltage":
                self.flow(drive.name, drive.nodes)
                self.across(self.branch[drive.name], drive.nodes, 1)
        self.coupled = next((p.coils for p in topology.parts if p.coils), None)
        for part in topology.parts:
            if part.kind != "coupling":
                self.part(part)

    def value(self):
        return self.rng.randrange(1, PRIME)

    def flow(self, name, nodes):
        for node, sign in zip(nodes, (1, -1), strict=True):
            if node in self.index:
                self.rows[self.index[node]][self.branch[name]] += sign

    def across(self, row, nodes, factor):
        for node, sign in zip(nodes, (factor, -factor), strict=True):
            if node in self.index:
                self.rows[row][self.index[node]] += sign

    def part(self, part):
        wires = dict(part.wires)
        row = self.branch[part.name]
        nodes = wires.get("between") or wires.get("flows") or wires["output"]
        if len(nodes) == 1:
            nodes = (nodes[0], "gnd")
        self.flow(part.name, nodes)
        if part.kind in ("resistor", "capacitor", "inductor"):
            self.across(row, nodes, 1)
            self.rows[row][row] += self.value()
            if self.coupled and part.name in self.coupled:
                other = next(name for name in self.coupled if name != part.name)
                self.rows[row][self.branch[other]] += 123456789
        elif part.kind == "transconductance":
            self.rows[row][row] += 1
            self.across(row, wires["senses"], self.value())
        elif part.kind == "voltage_gain":
            self.across(row, nodes, 1)
            self.across(row, wires["senses"], self.value())
        elif part.kind == "current_gain":
            self.rows[row][row] += 1
            self.rows[row][self.branch[part.senses_part]] += self.value()
        elif part.kind == "transresistance":
            self.across(row, nodes, 1)
            self.rows[row][self.branch[part.senses_part]] += self.value()
        elif part.kind == "ideal_opamp":
            self.across(row, wires["inputs"], 1)
        else:
            self.opamp(row, nodes, wires["inputs"], dict(part.parameters))

    def opamp(self, row, nodes, inputs, keys):
        self.across(row, nodes, 1)
        self.across(row, inputs, self.value())
        if "R_out" in keys:
            self.rows[row][row] += self.value()
        if "R_in" in keys:
            conductance = self.value()
            for node, sign in zip(inputs, (1, -1), strict=True):
                if node in self.index:
                    self.across(self.index[node], inputs, sign * conductance)

    def has_unique_solution(self):
        rows = [[entry % PRIME for entry in row] for row in self.rows]
        for column in range(len(rows)):
            pivot = next((r for r in range(column, len(rows)) if rows[r][column]), None)
            if pivot is None:
                return False
            rows[column], rows[pivot] = rows[pivot], rows[column]
            inverse = pow(rows[column][column], -1, PRIME)
            for other in range(column + 1, len(rows)):
                factor = rows[other][column] * inverse % PRIME
                if factor:
                    rows[other] = [
                        (x - factor * y) % PRIME for x, y in zip(rows[other], rows[column], strict=True)
                    ]
        return True


def refusal(topology):
    for check in (check_loops, check_islands, check_feedback):
        try:
            check(topology, DOCUMENT)
        except InputError as error:
            return str(error)
    return ""


@pytest.mark.parametrize("seed", range(8))
def test_a_circuit_with_a_unique_solution_is_never_refused(seed):
    rng = random.Random(seed)
    sound = refused = 0
    for _ in range(500):
        topology = random_topology(rng)
        said = refusal(topology)
        if Equations(topology, rng).has_unique_solution():
            sound += 1
            assert not said, (said, topology)
        else:
            refused += bool(said)
    # Both kinds of circuit must have come up for the comparison to mean anything.
    assert sound > 50
    assert refused > 50
