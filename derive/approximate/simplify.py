"""Find the shortest form that answers a question within a budget of error.

Elements are taken out and shorted on trial, the least harmful first, within a part of the budget; the rest of
the circuit is expanded, matched parts tied, and small terms dropped within what is left of it.
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Sequence
from dataclasses import dataclass, replace
from fractions import Fraction

import numpy as np

from derive.approximate.questions import FOUR_QUESTIONS, ONE_LINE, Question, Simplified
from derive.approximate.simplify_answers import Answer, Draft, band_answer, value_answer
from derive.approximate.simplify_expand import Expanded, expand
from derive.approximate.simplify_form import found_form, refused
from derive.approximate.simplify_greedy import Reduction
from derive.approximate.simplify_original import Original
from derive.approximate.simplify_price import frequencies, price_in_band
from derive.approximate.simplify_rooted import rooted_form
from derive.approximate.simplify_setups import Setup, at_pole, in_band, low_frequency, pole_asked, unity
from derive.approximate.simplify_staged import staged_form
from derive.approximate.simplify_trials import Change
from derive.devices.elements import SmallSignal, VoltageDrive
from derive.errors import InputError, SingularError, TooLargeError
from derive.readable.vocabulary import Vocabulary
from derive.topology.topology import Budget, Find

# The parts of the budget that the elements may use, in the order in which they are tried: the rest is for
# terms. More only where the circuit left is still too large, or no one ratio comes near.
ELEMENT_PARTS = (0.5, 0.8, 0.25)
# Sampling misses a little between its points, and rounding must not pass the limit.
TERM_PART = 0.98
TIGHTER = (TERM_PART, 0.8, 0.6)
# Up to this many terms without ties, it is seen whether the ties are worth it.
UNTIED_TERMS = 200
# A form of more terms than this answers nothing.
LONGEST = 60
# Where no form of one line is within the budget, these limits are tried for one beyond it.
WIDER = (Fraction(1, 10), Fraction(1, 5), Fraction(3, 10), Fraction(1, 2))


@dataclass(frozen=True, slots=True)
class _Way:
    """A question made ready, and the one way down that serves all its limits."""

    setup: Setup
    reduction: Reduction


def simplify(
    circuit: SmallSignal,
    find: Find,
    question: Question,
    budget: Budget,
    original: Original | None = None,
    *,
    readable: bool = True,
) -> Simplified:
    """Give the shortest form found that answers a question with errors within the budget.

    Given: `original`, where several questions are asked of the same circuit, so that it is worked once;
    whether the form is to be written for reading, which may take longer than to find it.
    Gives: a `Simplified`; where there is no such form, one that says why. Where none of one line is within
    the budget, it carries one beyond it.
    Raises: InputError where a value is open, or a response in a band is asked for without a range.
    """
    whole = original or Original(circuit, find, None)
    try:
        return _simplified(question, budget, whole, readable=readable)
    except np.linalg.LinAlgError:
        return refused(question, "the circuit cannot be solved in floating point")


def _simplified(question: Question, budget: Budget, whole: Original, *, readable: bool) -> Simplified:
    unanswerable = _unanswerable(question, whole)
    if unanswerable:
        return refused(question, unanswerable)
    setup = _setup(question, budget, whole)
    way = _Way(setup, Reduction(setup.bench, setup.measure))
    draft, reason = _shortest(question, budget, whole, way)
    # A response in a band is written coefficient by coefficient: of more than one line, but still to be read.
    band = question.kind == "response in a band"
    if draft is not None and draft.answer.terms > LONGEST:
        reason = f"the shortest form found within the budget has {draft.answer.terms:,} terms"
        draft = None
    long = draft is None or draft.answer.terms > ONE_LINE
    found = _in_lines(question, budget, whole, way) if long and not band else None
    if found is None and draft is not None:
        found = found_form(draft, question, budget, whole, readable=readable)
    found = found or refused(question, reason)
    if draft is not None and (band or not long):
        return found
    for wider_question, wider_budget, scale in _wider(question, budget):
        other, _ = _shortest(wider_question, wider_budget, whole, way, scale)
        if other is not None and other.answer.terms <= ONE_LINE:
            beyond = found_form(other, question, budget, whole, readable=readable)
            # With more room for the way, the end may yet lie within the budget.
            return beyond if beyond.within else replace(found, beyond=beyond)
    return found


def _in_lines(question: Question, budget: Budget, original: Original, way: _Way) -> Simplified | None:
    """Give an answer in several short lines, where one does not do; None where there is none."""
    if question.kind not in ("low-frequency gain", "dominant pole", "second pole"):
        return None
    try:
        found = staged_form(question, budget, original)
        if found is not None or question.kind == "low-frequency gain":
            return found
        for part in ELEMENT_PARTS:
            bench, changes = way.reduction.to(part)
            found = rooted_form(question, budget, original, bench, changes)
            if found is not None:
                return found
    except np.linalg.LinAlgError:
        return None
    return None


def _wider(question: Question, budget: Budget) -> Iterator[tuple[Question, Budget, float]]:
    """Give the question with wider and wider limits, up to the widest that is worth a look, and how much wider."""
    for limit in WIDER:
        if question.kind == "low-frequency gain" and limit > budget.gain:
            yield question, replace(budget, gain=limit), float(limit / budget.gain)
        elif question.kind == "response in a band":
            decibels, degrees = budget.magnitude_db, budget.phase_deg
            times = 10 * limit
            wider = replace(budget, magnitude_db=decibels * times, phase_deg=degrees * times)
            yield question, wider, float(times)
        elif question.kind != "low-frequency gain" and limit > question.corner_limit:
            yield replace(question, corner_limit=limit), budget, float(limit / question.corner_limit)


def _shortest(
    question: Question, budget: Budget, original: Original, way: _Way, scale: float = 1.0
) -> tuple[Draft | None, str]:
    """Give the shortest answer, or None and the reason why there is none."""
    reason = ""
    for part in ELEMENT_PARTS:
        bench, made = way.reduction.to(part * scale)
        changes = tuple(replace(change, error=change.error / scale) for change in made)
        draft, why = _drafted(replace(way.setup, bench=bench), changes, question, budget, original)
        if draft is not None:
            return draft, ""
        reason = reason or why
    return None, reason


def simplify_all(
    circuit: SmallSignal,
    find: Find,
    budget: Budget,
    questions: Sequence[Question] = FOUR_QUESTIONS,
    *,
    readable: bool = True,
    vocabulary: Vocabulary | None = None,
    taken: Iterable[str] = (),
) -> tuple[Simplified, ...]:
    """Answer several questions on one circuit; where the budget states a range, the response over it as well.

    Given: `taken`, names that have a meaning already.
    Gives a refusal to each where nothing can be judged small: a value is open, or a resistance zero.
    """
    original = Original(circuit, find, vocabulary, frozenset(taken))
    asked = list(questions)
    if budget.range_hz is not None:
        low, high = budget.range_hz
        asked.append(Question("response in a band", (float(low), float(high))))
    try:
        _ = original.network
    except InputError as error:
        return tuple(refused(question, error.what) for question in asked)
    return tuple(
        simplify(circuit, find, question, budget, original, readable=readable) for question in asked
    )


def _unanswerable(question: Question, original: Original) -> str:
    """Give the reason why a question has no answer; "" where it may have one."""
    if question.kind == "response in a band":
        if question.range_hz is None or not 0 < question.range_hz[0] < question.range_hz[1]:
            raise InputError(
                "a response in a band is simplified over a range of frequencies, and none is stated",
                cure='write one in [budget], such as range = ["1 kHz", "1 MHz"]',
            )
        return ""
    if original.exact is None:
        return "the circuit has no unique solution at its nominal values"
    if original.exact.is_zero:
        return "there is no response"
    if question.kind == "unity-gain frequency" and not _has_no_unit(original):
        return "the response has a unit, so that a size of one says nothing"
    if question.kind == "unity-gain frequency" and original.unity_rad_per_s is None:
        return "the size of the response nowhere falls through one"
    if question.kind == "dominant pole" and pole_asked(question, original) is None:
        return "the response has no pole away from zero frequency"
    if question.kind == "second pole" and pole_asked(question, original) is None:
        return "the response has one pole, or one pair of poles, only"
    return ""


def _has_no_unit(original: Original) -> bool:
    """Whether the response is a voltage per voltage, or a current per current."""
    find, drives = original.find, {drive.name: drive for drive in original.circuit.drives}
    if find.quantity == "impedance":
        return False
    per = [isinstance(drives[name], VoltageDrive) for name, _ in find.per if name in drives]
    return all(voltage == (find.quantity == "voltage") for voltage in per)


def _setup(question: Question, budget: Budget, original: Original) -> Setup:
    if question.kind == "low-frequency gain":
        return low_frequency(original, budget)
    if question.kind == "unity-gain frequency":
        return unity(original, question, original.unity_rad_per_s or 1.0)
    if question.kind == "response in a band":
        return in_band(original, budget, question.range_hz or (1.0, 10.0))
    return at_pole(original, question, pole_asked(question, original) or -1)


def _drafted(
    setup: Setup, changes: tuple[Change, ...], question: Question, budget: Budget, original: Original
) -> tuple[Draft | None, str]:
    """Expand what is left and drop terms: with matched parts tied, or without where that is no longer."""
    drafts: list[Draft] = []
    reason = ""
    for tie in (True, False):
        if drafts and drafts[0].answer.terms > 2 * ONE_LINE:
            break
        try:
            expanded = expand(setup.bench, tie=tie, **({} if tie else {"most": UNTIED_TERMS}))
        except TooLargeError:
            reason = reason or "what is left of the circuit within the budget is too long to be expanded"
            continue
        except SingularError as error:
            reason = reason or error.what
            continue
        answer, why = _answered(expanded, setup, question, budget, original)
        reason = reason or why
        if answer is not None:
            left = _left(setup)
            drafts.append(Draft(answer, changes, expanded.ties, left))
        if not expanded.ties:
            break
    if not drafts:
        return None, reason
    return min(drafts, key=lambda draft: (draft.answer.terms, len(draft.ties))), ""


def _left(setup: Setup) -> tuple[str, ...]:
    stamps = setup.bench.network.stamps
    return tuple(
        dict.fromkeys(
            stamp.owner for stamp, there in zip(stamps, setup.bench.there, strict=True) if there
        )
    )


def _answered(
    expanded: Expanded, setup: Setup, question: Question, budget: Budget, original: Original
) -> tuple[Answer | None, str]:
    if question.kind != "response in a band":
        answer, nearest = value_answer(expanded, question, budget, original, TERM_PART)
        if answer is not None:
            return answer, ""
        if not np.isfinite(nearest):
            return None, "what is left of the circuit does not have it as a ratio of two coefficients"
        limit = budget.gain if question.kind == "low-frequency gain" else question.corner_limit
        off = f"the nearest is off by {100 * nearest * float(limit):.3g} %"
        return None, f"no ratio of two coefficients comes within the budget: {off}"
    points = frequencies(question.range_hz or (1.0, 10.0), original.resonances_hz)
    for tight in TIGHTER:
        answer = band_answer(expanded, original.network, original, budget, setup.samples, tight)
        if answer is None:
            return None, "the reduced circuit is too far off"
        if price_in_band(answer, original, budget, points).used <= 1:
            return answer, ""
    return None, "between the sampled frequencies the error passes the budget"
