"""Rules of thumb worked anew, and limits of the gain read off the tableau's determinants."""

from __future__ import annotations

import math
from collections.abc import Mapping
from fractions import Fraction

import numpy as np

from derive.check.estimates_of_roots import known_values
from derive.check.excitation import excite
from derive.check.points import stream, values_modulo
from derive.check.reading import value_exact, value_modulo
from derive.check.roads.nominal import nominal_values
from derive.check.solve import NoSolutionError
from derive.check.stamp import assemble
from derive.check.tableau_ratio import lowest_modulo
from derive.check.verdict import Solution
from derive.errors import DeriveError
from derive.estimates.estimates import Estimate, Estimates, Limit
from derive.estimates.verdicts import USABLE_ERROR
from derive.expressions.tree import Expression
from derive.expressions.walk import evaluate, names_of
from derive.normalise.normalise import COEFFICIENT

RULE_ERROR = 1e-9
# Roots from a companion matrix in floating point are looser, multiple ones most of all.
ROOT_ERROR = 1e-2
RESIDUAL = 1e-9
MOST_LIMITS = 12
# The poles that rules are held against, by their place; the others are about the first.
PLACES = {"second pole": 1, "highest pole": -1}


def judge_rules(solution: Solution, said: Estimates) -> str:
    """Say which estimate, or its error, is wrong; "" where none is."""
    values = nominal_values(solution.judged)
    if not said.estimates:
        return ""
    if values is None:
        return "there are estimates, while a value is open"
    try:
        known = known_values(solution, said, values)
        bottom = [value_exact(b, known) for b in solution.form.denominator]
        lookup = {name: float(value) for name, value in known.items()}
        for step in solution.derivation.steps:
            # What is sought may itself be called b_1; then the coefficient bears another name.
            if step.rule == COEFFICIENT and step.defines is not None:
                lookup.setdefault(step.defines, float(value_exact(step.equation.right, known)))
        for index, b in enumerate(bottom):
            lookup.setdefault(f"b_{index}", float(b))
        for estimate in said.estimates:
            if wrong := _judge_estimate(solution, said, estimate, lookup, bottom):
                return f"{estimate.name}: {wrong}"
    except DeriveError as error:
        return f"an estimate cannot be read: {error}"
    return ""


def _judge_estimate(
    solution: Solution,
    said: Estimates,
    estimate: Estimate,
    lookup: Mapping[str, float],
    bottom: list[Fraction],
) -> str:
    if "s" in names_of(estimate.formula):
        if not _meets_line(solution, said, estimate, lookup):
            return "its value is not where its formula meets the half-power line"
    elif not math.isclose(_value(estimate.formula, lookup, 0).real, estimate.value, rel_tol=RULE_ERROR):
        return "its value is not what its formula gives"
    if estimate.unit == "rad/s":
        if not _is_pole(bottom, estimate.exact, PLACES.get(estimate.name, 0)):
            return "what it is held against is not that pole"
    elif said.bandwidth is None or estimate.exact not in (said.bandwidth.low_hz, said.bandwidth.high_hz):
        return "what it is held against is no edge of the pass band"
    error = (estimate.value - estimate.exact) / estimate.exact
    if abs(error - estimate.error) > RULE_ERROR * (1 + abs(error)):
        return "its error is another"
    if estimate.usable and abs(error) > USABLE_ERROR:
        return "it is called usable, and errs too much"
    return ""


def _value(formula: Expression, lookup: Mapping[str, float], s: complex) -> complex:
    """Give a formula's value; a name made of "pi" alone is π unless the circuit has it."""
    known: dict[str, complex] = {**lookup, "s": s}
    for name in names_of(formula):
        if name not in known and name.rstrip("_") == "pi":
            known[name] = math.pi
    return evaluate(formula, known, lambda value: complex(float(value)))


def _is_pole(bottom: list[Fraction], exact: float, index: int) -> bool:
    """Whether the value is the pole of this place, and that pole a real one."""
    degree = len(bottom) - 1
    scale = float(abs(bottom[-1])) ** (-1 / degree)
    scaled = [float(b) * scale**power for power, b in enumerate(bottom)]
    found = sorted(np.roots(scaled[::-1]), key=abs)
    if index >= len(found):
        return False
    # Roots as far out as one another stand in any order, and multiple ones come out as narrow pairs: the
    # residual tells whether a real one is there.
    if not math.isclose(abs(found[index]) * scale, abs(exact), rel_tol=ROOT_ERROR):
        return False
    at = Fraction(exact)
    terms = [b * at**power for power, b in enumerate(bottom)]
    return abs(sum(terms, Fraction(0))) <= Fraction(RESIDUAL) * sum(map(abs, terms))


def _meets_line(
    solution: Solution, said: Estimates, estimate: Estimate, lookup: Mapping[str, float]
) -> bool:
    """Whether K·N(s) over the formula is 1/√2 of the reference at the estimate's frequency."""
    if said.bandwidth is None:
        return False
    s = 2j * math.pi * estimate.value
    form = solution.form
    top: complex = 0
    for power, a in enumerate(form.numerator):
        top += evaluate(a, lookup, float) * s**power
    top *= evaluate(form.gain, lookup, float) * s**form.power_of_s
    size = abs(top / _value(estimate.formula, lookup, s)) / said.bandwidth.reference
    return math.isclose(size, math.sqrt(0.5), rel_tol=1e-6)


def judge_limits(solution: Solution, said: Estimates) -> str:
    """Say which limit of the gain is wrong, of a sample; "" where none is."""
    if not said.limits:
        return ""
    system = solution.derivation.system
    numbers = stream(solution, "limits")
    prime = numbers.prime()
    values = values_modulo(system.small_signal, numbers, prime)
    stride = max(1, -(-len(said.limits) // MOST_LIMITS))
    for limit in said.limits[::stride]:
        # Neither the symbol that goes nor a name made of it has a value here, so none can stand in the limit.
        known = {name: value for name, value in values.items() if name != limit.symbol}
        for name, definition in said.definitions:
            if set(names_of(definition)) <= known.keys():
                known[name] = value_modulo(definition, known, prime)
        ends = (numbers.below(prime), numbers.below(prime))
        above, below = _limit(solution, values, limit, ends, prime)
        if limit.limit is None:
            right = below == 0
        else:
            try:
                stated = value_modulo(limit.limit, known, prime)
            except DeriveError as error:
                return f"the limit for {limit.symbol} → {limit.to} cannot be read: {error}"
            right = below != 0 and (stated * below - above) % prime == 0
        if not right:
            return f"the limit for {limit.symbol} → {limit.to} is not that of the circuit"
    return ""


def _limit(
    solution: Solution, values: Mapping[str, int], limit: Limit, ends: tuple[int, int], prime: int
) -> tuple[int, int]:
    """Give the limit as numerator and denominator: both determinants are of first degree in any value."""
    system = solution.derivation.system
    found = []
    for at in ends:
        moved = {**values, limit.symbol: at}
        tableau = assemble(system.small_signal, excite(system), moved.__getitem__)
        found.append(lowest_modulo(tableau, prime))
    run = pow(ends[1] - ends[0], -1, prime)
    rising = tuple((two - one) * run % prime for one, two in zip(*found, strict=True))
    constant = tuple((one - rise * ends[0]) % prime for one, rise in zip(found[0], rising, strict=True))
    first, second = (constant, rising) if limit.to == "0" else (rising, constant)
    above, below = first if any(first) else second
    if not above and not below:
        raise NoSolutionError("the circuit has no unique solution at these values")
    return above, below
