"""The short form written for reading, with the assumptions that led to it and its price."""

from __future__ import annotations

from dataclasses import replace

from derive.algebra.ratio import coefficients, lowest_terms
from derive.algebra.ring import Polynomial, Ring
from derive.approximate.questions import ONE_LINE, Question, Simplified, Without
from derive.approximate.simplify_answers import Answer, Draft
from derive.approximate.simplify_desk import Desk, desk_of
from derive.approximate.simplify_original import Original
from derive.approximate.simplify_price import (
    form_value,
    frequencies,
    price_in_band,
    price_of_value,
    sampling_words,
    value_of,
)
from derive.approximate.simplify_setups import pole_asked
from derive.approximate.simplify_words import element_assumption, term_assumptions, tie_assumption
from derive.expressions.polynomials import Writer, add, multiply
from derive.expressions.tree import ONE, ZERO, Expression, Name, Power, Quotient, Root
from derive.readable.readable import definitions_used, read_ratio
from derive.readable.vocabulary import Vocabulary
from derive.topology.topology import Budget

LEFT = {
    "low-frequency gain": "K",
    "dominant pole": "p_1",
    "second pole": "p_2",
    "unity-gain frequency": "omega_u",
}
# Among more factors than this in all its terms, the words of transistors (β, r_e) take too long to find.
MOST_FACTORS = 60
# A form of up to so many terms is written for reading, in several lines where need be.
READ = 16


def refused(question: Question, reason: str) -> Simplified:
    """Give a question's refusal."""
    return Simplified(question, "refused", reason, LEFT.get(question.kind, "H"))


def found_form(
    draft: Draft, question: Question, budget: Budget, original: Original, *, readable: bool = True
) -> Simplified:
    """Write an answer, its assumptions in order, and its price."""
    answer = draft.answer
    network = original.network
    vocabulary = original.vocabulary
    # The search for the shortest writing of a long form takes long, and nobody reads it then.
    band = question.kind == "response in a band"
    form = _written(
        answer, vocabulary, readable=readable and answer.terms <= (ONE_LINE if band else READ)
    )
    lines = desk_of(original, network).lines
    if answer.terms > ONE_LINE and not band:
        form = lines.fitted(form, "")
    made: list[Without] = [element_assumption(network, c) for c in draft.changes if not c.idle]
    used = {name for name in answer.ring.names if name != "s"}
    made += [tie_assumption(name, leader) for name, leader in draft.ties if leader in used]
    more = 0
    for terms, kept in answer.dropped:
        listed, unlisted = term_assumptions(answer.ring, vocabulary.order, terms, kept)
        made += listed
        more += unlisted
    idle = tuple(network.stamps[change.place].owner for change in draft.changes if change.idle)
    value = whole = None
    sampling = ""
    if question.kind == "response in a band":
        points = frequencies(question.range_hz or (1.0, 10.0), original.resonances_hz)
        price = price_in_band(answer, original, budget, points)
        sampling = sampling_words(points)
    else:
        value, whole = value_of(answer, network.values), original_value(question, original)
        limit = budget.gain if question.kind == "low-frequency gain" else question.corner_limit
        price = price_of_value(value, whole, float(limit))
    return Simplified(
        question,
        "found" if made or more else "exact",
        "" if made or more else "nothing may be dropped within the budget",
        _left_side(question, answer, original),
        form,
        (*definitions_used((form, *(value for _, value in lines.lines)), vocabulary), *lines.lines),
        tuple((name, "") for name, _ in lines.lines),
        tuple(made),
        more,
        idle,
        draft.left,
        answer.ring,
        answer.top,
        answer.bottom,
        answer.root,
        answer.terms,
        value,
        whole,
        price,
        sampling,
        tuple(f"{name} is not tried: {why}" for name, why in network.kept),
    )


def _left_side(question: Question, answer: Answer, original: Original) -> str:
    if question.kind == "response in a band":
        return original.find.name
    if question.kind in ("dominant pole", "second pole") and answer.root == 2:
        # A pair of poles: its distance from the origin.
        return "omega_1" if question.kind == "dominant pole" else "omega_2"
    return LEFT[question.kind]


def original_value(question: Question, original: Original) -> float:
    """Give what the whole circuit has of what a question asks for."""
    if question.kind == "low-frequency gain":
        return (original.low_gain or (0.0, 0))[0]
    if question.kind == "unity-gain frequency":
        return original.unity_rad_per_s or 0.0
    pole = pole_asked(question, original) or 0j
    return pole.real if pole.imag == 0 else abs(pole)


def _written(answer: Answer, vocabulary: Vocabulary, *, readable: bool) -> Expression:
    ring = answer.ring
    if not readable:
        order = ("s", *(name for name in ring.names if name != "s"))
        ratio = Writer(ring, order).ratio(answer.top, answer.bottom)
        return ratio if answer.root == 1 else Root(ratio)
    if _factors(answer) > MOST_FACTORS:
        vocabulary = replace(vocabulary, junctions=(), definitions=())
    if all(p.degrees()[0] == 0 for p in (answer.top, answer.bottom)):
        ratio = read_ratio(ring, answer.top, answer.bottom, vocabulary)
        return ratio if answer.root == 1 else Root(ratio)
    top, bottom = (coefficients(ring, p, "s") for p in (answer.top, answer.bottom))
    low = min(top), min(bottom)
    gain = read_ratio(ring, *lowest_terms(ring, top[low[0]], bottom[low[1]]), vocabulary)
    power = low[0] - low[1]
    above = multiply([gain, *_power(power), _polynomial(ring, top, vocabulary)])
    below = multiply([*_power(-power), _polynomial(ring, bottom, vocabulary)])
    return above if below == ONE else Quotient(above, below)


def _factors(answer: Answer) -> int:
    return sum(sum(map(int, key)) for p in (answer.top, answer.bottom) for key in p.to_dict())


def _power(power: int) -> list[Expression]:
    s = Name("s")
    return [] if power <= 0 else [s if power == 1 else Power(s, power)]


def _polynomial(ring: Ring, found: dict[int, Polynomial], vocabulary: Vocabulary) -> Expression:
    lowest = min(found)
    terms: list[Expression] = [ONE]
    for power, value in found.items():
        if power > lowest:
            ratio = read_ratio(ring, *lowest_terms(ring, value, found[lowest]), vocabulary)
            terms.append(multiply([*_power(power - lowest), ratio]) if ratio != ZERO else ZERO)
    return add(terms)


def lined(
    question: Question, budget: Budget, original: Original, left: str, form: Expression, desk: Desk
) -> Simplified:
    """Give the answer that a form in the lines of a desk is, with its value and price as they are read off it."""
    form = desk.lines.fitted(form, "")
    lines = desk.lines.lines
    words = definitions_used([form, *(value for _, value in lines)], original.vocabulary)
    definitions = (*words, *lines)
    value, whole = (
        form_value(form, definitions, original.network.values),
        original_value(question, original),
    )
    limit = budget.gain if question.kind == "low-frequency gain" else question.corner_limit
    return Simplified(
        question,
        "found",
        "",
        left,
        form,
        definitions,
        tuple((name, desk.lines.words.get(name, "")) for name, _ in lines),
        desk.assumptions,
        desk.unlisted,
        terms=desk.longest,
        value=value,
        original=whole,
        price=price_of_value(value, whole, float(limit)),
        remarks=tuple(f"{name} is not tried: {why}" for name, why in original.network.kept),
    )
