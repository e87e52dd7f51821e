"""A random point at which every name of a solution has a value: free, and as the circuit settles it."""

from __future__ import annotations

from dataclasses import dataclass

from derive.check.excitation import excite
from derive.check.merged import with_merged_modulo
from derive.check.points import Stream, symbol_names, values_modulo
from derive.check.reading import names_of_circuit
from derive.check.solve import solve_modulo
from derive.check.stamp import assemble
from derive.check.verdict import Solution


@dataclass(frozen=True, slots=True)
class Point:
    """Values for every name: once with all unknowns free, once as the circuit settles them."""

    free: dict[str, int]
    settled: dict[str, int]
    prime: int


def draw(solution: Solution, numbers: Stream, prime: int) -> Point:
    """Draw a point from a stream of random numbers.

    Raises: NoSolutionError or ZeroDivisionError where this point cannot be worked; another may.
    """
    system = solution.derivation.system
    circuit, excitation = solution.judged, excite(system)
    symbols = values_modulo(circuit, numbers, prime)
    symbols["s"] = numbers.below(prime)
    state = solve_modulo(assemble(circuit, excitation, symbols.__getitem__), symbols["s"], prime)
    symbols = with_merged_modulo(solution, symbols, prime)
    settled = names_of_circuit(solution, excitation, state, symbols, numbers.below(prime), prime)
    fixed = {*symbols, *symbol_names(circuit)}
    free = {name: value if name in fixed else numbers.below(prime) for name, value in settled.items()}
    for unknown in system.unknowns:
        free.setdefault(unknown.name, numbers.below(prime))
    return Point(free, settled, prime)
