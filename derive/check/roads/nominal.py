"""The result against the circuit at the nominal values, in floating point, over the whole band."""

from __future__ import annotations

import math
from fractions import Fraction

import numpy as np

from derive.check.excitation import excite
from derive.check.merged import definitions_of, with_merged_exact
from derive.check.points import symbol_names
from derive.check.printed import wrong_number
from derive.check.rounding import value_without_rounding
from derive.check.solve import NoSolutionError, Sweep, long_double, solve_exact, solve_frequencies
from derive.check.stamp import assemble
from derive.check.verdict import Solution, Verdict
from derive.check.words import at_most, frequency
from derive.devices.elements import Coupling, Inductor, SmallSignal

NAME = "nominal values"
METHOD = (
    "the circuit solved in floating point at 60 frequencies, from two decades below the lowest "
    "corner to two above the highest, relative to the size of the numerator's terms; the printed "
    "gain, coefficients, poles and zeros against the expressions"
)
ORDER = 30
POINTS = 60
FLOOR = 1e-9
EXACT_POINTS = 6
ROOT_ERROR = Fraction(1, 10**25)  # a mutual inductance is a root, held to 40 digits
NOISE = 1e-12  # smaller differences are rounding and would change from machine to machine
Pair = tuple[Fraction, Fraction]
Ratio = tuple[list[Fraction], list[Fraction], int]  # top, bottom, power of s


def judge(solution: Solution) -> Verdict:
    """Judge whether the result gives the circuit's response at its nominal values."""
    values = nominal_values(solution.judged)
    if values is None:
        return Verdict(NAME, METHOD, None, "not tried: a value is left open", "")
    omegas = [2 * math.pi * hertz for hertz in frequencies_hz(solution)]
    try:
        known = with_merged_exact(solution, values)
        if wrong := _wrong_value(solution, known):
            return Verdict(NAME, METHOD, False, wrong, "each merged part has its definition's value")
        printed = _coefficients(solution, known)
        if not any(printed[1]):
            words = "not decided: at these values the response is nothing over nothing"
            return Verdict(NAME, METHOD, None, words, "")
        if not any(printed[0]):
            return _judge_zero(solution, values, omegas)
        sweep = _sweep(solution, values, omegas)
        verdict = _verdict(*_worst(printed, omegas, sweep))
        return _with_numbers(verdict, solution, printed)
    except (NoSolutionError, ZeroDivisionError, OverflowError) as error:
        return Verdict(NAME, METHOD, None, f"not finished: {error}", "")


def _wrong_value(solution: Solution, known: dict[str, Fraction]) -> str:
    """Say which merged part is given another value than its definition has; "" where none is."""
    given = {symbol.name: symbol.value for symbol in solution.derivation.system.small_signal.symbols}
    for merged in definitions_of(solution):
        if given.get(merged.name, known[merged.name]) != known[merged.name]:
            return f"{merged.name} has another value than its definition"
    return ""


def _with_numbers(verdict: Verdict, solution: Solution, printed: Ratio) -> Verdict:
    """Fail a verdict where a printed number is not what the printed expressions give."""
    top, bottom, _ = printed
    if solution.numbers is None or not top[0] or verdict.passed is False:
        return verdict
    normalised = [value / top[0] for value in top]
    wrong = wrong_number(solution.numbers, top[0], normalised, bottom)
    if not wrong:
        return verdict
    return Verdict(NAME, METHOD, False, f"{wrong}: not what the expressions give", verdict.limit)


def _sweep(solution: Solution, values: dict[str, Fraction], omegas: list[float]) -> Sweep:
    system = solution.derivation.system
    numbers = {name: long_double(value) for name, value in values.items()}
    tableau = assemble(solution.judged, excite(system), numbers.__getitem__)
    return solve_frequencies(tableau, omegas)


def _verdict(worst: float, at_hz: float, moved: float) -> Verdict:
    limit = max(FLOOR, 1000 * moved)
    bound = f"{at_most(limit)} (or 1000 times what the last refinement still moved)"
    if not limit < 1e-3:
        return Verdict(NAME, METHOD, None, "not decided: the circuit is too ill-conditioned", bound)
    if worst < NOISE:
        measured = f"below {at_most(NOISE)} at every frequency"
    else:
        measured = f"worst error {at_most(worst)}, at {frequency(at_hz)}"
    return Verdict(NAME, METHOD, worst <= limit, measured, bound)


def _judge_zero(solution: Solution, values: dict[str, Fraction], omegas: list[float]) -> Verdict:
    """Judge a response that vanishes at these values: no error is relative to nothing, so exactly.

    A ratio of polynomials that is zero for all s is zero for real s too, where the solver is exact.
    """
    system = solution.derivation.system
    tableau = assemble(solution.judged, excite(system), values.__getitem__)
    points = [Fraction(round(omega) or 1) for omega in omegas[:: POINTS // EXACT_POINTS]]
    worst = max(abs(solve_exact(tableau, s).response) for s in points)
    limit = f"below {at_most(float(ROOT_ERROR))}"
    if worst < ROOT_ERROR:
        return Verdict(NAME, METHOD, True, "no response at these values, exactly", limit)
    return Verdict(NAME, METHOD, False, "a response where none is printed", limit)


def _worst(printed: Ratio, omegas: list[float], sweep: Sweep) -> tuple[float, float, float]:
    """Give the worst relative error, its frequency in hertz, and the worst relative refinement."""
    worst, at_hz, unsettled = 0.0, omegas[0] / (2 * math.pi), 0.0
    for omega, response, moved in zip(omegas, sweep.responses, sweep.moved, strict=True):
        value, scale = _response(*printed, Fraction(omega))
        error = abs(complex(response) - value) / scale
        unsettled = max(unsettled, float(moved) / max(scale, abs(complex(response))))
        if not error <= worst:
            worst, at_hz = error, omega / (2 * math.pi)
    return worst, at_hz, unsettled


def nominal_values(circuit: SmallSignal) -> dict[str, Fraction] | None:
    """Give every symbol its nominal value, M to 40 digits; None where one is left open."""
    values = {symbol.name: symbol.value for symbol in circuit.symbols}
    inductances = {e.name: e.inductance for e in circuit.elements if isinstance(e, Inductor)}
    for element in circuit.elements:
        if isinstance(element, Coupling):
            first, second = (values.get(inductances[coil]) for coil in element.coils)
            k = values.get(element.coefficient)
            if first is not None and second is not None and k is not None:
                values[element.mutual] = k * _root(first * second)
    known = {name: values.get(name) for name in symbol_names(circuit)}
    exact = {name: value for name, value in known.items() if value is not None}
    return exact if len(exact) == len(known) else None


def _root(value: Fraction) -> Fraction:
    digits = 10 ** (2 * max(40, 40 + len(str(value.denominator)) - len(str(value.numerator))))
    return Fraction(math.isqrt(value.numerator * digits // value.denominator)) / math.isqrt(digits)


def frequencies_hz(solution: Solution) -> list[float]:
    """Give 60 frequencies around the corners, evenly spaced on a logarithmic scale."""
    roots = solution.numbers.zeros + solution.numbers.poles if solution.numbers else ()
    corners = [math.hypot(root.real, root.imaginary) / (2 * math.pi) for root in roots]
    corners = [corner for corner in corners if 0 < corner < math.inf]
    low, high = (min(corners) / 100, max(corners) * 100) if corners else (1.0, 1e9)
    return [float(f) for f in np.geomspace(low, high, POINTS)]


def _coefficients(solution: Solution, values: dict[str, Fraction]) -> Ratio:
    form, numbers = solution.form, solution.numbers
    try:
        gain = value_without_rounding(form.gain, values)
        top = [gain * value_without_rounding(a, values) for a in form.numerator]
        bottom = [value_without_rounding(b, values) for b in form.denominator]
        return top, bottom, int(form.power_of_s)
    except ZeroDivisionError:
        # The lowest coefficient vanishes at these values: only the unnormalised ratio is left.
        if numbers is None:
            raise
        return list(numbers.top), list(numbers.bottom), int(form.power_of_s)


def _response(
    top: list[Fraction], bottom: list[Fraction], shift: int, omega: Fraction
) -> tuple[complex, float]:
    real, imaginary = _at(top, omega)
    below_real, below_imaginary = _at(bottom, omega)
    square = below_real**2 + below_imaginary**2
    quotient = (
        (real * below_real + imaginary * below_imaginary) / square,
        (imaginary * below_real - real * below_imaginary) / square,
    )
    size = omega**shift
    turn = (1, 1j, -1, -1j)[shift % 4]
    value = complex(float(quotient[0] * size), float(quotient[1] * size)) * turn
    terms = sum(abs(float(a * omega**k * size / _root(square))) for k, a in enumerate(top))
    return value, terms


def _at(coefficients: list[Fraction], omega: Fraction) -> Pair:
    parts = [Fraction(0), Fraction(0)]
    for k, coefficient in enumerate(coefficients):
        parts[k % 2] += coefficient * omega**k * (-1 if k % 4 in (2, 3) else 1)
    return parts[0], parts[1]
