"""The result against the circuit in exact rationals, at values no two of which are alike."""

from __future__ import annotations

from fractions import Fraction

from derive.check.excitation import excite
from derive.check.merged import with_merged_exact
from derive.check.points import stream, values_exact
from derive.check.reading import form_exact
from derive.check.solve import NoSolutionError, solve_exact
from derive.check.stamp import assemble
from derive.check.verdict import Solution, Verdict
from derive.check.words import count

NAME = "generic values"
METHOD = "exact rational solution of the circuit at whole values, no two alike"
ORDER = 20
POINTS = 2
TRIES = 8
LIMIT = "difference exactly 0"


def judge(solution: Solution) -> Verdict:
    """Judge whether the result is exactly right where no two values are alike."""
    system, form = solution.derivation.system, solution.form
    circuit, excitation = solution.judged, excite(system)
    numbers = stream(solution, "generic")
    agreed, why = 0, ""
    for _ in range(TRIES):
        values = values_exact(circuit, numbers)
        values["s"] = Fraction(numbers.below(997), 1009)
        try:
            state = solve_exact(assemble(circuit, excitation, values.__getitem__), values["s"])
            printed = form_exact(form, with_merged_exact(solution, values))
        except (NoSolutionError, ZeroDivisionError) as error:
            why = str(error)
            continue
        if printed != state.response:
            measured = f"differs at point {agreed + 1} by {_difference(printed, state.response)}"
            return Verdict(NAME, METHOD, False, measured, LIMIT)
        agreed += 1
        if agreed == POINTS:
            return Verdict(NAME, METHOD, True, f"0 at {count(POINTS, 'point')}", LIMIT)
    return Verdict(NAME, METHOD, False, f"no point could be worked: {why}", LIMIT)


def _difference(printed: Fraction, true: Fraction) -> str:
    if true == 0:
        return "a response where there is none"
    share = (printed - true) / true
    return f"{float(share * 100):.3g} %" if abs(share) < 10**12 else "a factor of over 10¹²"
