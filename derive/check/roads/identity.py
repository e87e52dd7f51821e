"""The result against the circuit, modulo a random prime: an identity in all symbols at once."""

from __future__ import annotations

from derive.check.degree import chance, degree_of_claim
from derive.check.excitation import excite
from derive.check.merged import definitions_of, with_merged_modulo
from derive.check.points import stream, values_modulo
from derive.check.reading import form_modulo
from derive.check.solve import NoSolutionError, solve_modulo
from derive.check.stamp import assemble
from derive.check.verdict import Solution, Verdict
from derive.check.words import at_most, count

NAME = "identity in all symbols"
METHOD = (
    "the printed result against the circuit's own tableau, solved anew "
    "at random points modulo a random 61-bit prime"
)
ORDER = 10
POINTS = 3
TRIES = 12


def judge(solution: Solution) -> Verdict:
    """Judge whether the result is true of the circuit for all values of its parts."""
    system, form = solution.derivation.system, solution.form
    circuit, excitation = solution.judged, excite(system)
    numbers = stream(solution, "identity")
    prime = numbers.prime()
    agreed, why = 0, ""
    for _ in range(TRIES):
        values = values_modulo(circuit, numbers, prime)
        values["s"] = numbers.below(prime)
        try:
            state = solve_modulo(assemble(circuit, excitation, values.__getitem__), values["s"], prime)
            printed = form_modulo(form, with_merged_modulo(solution, values, prime), prime)
        except (NoSolutionError, ZeroDivisionError) as error:
            why = str(error)
            continue
        if printed != state.response:
            measured = f"differs at point {agreed + 1}"
            return Verdict(NAME, METHOD, False, measured, "equal at every point")
        agreed += 1
        if agreed == POINTS:
            break
    if agreed < POINTS:
        return Verdict(NAME, METHOD, False, f"no point could be worked: {why}", "equal at every point")
    degree = degree_of_claim(form, circuit, definitions_of(solution))
    measured = f"equal at {count(POINTS, 'point')}"
    limit = (
        f"a wrong result passes a point with a chance of {at_most(chance(degree))} at most "
        f"(degree {degree} or less)"
    )
    return Verdict(NAME, METHOD, True, measured, limit)
