"""What drives the circuit for one wanted quantity."""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction

from derive.devices.elements import CurrentDrive, DriveElement, SmallSignal, VoltageDrive
from derive.nodal.voltages import fresh
from derive.topology.topology import Find


@dataclass(frozen=True, slots=True)
class Port:
    """The drives at work: `input` is what the result is per, `weights` the drives in terms of it."""

    input: str
    weights: tuple[tuple[str, Fraction], ...]
    voltage_drives: tuple[VoltageDrive, ...]
    current_drives: tuple[CurrentDrive, ...]

    @property
    def active(self) -> frozenset[str]:
        """The drives that are not at zero."""
        return frozenset(name for name, _ in self.weights)


def port(circuit: SmallSignal, find: Find, taken: set[str]) -> Port:
    """Say what drives the circuit; for an impedance a test current flows into the first node.

    Every drive stays in `voltage_drives`, because one at zero still ties its nodes.
    """
    voltage = tuple(drive for drive in circuit.drives if isinstance(drive, VoltageDrive))
    if find.quantity == "impedance" and find.nodes is not None:
        plus, minus = find.nodes
        name = fresh(taken, "I_t")
        test = CurrentDrive(name, (minus, plus))
        return Port(name, ((name, Fraction(1)),), voltage, (test,))
    weights = tuple((name, weight) for name, weight in find.per if weight != 0)
    at_work = {name for name, _ in weights}
    current = tuple(
        drive for drive in circuit.drives if isinstance(drive, CurrentDrive) and drive.name in at_work
    )
    if len(weights) == 1 and weights[0][1] == 1:
        return Port(weights[0][0], weights, voltage, current)
    common = "i" if len(current) == len(weights) else "v"
    return Port(fresh(taken, common), weights, voltage, current)


def drive_nodes(drives: tuple[DriveElement, ...]) -> tuple[str, ...]:
    """Give every node that a drive names."""
    return tuple(node for drive in drives for node in drive.nodes)
