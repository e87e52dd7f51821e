"""What a reader of a comparison must know: what each figure is, and what is particular to a stage."""

from __future__ import annotations

from derive.compare.comparison import Comparison, Stage

DEFINITIONS = (
    "The mid band of a stage that is worked in full is taken at zero frequency, or at frequencies far above "
    "its corners where the response falls towards zero frequency, or at the geometric mean of its two −3 dB "
    "frequencies.",
    "The −3 dB frequencies are those at which the magnitude is 1/√2 of its value in the mid band: the low one "
    "from the low band, the high one from the high band, or both from the full circuit. A dash says that the "
    "pass band is open on that side; “not asked for”, that the file leaves out the band that would show it.",
    "The gain-bandwidth product is the magnitude of the gain in the mid band times the high −3 dB frequency.",
    "The input impedance is what the drive sees in the mid band: the drive itself is taken out, all other drives "
    "are at zero, and everything from its terminals on is in place, a source resistor and the load included. "
    "Where a single resistor leads from the drive into the stage, the impedance past it is given as well.",
    "The output impedance is seen in the mid band at the nodes where the output is taken: all drives are at zero, "
    "and the source resistor and the load are in place.",
)


def notes(comparison: Comparison) -> tuple[tuple[str, str], ...]:
    """Give (stage, words) of all that is particular to one stage."""
    return tuple((stage.name, words) for stage in comparison.stages for words in _of(stage))


def _of(stage: Stage) -> list[str]:
    found = list(stage.remarks)
    if stage.find.quantity == "impedance":
        return found
    for name, port in (("input impedance", stage.input), ("output impedance", stage.output)):
        if port.remark:
            found.append(f"{name}: {port.remark}")
    return found


def failures(comparison: Comparison) -> tuple[str, ...]:
    """Name every check that failed, with its stage."""
    found = []
    for stage in comparison.stages:
        for name, result in stage.results:
            lead = f"{stage.name}, {name}"
            found += [f"{lead}: {verdict.name}" for verdict in result.verdicts if verdict.passed is False]
            if result.broken_steps:
                numbers = ", ".join(str(number) for number, _ in result.broken_steps)
                found.append(f"{lead}: proof of step {numbers}")
        if stage.outcome.point is not None and not stage.outcome.point.passed:
            found.append(f"{stage.name}: operating point")
    return tuple(found)
