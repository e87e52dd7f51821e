"""Supplies and devices' voltages as symbols of one linear response, and the steps without its input.

The road from equations to a ratio is that of a response to one input. For DC, every drive is its own
symbol times an input of one: the same steps then give a current in terms of V_CC, V_BE and the
parts, and the input, being one, is left out of what is shown.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, replace
from fractions import Fraction

from derive.eliminate.derivation import Certificate, Derivation, Step
from derive.eliminate.rules import form_ratio, solve_for, wanted
from derive.expressions.polynomials import add, divide, multiply, negate
from derive.expressions.tree import (
    ONE,
    Equation,
    Expression,
    Name,
    Negative,
    Parallel,
    Power,
    Product,
    Quotient,
    Root,
    Sum,
)
from derive.expressions.walk import names_of
from derive.nodal.linear_form import combine
from derive.nodal.system import LeavingCurrent, NodalSystem
from derive.nodal.voltages import fresh


def with_unit_input(system: NodalSystem) -> NodalSystem:
    """Give the system with every drive as its symbol times one input."""
    drives = [drive.name for drive in system.small_signal.drives if drive.name in system.ring.names]
    taken = {*system.ring.names, *(unknown.name for unknown in system.unknowns), system.find.name}
    unit = fresh(taken, "u")
    ring = system.ring
    equations = []
    for equation in system.equations:
        row = combine(
            ((unit, entry * ring.generator(name)) if name in drives else (name, entry),)
            for name, entry in equation.row
        )
        equations.append(replace(equation, row=row))
    return replace(system, equations=tuple(equations), input=unit, weights=((unit, Fraction(1)),))


@dataclass(frozen=True, slots=True)
class Rewriter:
    """Puts 1 for the input, and DC names (V_b, I_B, I_C) for those of the road."""

    names: Mapping[str, str]
    input: str

    def expression(self, node: Expression) -> Expression:
        """Rewrite an expression, with what a factor of 1 leaves tidied."""
        if isinstance(node, Name):
            if node.text == self.input:
                return ONE
            return Name(self.names.get(node.text, node.text))
        if isinstance(node, Sum):
            return add([self.expression(term) for term in node.terms])
        if isinstance(node, Product):
            return multiply([self.expression(factor) for factor in node.factors])
        if isinstance(node, Quotient):
            return divide(self.expression(node.numerator), self.expression(node.denominator))
        if isinstance(node, Negative):
            return negate(self.expression(node.operand))
        if isinstance(node, Power):
            return Power(self.expression(node.base), node.exponent)
        if isinstance(node, Parallel):
            return Parallel(tuple(self.expression(branch) for branch in node.branches))
        return Root(self.expression(node.radicand)) if isinstance(node, Root) else node

    def equation(self, equation: Equation) -> Equation:
        """Rewrite both sides."""
        return Equation(self.expression(equation.left), self.expression(equation.right))

    def optional(self, node: Expression | None) -> Expression | None:
        """Rewrite an expression that may be absent."""
        return None if node is None else self.expression(node)

    def step(self, step: Step) -> Step:
        """Rewrite all that a step holds."""
        proof = step.certificate
        if proof is not None:
            uses = tuple((number, self.expression(factor)) for number, factor in proof.uses)
            proof = Certificate(uses, self.expression(proof.divisor))
        return replace(
            step,
            equation=self.equation(step.equation),
            certificate=proof,
            subject=self.names.get(step.subject or "", step.subject),
            factor=self.optional(step.factor),
            nonzero=self.optional(step.nonzero),
        )

    def system(self, system: NodalSystem) -> NodalSystem:
        """Rewrite the equations, unknowns and rows of a system."""
        equations = []
        for equation in system.equations:
            terms = tuple(
                LeavingCurrent(term.element, term.part, self.expression(term.current))
                for term in equation.terms
            )
            row = tuple((self.names.get(name, name), entry) for name, entry in equation.row)
            changed = replace(equation, terms=terms, equation=self.equation(equation.equation), row=row)
            equations.append(changed)
        return replace(
            system,
            equations=tuple(equations),
            unknowns=tuple(
                replace(unknown, name=self.names.get(unknown.name, unknown.name))
                for unknown in system.unknowns
            ),
            wanted=self.names.get(system.wanted, system.wanted),
            known=tuple((node, self.expression(voltage)) for node, voltage in system.known),
        )


def without_input(derivation: Derivation, names: Mapping[str, str]) -> Derivation:
    """Give the derivation with the input put at 1, what is sought being the unknown itself.

    Steps that then say nothing are left out, and the others numbered anew.
    """
    system = derivation.system
    rewriter = Rewriter({**names, system.wanted: system.find.name}, system.input)
    kept: list[Step] = []
    moved: dict[int, int] = {}
    for old in derivation.steps:
        if old.rule == wanted.NAME:
            continue
        step = _renumbered(rewriter.step(old), len(kept) + 1, moved)
        if old.rule == form_ratio.NAME:
            step = replace(step, rule=solve_for.NAME, subject=system.find.name)
        if step.certificate is not None and kept and step.equation == kept[-1].equation:
            moved[old.number] = kept[-1].number
            continue
        moved[old.number] = step.number
        kept.append(step)
    return replace(derivation, system=rewriter.system(system), steps=tuple(kept))


def _renumbered(step: Step, number: int, moved: Mapping[int, int]) -> Step:
    proof = step.certificate
    if proof is not None:
        proof = Certificate(tuple((moved[k], factor) for k, factor in proof.uses), proof.divisor)
    return replace(step, number=number, certificate=proof)


def shifted(steps: Sequence[Step], by: int) -> tuple[Step, ...]:
    """Give the steps with `by` added to every number, so that others can stand before them."""
    moved = {step.number: step.number + by for step in steps}
    return tuple(_renumbered(step, moved[step.number], moved) for step in steps)


def needed(steps: Sequence[Step]) -> tuple[Step, ...]:
    """Give the steps that the last one rests on, definitions among them, numbered anew.

    The equations of nodes that do not bear on the result are so left out.
    """
    by_number = {step.number: step for step in steps}
    used = {steps[-1].number}
    waiting = [steps[-1]]
    while waiting:
        step = waiting.pop()
        numbers = [number for number, _ in step.certificate.uses] if step.certificate else []
        names = {*names_of(step.equation)}
        numbers += [other.number for other in steps if other.defines in names]
        for number in numbers:
            if number not in used:
                used.add(number)
                waiting.append(by_number[number])
    kept = [step for step in steps if step.number in used]
    moved = {step.number: place for place, step in enumerate(kept, 1)}
    return tuple(_renumbered(step, moved[step.number], moved) for step in kept)
