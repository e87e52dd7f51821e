"""The readable form against the circuit: gain and coefficients, with β and its like by their definitions."""

from __future__ import annotations

from derive.check.degree import chance, degree_of_claim
from derive.check.excitation import excite
from derive.check.merged import definitions_of, with_merged_modulo
from derive.check.points import stream, values_modulo
from derive.check.reading import form_modulo, series, value_modulo
from derive.check.solve import NoSolutionError, solve_modulo
from derive.check.stamp import assemble
from derive.check.verdict import Solution, Verdict
from derive.check.words import at_most, count
from derive.expressions.tree import Expression
from derive.normalise.form import NormalForm
from derive.readable.form import ReadableForm

NAME = "readable form"
METHOD = (
    "gain and every coefficient as written for reading, against the expanded ones and against the "
    "circuit's own tableau, at random points modulo a random 61-bit prime"
)
ORDER = 72
POINTS = 3
TRIES = 12
LIMIT = "equal at every point"


def judge(solution: Solution) -> Verdict:
    """Judge whether what is written for reading says the same as the circuit, for all values of its parts."""
    readable = solution.readable
    if readable is None:
        return Verdict(NAME, METHOD, None, "not written", "", applies=False)
    if len(readable.numerator) != len(solution.form.numerator) or len(readable.denominator) != len(
        solution.form.denominator
    ):
        return Verdict(NAME, METHOD, False, "another number of coefficients", LIMIT)
    circuit, excitation = solution.judged, excite(solution.derivation.system)
    numbers = stream(solution, "readable")
    prime = numbers.prime()
    agreed, why = 0, ""
    for _ in range(TRIES):
        values = values_modulo(circuit, numbers, prime)
        values["s"] = numbers.below(prime)
        try:
            state = solve_modulo(assemble(circuit, excitation, values.__getitem__), values["s"], prime)
            known = with_merged_modulo(solution, values, prime, readable.definitions)
            wrong = _first_difference(solution.form, readable, known, prime)
            printed = form_modulo(_as_form(solution.form, readable), known, prime)
        except (NoSolutionError, ZeroDivisionError) as error:
            why = str(error)
            continue
        if wrong or printed != state.response:
            measured = f"{wrong or 'the response'} differs at point {agreed + 1}"
            return Verdict(NAME, METHOD, False, measured, LIMIT)
        agreed += 1
        if agreed == POINTS:
            break
    if agreed < POINTS:
        return Verdict(NAME, METHOD, False, f"no point could be worked: {why}", LIMIT)
    degree = degree_of_claim(solution.form, circuit, definitions_of(solution))
    limit = (
        f"a wrong form passes a point with a chance of {at_most(chance(degree))} at most "
        f"(degree {degree} or less)"
    )
    return Verdict(NAME, METHOD, True, f"equal at {count(POINTS, 'point')}", limit)


def _first_difference(form: NormalForm, readable: ReadableForm, known: dict[str, int], prime: int) -> str:
    """Name the first entry that differs from the expanded one; "" where none does."""
    pairs = [("the gain", form.gain, readable.gain)]
    for letter, one, other in (
        ("a", form.numerator, readable.numerator),
        ("b", form.denominator, readable.denominator),
    ):
        entries = enumerate(zip(one, other, strict=True))
        pairs += [(f"{letter}_{power}", raw, written) for power, (raw, written) in entries]
    for name, raw, written in pairs:
        if value_modulo(raw, known, prime) != value_modulo(written, known, prime):
            return name
    if readable.far_gain is not None:
        if form.power_of_s + len(form.numerator) != len(form.denominator):
            return "the gain far above all corners"
        leading = [value_modulo(e, known, prime) for e in (form.numerator[-1], form.denominator[-1])]
        far = value_modulo(form.gain, known, prime) * leading[0] * pow(leading[1], -1, prime) % prime
        if far != value_modulo(readable.far_gain, known, prime):
            return "the gain far above all corners"
    for letter, whole, factors in (
        ("numerator", form.numerator, readable.numerator_factors),
        ("denominator", form.denominator, readable.denominator_factors),
    ):
        product = 1
        for factor in factors:
            product = product * _polynomial(factor, known, prime) % prime
        if factors and product != _polynomial(whole, known, prime):
            return f"the product of the {letter}'s factors"
    return ""


def _polynomial(coefficients: tuple[Expression, ...], known: dict[str, int], prime: int) -> int:
    return series([value_modulo(entry, known, prime) for entry in coefficients], known["s"]) % prime


def _as_form(form: NormalForm, readable: ReadableForm) -> NormalForm:
    return NormalForm(readable.gain, form.power_of_s, readable.numerator, readable.denominator)
