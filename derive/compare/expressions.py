"""The expressions behind the figures of a comparison: gain and port impedances of each stage in the mid band."""

from __future__ import annotations

import math
from dataclasses import dataclass

from derive.check.verdict import Solution
from derive.compare.choose import asked
from derive.compare.comparison import Comparison, Level, Stage
from derive.compare.figures import level_words
from derive.expressions.tree import Equation, Expression, Name
from derive.expressions.walk import term_count
from derive.quantities.dimension import RESISTANCE, Dimension
from derive.readable.form import Definition
from derive.sheet.definitions import used_in, with_words
from derive.sheet.document import Block, Display, Line, Paragraph, Section, Text
from derive.sheet.wording import Wording

LONGEST = 40  # terms: a longer expression is read on the stage's own sheet


@dataclass(frozen=True, slots=True)
class _Shown:
    """One quantity of a stage: its derivation, its value, and what is said of it."""

    solution: Solution
    level: Level | None
    dimension: Dimension
    says: Line

    @property
    def reason(self) -> Line:
        """What it is and what it comes to."""
        value = "" if self.level is None else f": {level_words(self.level, self.dimension)}"
        return (*self.says, Text(f"{value}."))


def expressions(comparison: Comparison) -> tuple[Section, ...]:
    """Give a section that holds a part for each stage."""
    parts = [
        Section(f"{stage.name}: {stage.topology.title_block.title}", blocks, 2)
        for stage in comparison.stages
        if (blocks := _blocks(stage))
    ]
    return (Section("Expressions in the mid band", ()), *parts) if parts else ()


def _blocks(stage: Stage) -> tuple[Block, ...]:
    what = "Impedance: " if stage.find.quantity == "impedance" else "Gain: "
    found = [_Shown(stage.main, stage.gain, stage.dimension, (Text(what), *asked(stage.find)))]
    for label, port in (("Input", stage.input), ("Output", stage.output)):
        if port.result is not None:
            solution = port.result.solution
            # What is in it and what is out stands once for all, under what the figures are.
            says = Wording(stage.main.derivation).with_names(f"{label} impedance {port.between}")
            found.append(_Shown(solution, port.level, RESISTANCE, says))
    blocks: list[Block] = []
    used: dict[str, Expression] = {}
    for shown in found:
        expression = _at_mid_band(stage, shown.solution)
        if expression is not None:
            name = Name(shown.solution.derivation.system.find.name)
            blocks.append(Display(Equation(name, expression), shown.reason))
            used |= dict(used_in([expression], _known(shown.solution)))
    return (*blocks, Paragraph(with_words(used.items()))) if used else tuple(blocks)


def _at_mid_band(stage: Stage, solution: Solution) -> Expression | None:
    """Give the expression of a response in the mid band, where there is one that is short enough to be read."""
    form, readable = solution.form, solution.readable
    found: Expression | None = None
    if stage.at_hertz == 0 and form.power_of_s == 0:
        found = readable.gain if readable else form.gain
    elif math.isinf(stage.at_hertz) and readable:
        found = readable.far_gain
    return found if found is not None and term_count(found) <= LONGEST else None


def _known(solution: Solution) -> tuple[Definition, ...]:
    """Give the definitions of merged parts and of shorthand, in an order in which they can be read."""
    merged = solution.band.definitions if solution.band else ()
    words = solution.readable.definitions if solution.readable else ()
    return (*((item.name, item.definition) for item in merged), *words)
