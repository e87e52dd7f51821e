"""Op amps as they are wired: outputs off ground, and ideal ones with feedback."""

from __future__ import annotations

from derive.quantities.words import quoted
from derive.topology.document import Document
from derive.topology.influence import Influence
from derive.topology.topology import GROUND, Topology


def check_opamp_outputs(topology: Topology, document: Document) -> None:
    """Refuse an op amp whose output is ground."""
    for part in topology.parts:
        if part.kind in ("ideal_opamp", "opamp") and part.nodes("output")[0] == GROUND:
            raise document.error(
                f"part {part.name}: the output of an op amp cannot be ground",
                "parts",
                part.name,
                "output",
                cure="name the node that it drives",
            )


def check_feedback(topology: Topology, document: Document) -> None:
    """Refuse an ideal op amp whose output cannot move either of its inputs."""
    influence = Influence(topology)
    for part in topology.parts:
        if part.kind != "ideal_opamp":
            continue
        output, inputs = part.nodes("output")[0], part.nodes("inputs")
        moved, _ = influence.spread(frozenset({output}), without=part.name)
        if not any(node in moved for node in inputs):
            raise document.error(
                f"op amp {part.name} has no feedback: no path leads from its output "
                f"{quoted(output)} to its inputs {quoted(inputs[0])} and {quoted(inputs[1])}",
                "parts",
                part.name,
                cure="wire the feedback part, or make it an opamp with A_0 or f_unity",
            )
