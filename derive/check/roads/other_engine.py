"""The result against lcapy, an engine written by others, which solves the circuit by its own way."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from fractions import Fraction
from typing import Any

from derive.check.child import Child, answers_of, ask
from derive.check.excitation import excite
from derive.check.merged import with_merged_exact
from derive.check.netlist import write_netlist
from derive.check.points import stream, values_exact
from derive.check.reading import value_exact
from derive.check.verdict import Solution, Verdict
from derive.errors import DeriveError

NAME = "another engine"
METHOD = "lcapy solves the circuit as a function of s at whole values, no two alike"
ORDER = 70
LIMIT = "the same function of s, exactly"
SECONDS = 10.0
Polynomial = list[Fraction]


@dataclass(frozen=True, slots=True)
class Asked:
    """One solution with the values it was asked at; `reason` says why it could not be asked."""

    solution: Solution
    values: dict[str, Fraction]
    reason: str = ""


@dataclass(frozen=True, slots=True)
class Begun:
    """What was put to the engine; `child` is None where nothing could be put."""

    asked: tuple[Asked, ...]
    child: Child | None
    seconds: float


def start(solutions: Sequence[Solution], seconds: float = SECONDS) -> Begun:
    """Put the circuits to the engine, which works on while other things are done."""
    asked, questions = [], []
    for solution in solutions:
        system = solution.derivation.system
        try:
            values = values_exact(solution.judged, stream(solution, "other engine"))
            netlist = write_netlist(solution.judged, excite(system), values)
        except KeyError as error:
            asked.append(Asked(solution, {}, str(error.args[0])))
            continue
        asked.append(Asked(solution, values))
        questions.append({"lines": netlist.lines, "node": netlist.response})
    return Begun(tuple(asked), ask(questions, seconds) if questions else None, seconds)


def finish(begun: Begun) -> tuple[Verdict, ...]:
    """Hold the engine's answers against the results, one verdict a solution."""
    answers = iter(answers_of(begun.child) if begun.child is not None else ())
    return tuple(
        _undecided(f"not tried: {asked.reason}")
        if asked.reason
        else _verdict(asked, next(answers), begun.seconds)
        for asked in begun.asked
    )


def _verdict(asked: Asked, answer: dict[str, Any], seconds: float) -> Verdict:
    if "late" in answer:
        return _undecided(f"not finished in {seconds:g} s")
    if "error" in answer:
        return _undecided(f"not finished: {answer['error']}")
    try:
        return compare(asked.solution, asked.values, answer)
    except ZeroDivisionError:
        return _undecided("not decided: a coefficient cannot be formed at these values")
    except DeriveError as error:
        return Verdict(NAME, METHOD, False, f"could not be compared: {error}", LIMIT)


def _undecided(measured: str) -> Verdict:
    return Verdict(NAME, METHOD, None, measured, LIMIT)


def compare(solution: Solution, values: dict[str, Fraction], answer: dict[str, Any]) -> Verdict:
    """Compare the engine's ratio of polynomials with the printed one at the same values."""
    form = solution.form
    values = with_merged_exact(solution, values)
    top = [Fraction(text) for text in answer["top"]]
    bottom = [Fraction(text) for text in answer["bottom"]]
    gain = value_exact(form.gain, values)
    ours_top = [gain * value_exact(a, values) for a in form.numerator]
    ours_bottom = [value_exact(b, values) for b in form.denominator]
    shift = [Fraction(0)] * abs(form.power_of_s)
    if form.power_of_s >= 0:
        ours_top = shift + ours_top
    else:
        ours_bottom = shift + ours_bottom
    if _product(ours_top, bottom) == _product(top, ours_bottom):
        degree = max(len(_trimmed(top)), len(_trimmed(bottom))) - 1
        return Verdict(NAME, METHOD, True, f"equal, degree {max(degree, 0)}", LIMIT)
    return Verdict(NAME, METHOD, False, "a different function of s", LIMIT)


def _product(first: Polynomial, second: Polynomial) -> Polynomial:
    total = [Fraction(0)] * (len(first) + len(second))
    for i, a in enumerate(first):
        for j, b in enumerate(second):
            total[i + j] += a * b
    return _trimmed(total)


def _trimmed(polynomial: Polynomial) -> Polynomial:
    last = max((k for k, a in enumerate(polynomial) if a != 0), default=-1)
    return polynomial[: last + 1]


def judge(solution: Solution) -> Verdict:
    """Judge whether the engine comes to the same result, waiting for it."""
    return finish(start((solution,)))[0]
