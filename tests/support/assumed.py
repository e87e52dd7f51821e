"""From a topology's text to its registers of assumptions, on the shortest road."""

from __future__ import annotations

from derive.approximate.approximate import approximate
from derive.approximate.refuse import refuse_assumptions, refuse_idle
from derive.bands.choose import bands_of
from derive.bands.restrict import find_in, restrict
from derive.check.verdict import Solution
from derive.devices.linearise import linearise
from derive.eliminate.eliminate import eliminate
from derive.eliminate.plan import plan
from derive.nodal.write import write_equations
from derive.normalise.normalise import normalise
from derive.normalise.numbers import nominal_numbers
from derive.readable.vocabulary import vocabulary_of
from derive.reading.read import parse


def solutions_of(text: str) -> list[Solution]:
    """Give every result of a topology with its register, and nothing else that is said of results."""
    circuit = linearise(parse(text, "stage.toml"))
    bands = [restrict(circuit, band) for band in bands_of(circuit)]
    refuse_assumptions(circuit, bands)
    found = []
    for band in bands:
        for find in circuit.topology.finds:
            system = write_equations(band.circuit, find_in(band, find))
            derivation = eliminate(system, plan(system))
            form, derivation = normalise(derivation)
            numbers = nominal_numbers(derivation)
            register = approximate(band, derivation, form, numbers, vocabulary_of(band.circuit))
            found.append(Solution(derivation, form, numbers, band, register=register))
    refuse_idle(circuit.topology.assumptions, [solution.register for solution in found])
    return found


def registers_of(text: str):
    """Give the register of every result of a topology."""
    return [solution.register for solution in solutions_of(text)]
