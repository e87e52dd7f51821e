"""What each name in a hand derivation stands for, and why one that is not there may not be used."""

from __future__ import annotations

import re
from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from difflib import get_close_matches
from typing import Literal

from derive.bands.restrict import find_in
from derive.check.excitation import excite, response_dimension
from derive.check.stamp import node_names, terminals
from derive.check.verdict import Solution
from derive.devices.elements import Coupling, VoltageDrive
from derive.errors import InputError
from derive.expressions.tree import Expression
from derive.nodal.system import NodalSystem
from derive.nodal.write import write_equations
from derive.quantities.dimension import (
    CURRENT,
    FREQUENCY,
    INDUCTANCE,
    RATIO,
    TIME,
    VOLTAGE,
    Dimension,
)
from derive.readable.vocabulary import vocabulary_of
from derive.topology.topology import GROUND

Kind = Literal[
    "symbol", "s", "pi", "drive", "voltage", "current", "quantity", "coefficient", "meaning", "line"
]
# What a derivation finds out, as against what the circuit is made of.
UNKNOWN: frozenset[Kind] = frozenset({"voltage", "current", "quantity", "coefficient", "line"})
COEFFICIENT = re.compile(r"([ab])_([0-9]{1,2})")


@dataclass(frozen=True, slots=True)
class Meaning:
    """What a name stands for: `subject` is its node, element or find; `definition` what it is short for."""

    kind: Kind
    dimension: Dimension | None = None
    subject: str = ""
    definition: Expression | None = None


class NameRefused(Exception):
    """Raised for a name that may not be used here, with what is wrong and the cure."""

    def __init__(self, name: str, what: str, cure: str = "") -> None:
        self.name = name
        self.what = what
        self.cure = cure
        super().__init__(what)


class Names:
    """The names that the lines of one hand derivation may use; it learns those that lines define."""

    def __init__(self, solution: Solution, define: Iterable[tuple[str, Expression]]) -> None:
        self.solution = solution
        self.system = solution.derivation.system
        self._define = dict(define)
        self._lines: dict[str, Meaning] = {}
        self._systems: dict[str, NodalSystem] = {}
        self._symbols = _symbols(solution)
        self._drives = {
            drive.name: VOLTAGE if isinstance(drive, VoltageDrive) else CURRENT
            for drive in solution.judged.drives
        }
        taken = (*self._define, self.system.input, self.system.find.name)
        words = vocabulary_of(self.system.small_signal, taken)
        self._meanings: dict[str, tuple[Expression, Dimension | None]] = {
            name: (meaning, words.dimensions.get(name)) for name, meaning in words.definitions
        }
        for name, meaning in vocabulary_of(solution.judged).definitions:
            self._meanings.setdefault(name, (meaning, None))
        band = solution.band
        for merged in band.definitions if band else ():
            self._meanings[merged.name] = (merged.definition, self._symbols.get(merged.name))
        for name, meaning in self._define.items():
            self._meanings[name] = (meaning, None)
        self._nodes = dict.fromkeys(node_names(solution.judged, excite(self.system)))
        self.moved = dict(band.nodes) if band else {}

    @property
    def drives(self) -> Mapping[str, Dimension]:
        """The independent sources, each volt or ampere."""
        return self._drives

    def learn(self, name: str, meaning: Expression, dimension: Dimension | None) -> None:
        """Take in a name that a line has defined."""
        self._lines[name] = Meaning("line", dimension, name, meaning)

    def knows(self, name: str) -> bool:
        """Whether a name stands for something here."""
        try:
            self.look(name)
        except NameRefused:
            return False
        return True

    def is_new(self, name: str) -> bool:
        """Whether a name is free for a line to define."""
        if self.knows(name) or name in (GROUND, "s"):
            return False
        return self._refusal(name) is None

    def look(self, name: str) -> Meaning:
        """Give what a name stands for.

        Raises: NameRefused for one that is not there, with the reason.
        """
        found = self._of_circuit(name) or self._of_result(name) or self._lines.get(name)
        if found is not None:
            return found
        raise self._refusal(name) or self._unknown(name)

    def _of_circuit(self, name: str) -> Meaning | None:
        if name == "s":
            return Meaning("s", FREQUENCY)
        if name in self._define:
            return Meaning("meaning", None, name, self._define[name])
        if name in self._meanings:
            definition, dimension = self._meanings[name]
            return Meaning("meaning", dimension, name, definition)
        if name in self._symbols:
            return Meaning("symbol", self._symbols[name])
        if name in self._drives:
            return Meaning("drive", self._drives[name])
        if name == self.system.input:
            return Meaning("drive", CURRENT if self.system.find.quantity == "impedance" else None)
        if name.startswith("v_") and (node := self.node(name[2:])) is not None:
            return Meaning("voltage", VOLTAGE, node)
        if name.startswith("i_") and (branch := self._branch(name[2:])):
            return Meaning("current", CURRENT, branch)
        return Meaning("pi", RATIO) if name == "pi" else None

    def _of_result(self, name: str) -> Meaning | None:
        if name in {find.name for find in self.solution.judged.topology.finds}:
            return Meaning("quantity", self.dimension_of_find(name), name)
        if name == "K":
            own = response_dimension(self.system)
            power = int(self.solution.form.power_of_s)
            return Meaning("coefficient", None if own is None else own / FREQUENCY**power, name)
        if matched := COEFFICIENT.fullmatch(name):
            return Meaning("coefficient", TIME ** int(matched[2]), name)
        return None

    def node(self, name: str) -> str | None:
        """Give the node of this band's circuit that a node of the topology has become."""
        node = self.moved.get(name, name)
        return node if node in self._nodes or node == GROUND else None

    def _branch(self, subject: str) -> str | None:
        """Give the element whose current i_SUBJECT is: by its part, its own name or its symbol."""
        items = (*self.solution.judged.elements, *self.solution.judged.drives)
        with_current = [item for item in items if terminals(item) is not None]
        if any(item.name == subject for item in with_current):
            return subject
        owned = [item.name for item in with_current if getattr(item, "part", None) == subject]
        if len(owned) == 1:
            return owned[0]
        of_symbol = [i.name for i in with_current if i.name.endswith("." + subject)]
        if len(of_symbol) == 1:
            return of_symbol[0]
        merged = self.system.small_signal.elements
        return subject if any(item.name == subject for item in merged) else None

    def system_of(self, find_name: str) -> NodalSystem:
        """Give the equations of a wanted quantity of the same topology.

        Raises: NameRefused where it is not there in this band.
        """
        if find_name == self.system.find.name or self.solution.band is None:
            return self.system
        if find_name not in self._systems:
            finds = {find.name: find for find in self.solution.judged.topology.finds}
            try:
                band = self.solution.band
                self._systems[find_name] = write_equations(band.circuit, find_in(band, finds[find_name]))
            except InputError as error:
                raise NameRefused(find_name, error.what, error.cure) from None
        return self._systems[find_name]

    def dimension_of_find(self, name: str) -> Dimension | None:
        """Give the dimension of a wanted quantity, None where drives of two kinds are mixed."""
        try:
            return response_dimension(self.system_of(name))
        except NameRefused:
            return None

    def _refusal(self, name: str) -> NameRefused | None:
        """Say why a name may not be used, None where it is simply not known."""
        if name == GROUND:
            return NameRefused(name, "gnd is the ground node and has no value", "its voltage is 0")
        band = self.solution.band
        topology = self.solution.judged.topology
        for subject in (name, name[2:] if name.startswith("i_") else name):
            for change in band.changes if band else ():
                if change.subject == subject and change.kind != "merge":
                    what = f"{name} is not in the circuit of the {band.band if band else ''} band"
                    return NameRefused(
                        name, f"{what} ({change.says})", "leave it out, or name another band"
                    )
        if any(supply.name == name for supply in topology.supplies):
            return NameRefused(name, f"{name} is a supply: signal ground here", "leave it out")
        for device in self.solution.judged.devices:
            for left in device.left_out:
                if left.symbol == name:
                    return NameRefused(name, f"{name} is {left.why}", "leave it out, or give its value")
        own = {part.name for part in topology.parts}
        if name in own:
            used = [s.name for s in self.solution.judged.symbols if s.origin.endswith(name)]
            cure = f"write {', '.join(used)}" if used else "leave it out"
            return NameRefused(name, f"{name} is a part without one value of its own", cure)
        if name.startswith("i_") and name[2:] in own:
            return NameRefused(
                name, f"the part {name[2:]} has no one current", "name one of its elements: i_r_pi, i_g_m"
            )
        if self.node(name) is not None:
            return NameRefused(name, f"{name} is a node", f"its voltage is v_{name}")
        return None

    def _unknown(self, name: str) -> NameRefused:
        known = [*self._symbols, *self._meanings, *self._drives, *self._lines]
        known += [f"v_{node}" for node in (*self._nodes, *self.moved)]
        known += [f"i_{part.name}" for part in self.solution.judged.topology.parts]
        known += [find.name for find in self.solution.judged.topology.finds]
        near = get_close_matches(name, known, 1, 0.7)
        cure = (
            f"did you mean {near[0]}?" if near else 'define it: by a line "name = ...", or under [define]'
        )
        return NameRefused(name, f"nothing here is called {name}", cure)

    def pool(self) -> tuple[str, ...]:
        """Give the names that values of the circuit are written with, in order: symbols, words, own names."""
        return (*self._symbols, *self._meanings, *self._lines)

    def voltages(self) -> tuple[str, ...]:
        """Give the names of the node voltages of the topology that are there in this band."""
        return tuple(f"v_{node}" for node in dict.fromkeys((*self._nodes, *self.moved)))


def _symbols(solution: Solution) -> dict[str, Dimension]:
    found = {symbol.name: symbol.dimension for symbol in solution.judged.symbols}
    for element in solution.judged.elements:
        if isinstance(element, Coupling):
            found[element.mutual] = INDUCTANCE
    merged = {m.name for m in solution.band.definitions} if solution.band else set()
    system = solution.derivation.system.small_signal
    found |= {s.name: s.dimension for s in system.symbols if s.name in merged}
    return found
