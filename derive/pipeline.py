"""The whole journey, from a topology to its results."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, replace
from typing import Any

from derive.approximate.approximate import approximate
from derive.approximate.questions import Simplified
from derive.approximate.refuse import refuse_assumptions, refuse_idle
from derive.approximate.simplify import simplify_all
from derive.bands.band_circuit import BandCircuit
from derive.bands.choose import bands_of
from derive.bands.merge import refuse_unused_merges
from derive.bands.restrict import find_in, restrict
from derive.bias.solve import operating_point
from derive.check.judge import finish, start
from derive.check.roads import steps
from derive.check.verdict import Outcome, Result, Solution, Verdict
from derive.devices.elements import SmallSignal
from derive.devices.linearise import linearise
from derive.eliminate.names import names_used
from derive.errors import InputError
from derive.estimates.estimate import estimate
from derive.handcheck.attached import judge_attached, read_attached
from derive.nodal.write import write_equations
from derive.normalise.band_report import report_bands
from derive.normalise.nested_choice import derive_form
from derive.reactances.find_miller import find_miller
from derive.reactances.find_time_constants import find_time_constants
from derive.readable.factored import factored
from derive.readable.far_gain import far_gain
from derive.readable.readable import definitions_used, read_form
from derive.readable.vocabulary import Vocabulary, vocabulary_of
from derive.sheet.ledger import ledger
from derive.sheet.plain import plain_outcome
from derive.topology.topology import BandName, Find, Topology

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
    band: str | None = None,
    explain: bool = True,
    hand: bool = True,
    progress: Callable[[str], None] = lambda stage: None,
    meanwhile: Callable[[Outcome], None] = lambda outcome: None,
) -> Results:
    """Derive and check what a topology asks for.

    Given: whether the other engine is asked as well, and for how long; `only` names one quantity, `band`
    one band; whether the results are to be put in the words of the trade as well, and whether the hand derivation
    that the topology names is to be checked; `progress` is told the stages; `meanwhile` is given the outcome
    without its verdicts, while the other engine works.

    Raises: InputError, TooLargeError or SingularError where the circuit cannot be worked.
    """
    point = operating_point(topology)
    circuit = linearise(topology, {device.part: device for device in point.devices} if point else {})
    attached = read_attached(topology, bands_of(circuit)) if hand else None
    bands = tuple(restrict(circuit, name) for name in _chosen(circuit, band))
    if band is None:
        refuse_unused_merges(topology.merges, bands)
    refuse_assumptions(
        circuit, bands if band is None else [restrict(circuit, b) for b in bands_of(circuit)]
    )
    solutions = []
    for band_circuit in bands:
        for find in topology.finds:
            if only in (None, find.name):
                progress(f"deriving {find.name}, {band_circuit.band} band")
                solutions.append(solve(band_circuit, find, explain=explain))
    if band is None and only is None and explain:
        refuse_idle(topology.assumptions, [solution.register for solution in solutions])
    begun = start(solutions, lcapy=other_engine, lcapy_seconds=engine_seconds)
    progress("checking")
    report = report_bands(circuit, bands)
    aside = judge_attached(attached, solutions)
    meanwhile(
        Outcome(circuit, tuple(Result(solution, ()) for solution in solutions), point, report, aside)
    )
    verdicts = finish(begun)
    return Results(Outcome(circuit, tuple(map(_result, solutions, verdicts)), point, report, aside))


def _chosen(circuit: SmallSignal, band: str | None) -> tuple[BandName, ...]:
    """Give the bands to work in: all that the circuit has, or the one asked for."""
    found = bands_of(circuit)
    if band is None:
        return found
    chosen = tuple(name for name in found if name == band)
    if not chosen:
        raise InputError(
            f'there is no band "{band}" in this topology',
            where=circuit.topology.file,
            cure=f"its results are of the {'band' if len(found) == 1 else 'bands'} {', '.join(found)}",
        )
    return chosen


def _result(solution: Solution, verdicts: tuple[Verdict, ...]) -> Result:
    """Keep the verdicts, and name the broken steps where the replay of the steps failed."""
    if all(verdict.passed is not False for verdict in verdicts if verdict.name == steps.NAME):
        return Result(solution, verdicts)
    try:
        return Result(solution, verdicts, steps.broken_steps(solution))
    except ValueError:
        # The fault is in no single step; the verdict says what it is.
        return Result(solution, verdicts)


def solve(band: BandCircuit, find: Find, *, explain: bool = True) -> Solution:
    """Go from the circuit of a band to one quantity in normal form, with every step.

    Given: the find as the user wrote it; whether the result is to be put in the words of the trade as well.
    """
    system = write_equations(band.circuit, find_in(band, find))
    derivation, form, numbers = derive_form(system)
    bare = Solution(derivation, form, numbers, band)
    return explained(bare, band, find) if explain else bare


def explained(solution: Solution, band: BandCircuit, find: Find) -> Solution:
    """Put a result in the words of the trade: readable forms, time constants, Miller's view, estimates.

    A nested result gets what needs no expansion. What the user assumed, and short forms where they are asked
    for, come with both.
    """
    derivation, form, numbers = solution.derivation, solution.form, solution.numbers
    vocabulary = vocabulary_of(band.circuit, names_used(derivation))
    said = replace(
        solution,
        register=approximate(band, derivation, form, numbers, vocabulary),
        simplified=_simplified(band, find, vocabulary, names_used(derivation)),
    )
    if derivation.nested is not None:
        return replace(said, estimates=estimate(derivation, form, numbers, None, vocabulary, band.band))
    above, below = factored(derivation, vocabulary)
    readable = replace(
        read_form(form, derivation.system.ring.plain(), vocabulary),
        far_gain=far_gain(derivation, vocabulary),
        numerator_factors=above,
        denominator_factors=below,
    )
    readable = replace(readable, definitions=definitions_used(readable.expressions, vocabulary))
    constants = find_time_constants(derivation, form, vocabulary)
    return replace(
        said,
        readable=readable,
        time_constants=constants,
        miller=find_miller(derivation, form, numbers, vocabulary),
        estimates=estimate(derivation, form, numbers, constants, vocabulary, band.band),
    )


def _simplified(
    band: BandCircuit, find: Find, vocabulary: Vocabulary, taken: set[str]
) -> tuple[Simplified, ...]:
    """Give the short forms that the tool finds, where the budget asks for them."""
    budget = band.circuit.topology.budget
    if not budget.simplify:
        return ()
    return simplify_all(band.circuit, find_in(band, find), budget, vocabulary=vocabulary, taken=taken)
