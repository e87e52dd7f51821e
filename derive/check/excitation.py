"""What drives the circuit and what is read from it, taken from the user's wish alone."""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction

from derive.devices.elements import SmallSignal, VoltageDrive
from derive.nodal.system import NodalSystem
from derive.quantities.dimension import (
    CURRENT,
    RESISTANCE,
    VOLTAGE,
    Dimension,
)


@dataclass(frozen=True, slots=True)
class Excitation:
    """The drives' levels for an input of 1, and the pair of nodes or the part that is read.

    `test_nodes` are those that the test current of an impedance flows from and to, through its
    source: it leaves the circuit at the second node of the find and enters it at the first.
    """

    input: str
    levels: tuple[tuple[str, Fraction], ...]
    nodes: tuple[str, str] | None
    part: str | None
    test_nodes: tuple[str, str] | None

    def level(self, drive: str) -> Fraction:
        """Give the drive's level for an input of 1; zero for a drive that is not called for."""
        return dict(self.levels).get(drive, Fraction(0))

    def branch_of_part(self, circuit: SmallSignal) -> str:
        """Give the element or drive whose current is wanted.

        Raises: KeyError where the part has no one current.
        """
        items = (*circuit.elements, *circuit.drives)
        if any(item.name == self.part for item in items):
            return str(self.part)
        owned = [item.name for item in circuit.elements if item.part == self.part]
        if len(owned) != 1:
            raise KeyError(f"the part {self.part} has no one current")
        return owned[0]


def excite(system: NodalSystem) -> Excitation:
    """Say what drives the circuit of `system` and what is read from it."""
    find = system.find
    if find.quantity == "impedance":
        nodes = find.nodes or ("", "")
        return Excitation(system.input, (), nodes, None, (nodes[1], nodes[0]))
    read = find.nodes if find.quantity == "voltage" else None
    return Excitation(system.input, system.weights, read, find.part, None)


def response_dimension(system: NodalSystem) -> Dimension | None:
    """Give the dimension of wanted over input; None where drives of two kinds are mixed."""
    if system.find.quantity == "impedance":
        return RESISTANCE
    kinds = {
        isinstance(drive, VoltageDrive)
        for drive in system.small_signal.drives
        if any(name == drive.name for name, _ in system.weights)
    }
    if len(kinds) != 1:
        return None
    wanted = VOLTAGE if system.find.quantity == "voltage" else CURRENT
    return wanted / (VOLTAGE if kinds.pop() else CURRENT)
