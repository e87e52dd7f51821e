"""What is said of poles, zeros and corners, judged in the circuit's own tableau."""

from __future__ import annotations

from collections.abc import Callable

from derive.check.estimates_of_gain import judge_limits, judge_rules
from derive.check.estimates_of_response import judge_bandwidth
from derive.check.estimates_of_roots import judge_closed_forms, judge_sensitivities
from derive.check.solve import NoSolutionError
from derive.check.verdict import Solution, Verdict
from derive.check.words import count
from derive.estimates.estimates import Estimates

NAME = "estimates"
METHOD = (
    "closed forms put into the tableau's own determinants at values no two alike; the half-power line met "
    "at every corner and by a sweep nowhere else; errors worked anew; sensitivities by differences of the "
    "determinants; limits modulo a random 61-bit prime"
)
ORDER = 78
LIMIT = "all that is stated holds"


def judge(solution: Solution) -> Verdict:
    """Judge whether closed forms, estimates, bandwidth, sensitivities and limits are right."""
    said = solution.estimates
    if said is None:
        return Verdict(NAME, METHOD, None, "not tried: nothing is stated", LIMIT, applies=False)
    roads: tuple[Callable[[Solution, Estimates], str], ...] = (
        judge_closed_forms,
        judge_rules,
        judge_bandwidth,
        judge_sensitivities,
        judge_limits,
    )
    undecided = ""
    for road in roads:
        try:
            if wrong := road(solution, said):
                return Verdict(NAME, METHOD, False, wrong, LIMIT)
        except (NoSolutionError, ZeroDivisionError, OverflowError) as error:
            undecided = undecided or f"not decided: {error}"
    if undecided:
        return Verdict(NAME, METHOD, None, undecided, LIMIT)
    return Verdict(NAME, METHOD, True, _counted(said), LIMIT)


def _counted(said: Estimates) -> str:
    crossings = len(said.bandwidth.crossings_hz) if said.bandwidth else 0
    sensitivities = sum(len(root.by_symbol) for root in said.sensitivities)
    numbers = (
        (len(said.closed_forms), "closed form"),
        (len(said.estimates), "estimate"),
        (crossings, "crossing"),
        (len(said.limits), "limit"),
    )
    words = [count(number, noun) for number, noun in numbers if number]
    if sensitivities:
        words.append("1 sensitivity" if sensitivities == 1 else f"{sensitivities} sensitivities")
    return ", ".join(words) or "nothing to judge"
