"""The whole journey, from a topology to its results."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from typing import Any

from derive.check.judge import finish, start
from derive.check.roads import steps
from derive.check.verdict import Outcome, Result, Solution, Verdict
from derive.devices.elements import SmallSignal
from derive.devices.linearise import linearise
from derive.eliminate.eliminate import eliminate
from derive.eliminate.plan import plan
from derive.nodal.write import write_equations
from derive.normalise.normalise import normalise
from derive.normalise.numbers import nominal_numbers
from derive.sheet.ledger import ledger
from derive.sheet.plain import plain_outcome
from derive.topology.topology import Find, Topology

ENGINE_SECONDS = 10.0


@dataclass(frozen=True, slots=True)
class Results:
    """The results of one topology; prints as plain text, and gives its ledger as data."""

    outcome: Outcome

    @property
    def passed(self) -> bool:
        """Whether no check failed."""
        return self.outcome.passed

    def ledger(self) -> dict[str, Any]:
        """Give the same data as the sheet's ledger."""
        return ledger(self.outcome)

    def __str__(self) -> str:
        return plain_outcome(self.outcome)

    def _repr_pretty_(self, printer: Any, cycle: bool) -> None:
        """Print well in a notebook."""
        printer.text(str(self))


def derive(
    topology: Topology,
    *,
    other_engine: bool = True,
    engine_seconds: float = ENGINE_SECONDS,
    only: str | None = None,
    progress: Callable[[str], None] = lambda stage: None,
    meanwhile: Callable[[Outcome], None] = lambda outcome: None,
) -> Results:
    """Derive and check what a topology asks for.

    Given: whether the other engine is asked as well, and for how long; `only` names one quantity;
    `progress` is told the stages; `meanwhile` is given the outcome without its verdicts,
    while the other engine works.

    Raises: InputError, TooLargeError or SingularError where the circuit cannot be worked.
    """
    circuit = linearise(topology)
    solutions = []
    for find in topology.finds:
        if only in (None, find.name):
            progress(f"deriving {find.name}")
            solutions.append(solve(circuit, find))
    begun = start(solutions, lcapy=other_engine, lcapy_seconds=engine_seconds)
    progress("checking")
    meanwhile(Outcome(circuit, tuple(Result(solution, ()) for solution in solutions)))
    verdicts = finish(begun)
    results = map(_result, solutions, verdicts)
    return Results(Outcome(circuit, tuple(results)))


def _result(solution: Solution, verdicts: tuple[Verdict, ...]) -> Result:
    """Keep the verdicts, and name the broken steps where the replay of the steps failed."""
    if all(verdict.passed is not False for verdict in verdicts if verdict.name == steps.NAME):
        return Result(solution, verdicts)
    try:
        return Result(solution, verdicts, steps.broken_steps(solution))
    except ValueError:
        # The fault is in no single step; the verdict says what it is.
        return Result(solution, verdicts)


def solve(circuit: SmallSignal, find: Find) -> Solution:
    """Go from a circuit to one quantity in normal form, with every step."""
    system = write_equations(circuit, find)
    derivation = eliminate(system, plan(system))
    form, derivation = normalise(derivation)
    return Solution(derivation, form, nominal_numbers(derivation))
