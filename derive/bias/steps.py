"""The step rules of the bias beyond those of elimination, and how such steps are put behind others."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field, replace

from derive.bias.unit import needed, shifted
from derive.eliminate.derivation import Certificate, Derivation, Step
from derive.expressions.tree import ONE, Equation, Expression, Name

VOLTAGE = "name the open-circuit voltage"
RESISTANCE = "name the resistance behind it"
OVERDRIVE = "split the control voltage"
SQUARE_LAW = "state the square law"
WITH_NAMES = "write with the names given"
QUADRATIC = "put the square law in"
FACTOR = "name the factor of the square law"
OPEN = "take off the threshold"
ROOT = "take the root in saturation"
CURRENT = "write the current"

# What each rule says on a sheet, as a sentence.
SENTENCES = {
    VOLTAGE: "The voltage that the bias network has without load (Thévenin).",
    RESISTANCE: "The resistance behind it, supplies at zero (Thévenin).",
    OVERDRIVE: "The control voltage is the threshold and the overdrive voltage V_ov.",
    SQUARE_LAW: "The square law of the device in saturation.",
    WITH_NAMES: "The same, written with the names just given.",
    QUADRATIC: "The square law put in: a quadratic equation for the overdrive voltage.",
    FACTOR: "The factor of the square law, so that it is written as that of a MOSFET.",
    OPEN: "The overdrive voltage: no current lowers the control voltage.",
    ROOT: "Its root in saturation: with the other root the overdrive voltage is negative, and the device "
    "does not conduct.",
    CURRENT: "The overdrive voltage put into the square law.",
}


@dataclass(slots=True)
class Steps:
    """The steps so far; those in front are definitions that the rest is written with."""

    steps: list[Step] = field(default_factory=list)

    def define(self, rule: str, name: str, value: Expression) -> int:
        """Define a name."""
        equation = Equation(Name(name), value)
        return self._add(Step(len(self.steps) + 1, rule, equation, defines=name, subject=name))

    def follow(
        self,
        rule: str,
        equation: Equation,
        uses: Sequence[tuple[int, Expression]],
        divisor: Expression = ONE,
        subject: str | None = None,
        nonzero: Expression | None = None,
    ) -> int:
        """Add an equation that follows from earlier ones."""
        proof = Certificate(tuple(uses), divisor)
        step = Step(len(self.steps) + 1, rule, equation, proof, subject=subject, nonzero=nonzero)
        return self._add(step)

    def append(self, derivation: Derivation) -> int:
        """Put a derivation's steps behind those so far; give the number of its last one."""
        self.steps += shifted(derivation.steps, len(self.steps))
        return len(self.steps)

    def into(self, derivation: Derivation) -> Derivation:
        """Give the derivation with the steps that the last one rests on in place of its own."""
        return replace(derivation, steps=needed(self.steps))

    def _add(self, step: Step) -> int:
        self.steps.append(step)
        return step.number
