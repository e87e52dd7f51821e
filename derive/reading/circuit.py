"""The checks of a circuit as a whole, from names to the laws that a solution must not break."""

from __future__ import annotations

from derive.reading.document import Document
from derive.reading.feedback import check_feedback, check_opamp_outputs
from derive.reading.islands import check_islands
from derive.reading.loops import check_loops
from derive.reading.merges import check_merges
from derive.reading.references import check_coils, check_names, check_nodes, check_sensed
from derive.reading.terminals import check_terminals
from derive.topology.topology import Topology


def check_circuit(topology: Topology, document: Document) -> None:
    """Refuse a circuit that cannot be what its user meant, or that has no unique solution.

    Raises: InputError at the first fault; slips of the pen come before faults of the circuit, so
    that a mistyped node is not reported as one that floats.
    """
    check_names(topology, document)
    check_sensed(topology, document)
    check_coils(topology, document)
    check_merges(topology, document)
    check_opamp_outputs(topology, document)
    check_nodes(topology, document)
    check_terminals(topology, document)
    check_loops(topology, document)
    check_islands(topology, document)
    check_feedback(topology, document)
