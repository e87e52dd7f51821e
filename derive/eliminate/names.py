"""Which names have a meaning already, so that no new one takes theirs."""

from __future__ import annotations

from derive.eliminate.derivation import Derivation
from derive.nodal.system import NodalSystem


def names_taken(system: NodalSystem) -> set[str]:
    """Give every name that has a meaning in the circuit, its equations or the quantities wanted."""
    topology = system.small_signal.topology
    taken = {*system.ring.names, system.input, system.wanted, system.find.name}
    taken |= {unknown.name for unknown in system.unknowns} | {name for name, _ in system.weights}
    taken |= {find.name for find in topology.finds} | {drive.name for drive in topology.drives}
    return taken | {part.name for part in topology.parts}


def names_used(derivation: Derivation) -> set[str]:
    """Give every name that has a meaning in a derivation: those, and what its steps define."""
    return names_taken(derivation.system) | {step.defines for step in derivation.steps if step.defines}
