"""The two ends of the band, worked in the circuit itself with its reactances opened and shorted."""

from __future__ import annotations

from derive.check.excitation import excite
from derive.check.limits import TOO_LARGE, limit_modulo
from derive.check.merged import with_merged_modulo
from derive.check.points import stream, values_modulo
from derive.check.reading import value_modulo
from derive.check.solve import NoSolutionError
from derive.check.stamp import assemble
from derive.check.verdict import Solution, Verdict

NAME = "asymptotes"
METHOD = (
    "capacitors opened and inductors shorted for s → 0, the reverse for s → ∞, "
    "compared exactly at random values modulo a random 61-bit prime"
)
ORDER = 40
LIMIT = "the same at both ends"
TRIES = 4
ENDS = ("s → 0", "s → ∞")


def judge(solution: Solution) -> Verdict:
    """Judge whether the result has the limits that the reduced circuits have."""
    system = solution.derivation.system
    circuit, excitation = solution.judged, excite(system)
    numbers = stream(solution, "asymptotes")
    prime = numbers.prime()
    why = ""
    for _ in range(TRIES):
        values = values_modulo(circuit, numbers, prime)
        tableau = assemble(circuit, excitation, values.__getitem__)
        words, fine = [], True
        try:
            known = with_merged_modulo(solution, values, prime)
            for end, infinite in zip(ENDS, (False, True), strict=True):
                true = limit_modulo(tableau, prime, at_infinity=infinite)
                printed = _printed(solution, known, prime, at_infinity=infinite)
                words.append(f"{end}: {_compare(true, printed)}")
                fine = fine and true == printed
        except (NoSolutionError, ZeroDivisionError) as error:
            why = str(error)
            if why == TOO_LARGE:
                return Verdict(NAME, METHOD, None, f"not decided: {why}", LIMIT)
            continue
        return Verdict(NAME, METHOD, fine, "; ".join(words), LIMIT)
    return Verdict(NAME, METHOD, None, f"not decided: {why}", LIMIT)


def _printed(solution: Solution, values: dict[str, int], prime: int, *, at_infinity: bool) -> int | None:
    """Give the limit that the normal form has, None where it is infinite."""
    form = solution.form
    gain = value_modulo(form.gain, values, prime)
    if gain == 0:
        return 0
    if not at_infinity:
        order = form.power_of_s
        return gain if order == 0 else 0 if order > 0 else None
    order = form.power_of_s + len(form.numerator) - len(form.denominator)
    top = value_modulo(form.numerator[-1], values, prime)
    bottom = value_modulo(form.denominator[-1], values, prime)
    if top == 0 or bottom == 0:
        raise ZeroDivisionError("a leading coefficient is zero at this point")
    return gain * top * pow(bottom, -1, prime) % prime if order == 0 else 0 if order < 0 else None


def _compare(true: int | None, printed: int | None) -> str:
    if true == printed:
        return {None: "infinite in both", 0: "zero in both"}.get(true, "equal")
    return f"{_kind(true)} in the circuit, {_kind(printed)} in the result"


def _kind(value: int | None) -> str:
    return {None: "infinite", 0: "zero"}.get(value, "finite, another value")
