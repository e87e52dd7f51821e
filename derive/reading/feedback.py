"""Op amps as they are wired: outputs off ground, and ideal ones with feedback."""

from __future__ import annotations

from derive.quantities.words import quoted
from derive.reading.document import Document
from derive.reading.influence import Influence
from derive.topology.topology import GROUND, Part, Topology


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
        if not _is_ideal(part):
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


def _is_ideal(part: Part) -> bool:
    given = {key for key, _ in part.parameters}
    return part.kind == "ideal_opamp" or (
        part.kind == "opamp" and not given & {"A_0", "f_unity", "w_unity"}
    )
