"""Assumptions judged from the circuit: each reduced result, its errors, and the status that they lead to."""

from __future__ import annotations

import math
from collections.abc import Mapping
from fractions import Fraction

from derive.approximate.register import Entry, Register, Worst
from derive.check.assumed_circuit import Anew, Stage, without
from derive.check.assumed_errors import Pair, differs, pair_at, tableau_of, worst_of
from derive.check.merged import with_merged_exact
from derive.check.points import stream, values_modulo
from derive.check.reading import form_modulo, value_exact, value_modulo
from derive.check.roads.nominal import nominal_values
from derive.check.solve import NoSolutionError
from derive.check.verdict import Solution, Verdict
from derive.check.words import count
from derive.errors import DeriveError
from derive.topology.topology import Budget

NAME = "assumptions"
METHOD = (
    "each reduced result from the circuit's tableau, parts taken out of it or struck terms put back, at random "
    "points modulo a prime; errors from the tableau's response and the printed form; status at nominal and corners"
)
ORDER = 79
LIMIT = "equal at every point; errors equal to 5 digits"
POINTS = 2
TRIES = 6
CORNERS = 8
ROOM = 1e-6


def _why_none(solution: Solution) -> str:
    """Say why there is nothing to judge."""
    if solution.derivation.system.small_signal.topology.assumptions:
        return "not worked out for this result"
    return "none are made for this result"


def judge(solution: Solution) -> Verdict:
    """Judge the register of assumptions."""
    register = solution.register
    if register is None or not register.entries:
        return Verdict(NAME, METHOD, None, _why_none(solution), "", applies=False)
    try:
        wrong = _wrong_result(solution, register) or _wrong_errors(solution, register)
    except (DeriveError, ValueError, NoSolutionError, ZeroDivisionError) as error:
        return Verdict(NAME, METHOD, False, f"could not be worked: {error}", LIMIT)
    if wrong:
        return Verdict(NAME, METHOD, False, wrong, LIMIT)
    measured = f"{count(len(register.entries), 'assumption')}: equal at {count(POINTS, 'point')}"
    if nominal_values(solution.judged) is None:
        return Verdict(NAME, METHOD, True, f"{measured}; a value is left open", LIMIT)
    return Verdict(NAME, METHOD, True, f"{measured}, errors agree", LIMIT)


def _wrong_result(solution: Solution, register: Register) -> str:
    """Say which reduced result is not what its assumption leaves of the one before; "" where none."""
    numbers = stream(solution, "assumptions")
    agreed = 0
    for _ in range(TRIES):
        prime = numbers.prime()
        anew = Anew(solution, prime)
        values = values_modulo(solution.judged, numbers, prime)
        values["s"] = numbers.below(prime)
        try:
            for entry, stage in _stages(anew, register):
                if wrong := _wrong_at(anew, entry, stage, values):
                    return f"assumption {entry.number} ({entry.assumption.that}): {wrong}"
        except (NoSolutionError, ZeroDivisionError):
            continue
        agreed += 1
        if agreed == POINTS:
            return ""
    return "no point could be worked"


def _stages(anew: Anew, register: Register) -> list[tuple[Entry, Stage]]:
    """Give for each assumption the response that it stands on, or leads to where it is a limit or a tie."""
    found: list[tuple[Entry, Stage]] = []
    stage = anew.begin()
    for entry in register.entries:
        if entry.reduced.how == "coefficients":
            found.append((entry, stage))
            stage = anew.printed(entry.reduced.form)
        else:
            stage = anew.after(stage, entry.assumption)
            found.append((entry, stage))
    return found


def _wrong_at(anew: Anew, entry: Entry, stage: Stage, values: Mapping[str, int]) -> str:
    prime, reduced = anew.prime, entry.reduced
    known = anew.known(values)
    printed = form_modulo(reduced.form, known, prime)
    if reduced.how != "coefficients":
        return "" if printed == stage.at(values) else "the circuit gives another reduced result"
    if reduced.left is None or not reduced.struck:
        return "it strikes nothing"
    point = [known.get(name, 0) for name in reduced.ring.names]
    top, bottom = (int(polynomial(*point)) % prime for polynomial in reduced.left)
    if (top - printed * bottom) % prime:
        return "what is left of the terms is not what is printed"
    for term in reduced.struck:
        worth = value_modulo(term.term, known, prime) * pow(known["s"], term.power, prime)
        if term.of == "numerator":
            top += worth
        else:
            bottom += worth
    if (top - stage.at(values) * bottom) % prime:
        return "with the struck terms put back it is not the result before"
    return ""


def _wrong_errors(solution: Solution, register: Register) -> str:
    values = nominal_values(solution.judged)
    if values is None:
        return ""
    for entry in register.entries:
        where = f"assumption {entry.number} ({entry.assumption.that}): "
        pair = pair_at(solution, entry.reduced.form, values)
        if entry.together is None:
            nothing = any(side == 0 for side in (*pair.reduced, *pair.exact))
            if nothing and entry.status == "fails":
                continue
            return f"{where}it has no errors"
        if wrong := differs(entry.together, pair):
            return f"{where}{wrong}, with those before it, differs from what the circuit gives"
        wrong = _wrong_alone(solution, entry, values) or _wrong_ratio(solution, entry, values)
        wrong = wrong or _wrong_status(solution, entry, register, values)
        if wrong:
            return f"{where}{wrong}"
    return ""


def _wrong_alone(solution: Solution, entry: Entry, values: Mapping[str, Fraction]) -> str:
    """Judge the errors of an assumption by itself, where it takes parts out of the circuit."""
    pair = None if entry.alone is None else _alone_at(solution, entry, values)
    wrong = "" if entry.alone is None or pair is None else differs(entry.alone, pair)
    return f"{wrong}, by itself, differs from what the circuit gives" if wrong else ""


def _wrong_ratio(solution: Solution, entry: Entry, values: Mapping[str, Fraction]) -> str:
    ratio = None if entry.ratio is None else _ratio_at(solution, entry, values)
    if ratio is None or entry.ratio is None:
        return ""
    agrees = math.isclose(ratio, entry.ratio, rel_tol=1e-9, abs_tol=1e-12)
    return "" if agrees else f"the ratio of its terms is {ratio:.4g}"


def _wrong_status(
    solution: Solution, entry: Entry, register: Register, values: Mapping[str, Fraction]
) -> str:
    errors = entry.together
    if errors is None:
        return ""
    budget = register.budget
    nominal = Worst(entry.ratio, errors.gain, errors.magnitude_db, errors.phase_deg)
    sized = entry.assumption.form in ("much_greater", "much_less")
    broken = breaks(nominal, budget, sized=sized)
    alone = entry.alone
    if alone is not None:
        by_itself = Worst(None, alone.gain, alone.magnitude_db, alone.phase_deg)
        broken = broken or breaks(by_itself, budget, sized=False)
    if broken != (entry.status == "fails"):
        return f'its status is "{entry.status}", which its errors at the nominal values contradict'
    if entry.status == "fails":
        return ""
    return _wrong_at_corners(solution, entry, register, values)


def breaks(worst: Worst, budget: Budget, *, sized: bool) -> bool:
    """Whether errors break a limit, or the term that is to be smaller is none."""
    limits = [(worst.magnitude_db, budget.magnitude_db), (worst.phase_deg, budget.phase_deg)]
    limits += [(worst.gain, budget.gain)] if worst.gain is not None else []
    over = any(abs(error) > float(limit) * (1 + ROOM) for error, limit in limits)
    return over or (sized and worst.ratio is not None and worst.ratio >= 1)


def _wrong_at_corners(
    solution: Solution, entry: Entry, register: Register, values: Mapping[str, Fraction]
) -> str:
    """Look at the corner that breaks a limit, or at some of those of which none is to break one."""
    if entry.worst is None:
        return "nothing is said of its corners"
    tolerances = {s.name: s.tolerance for s in solution.judged.symbols if s.tolerance and s.value}
    frequencies = _frequencies(register.range_hz)
    if entry.status == "fails at a corner":
        moved = dict(values)
        for words in entry.worst.at:
            name, _, change = words.partition(" ")
            moved[name] *= 1 + (1 if change.startswith("+") else -1) * (tolerances.get(name) or 0)
        if entry.worst.at and _broken_at(solution, entry, register, moved, frequencies):
            return ""
        # Terms struck by themselves leave no circuit, so that a limit broken so cannot be judged here.
        untold = entry.reduced.how != "circuit" and entry.alone is not entry.together
        return "" if untold and entry.worst.at else "the corner that it names breaks no limit"
    numbers = stream(solution, f"corners {entry.number}")
    for _ in range(CORNERS if tolerances else 0):
        moved = dict(values)
        for name, tolerance in tolerances.items():
            moved[name] *= 1 + (1 if numbers.below(3) == 1 else -1) * tolerance
        if _broken_at(solution, entry, register, moved, frequencies):
            return "it holds at every corner, and yet one was found at which it does not"
    return ""


def _broken_at(
    solution: Solution,
    entry: Entry,
    register: Register,
    values: Mapping[str, Fraction],
    frequencies: list[float],
) -> bool:
    """Whether a limit is broken at some values, with the assumptions before it or by itself."""
    sized = entry.assumption.form in ("much_greater", "much_less")
    found = worst_of(pair_at(solution, entry.reduced.form, values), register.range_hz, frequencies)
    ratio = _ratio_at(solution, entry, values) if sized else None
    found = Worst(ratio, found.gain, found.magnitude_db, found.phase_deg)
    if breaks(found, register.budget, sized=sized):
        return True
    alone = _alone_at(solution, entry, values)
    if alone is None:
        return False
    return breaks(worst_of(alone, register.range_hz, frequencies), register.budget, sized=False)


def _ratio_at(solution: Solution, entry: Entry, values: Mapping[str, Fraction]) -> float | None:
    """Give the ratio of the smaller term to the larger; None where there are no two."""
    if entry.smaller is None or entry.larger is None:
        return None
    known = with_merged_exact(solution, values, Anew(solution, 2).words.definitions)
    return abs(float(value_exact(entry.smaller, known) / value_exact(entry.larger, known)))


def _alone_at(solution: Solution, entry: Entry, values: Mapping[str, Fraction]) -> Pair | None:
    """Give the response under an assumption by itself and that of the circuit; None where no part goes."""
    if entry.reduced.how != "circuit":
        return None
    left = without(solution.judged, Anew(solution, 2).weights(entry.assumption))
    if left is None:
        return None
    return Pair(tableau_of(left, solution, values), tableau_of(solution.judged, solution, values))


def _frequencies(range_hz: tuple[float, float]) -> list[float]:
    low, high = range_hz
    steps = max(2, min(100, math.ceil(20 * math.log10(high / low)) + 1)) if low < high else 2
    return [low * (high / low) ** (k / (steps - 1)) for k in range(steps)]
