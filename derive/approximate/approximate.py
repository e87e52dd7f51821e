"""Make the user's assumptions on one result, one on top of the other, and put down what each costs."""

from __future__ import annotations

import math
from dataclasses import dataclass

from derive.approximate.carry_out import Applied, carry_out
from derive.approximate.comparison import compare
from derive.approximate.corners import SAMPLES_A_DECADE, corners_say, toleranced
from derive.approximate.errors import Exact, edges_of, errors_of
from derive.approximate.judge import judge
from derive.approximate.register import Entry, Errors, Reduced, Register
from derive.approximate.space import Ratio, Space, form_of, numbers_of, readable_of, space_of
from derive.approximate.stationary import EXACTLY, SAMPLED, difference
from derive.bands.band_circuit import BandCircuit
from derive.eliminate.derivation import Derivation
from derive.errors import InputError
from derive.expressions.tree import Expression
from derive.normalise.form import NominalNumbers, NormalForm
from derive.readable.readable import definitions_used
from derive.readable.vocabulary import Vocabulary
from derive.topology.topology import Assumption, Budget

# Beyond this many terms, striking terms would neither be read nor be quick.
MOST_TERMS = 60_000
Range = tuple[float, float]


def approximate(
    band: BandCircuit,
    derivation: Derivation,
    form: NormalForm,
    numbers: NominalNumbers | None,
    vocabulary: Vocabulary,
) -> Register | None:
    """Give the register of the user's assumptions on a result; None where none are made for it.

    Raises: InputError where one removes the whole response.
    """
    topology = band.circuit.topology
    made = assumptions_for(topology.assumptions, derivation.system.find.name, band)
    if not made or form.is_zero:
        return None
    budget = topology.budget
    if derivation.nested is not None:
        remark = "not worked out: the result is in nested form, in which no term can be struck"
        return Register((), budget, (0.0, 0.0), "", "", "", (), remark)
    terms = len(derivation.numerator) + len(derivation.denominator)
    if terms > MOST_TERMS:
        remark = f"not worked out: the result has {terms:,} terms, more than {MOST_TERMS:,}"
        return Register((), budget, (0.0, 0.0), "", "", "", (), remark)
    space, exact_ratio = space_of(band, derivation, vocabulary)
    exact = None
    range_says = "no range: a value is left open"
    if numbers is not None:
        exact, range_says = reference(space, derivation, numbers, form.power_of_s, budget)
    work = _Work(space, exact_ratio, exact, budget)
    entries, idle, now = [], [], exact_ratio
    where = f"{derivation.system.find.name}, {band.band} band"
    for number, assumption in made:
        applied = _carried(space, now, number, assumption, where)
        if applied is None:
            idle.append(number)
            continue
        entries.append(_entry(work, number, assumption, now, applied))
        now = applied.ratio
    names, _ = toleranced(space, exact_ratio)
    return Register(
        tuple(entries),
        budget,
        exact.range_hz if exact else (0.0, 0.0),
        range_says,
        corners_say(names),
        _sampling(work, entries),
        tuple(idle),
        definitions=definitions_used(_written(entries), space.vocabulary),
    )


def _written(entries: list[Entry]) -> list[Expression]:
    """Give every expression that entries show."""
    found: list[Expression | None] = []
    for entry in entries:
        read = entry.reduced.readable
        found += [entry.smaller, entry.larger, read.gain, *read.numerator, *read.denominator]
        found += [side for side in (entry.assumption.left, entry.assumption.right)]
    return [expression for expression in found if expression is not None]


def assumptions_for(
    assumptions: tuple[Assumption, ...], find: str, band: BandCircuit
) -> list[tuple[int, Assumption]]:
    """Give the assumptions made for a result, each with its number in the file."""
    return [
        (number, assumption)
        for number, assumption in enumerate(assumptions, start=1)
        if (not assumption.finds or find in assumption.finds)
        and (not assumption.bands or band.band in assumption.bands)
    ]


@dataclass(frozen=True, slots=True, eq=False)
class _Work:
    """What every assumption on one result is judged with."""

    space: Space
    ratio: Ratio
    exact: Exact | None
    budget: Budget


def _carried(
    space: Space, ratio: Ratio, number: int, assumption: Assumption, where: str
) -> Applied | None:
    try:
        return carry_out(space, ratio, assumption)
    except InputError as error:
        raise InputError(
            f"assumption {number}: {error.what} ({where})", where=error.where, cure=error.cure
        ) from None


def _entry(work: _Work, number: int, assumption: Assumption, before: Ratio, applied: Applied) -> Entry:
    space, exact = work.space, work.exact
    reduced = reduced_of(space, applied)
    try:
        alone = applied if before is work.ratio else carry_out(space, work.ratio, assumption)
    except InputError:
        # By itself it would remove the response; only together with others does it leave one.
        alone = None
    comparison = compare(space, assumption, applied)
    together = _errors(reduced.numbers, reduced.form.power_of_s, exact)
    by_itself = together
    if alone is not applied:
        by_itself = _errors_of_ratio(space, alone.ratio, exact) if alone else None
    judgement = judge(
        space,
        assumption,
        comparison,
        work.ratio,
        (applied.ratio, alone.ratio if alone else None),
        (together, by_itself),
        work.budget,
        exact,
    )
    return Entry(
        number,
        assumption,
        comparison.smaller if comparison else None,
        comparison.larger if comparison else None,
        comparison.nominal(space) if comparison else None,
        reduced,
        by_itself,
        together,
        judgement.worst,
        judgement.status,
        judgement.reason,
    )


def reduced_of(space: Space, applied: Applied) -> Reduced:
    """Give the reduced result of a ratio after an assumption, in normal form, for reading and in numbers."""
    form = form_of(space, applied.ratio)
    return Reduced(
        form,
        readable_of(space, form),
        numbers_of(space, applied.ratio),
        space.ring,
        applied.ratio.top,
        applied.ratio.bottom,
        applied.how,
        applied.says,
        applied.struck,
        applied.left,
        applied.shown,
    )


def _errors(numbers: NominalNumbers | None, power: int, exact: Exact | None) -> Errors | None:
    if numbers is None or exact is None:
        return None
    return errors_of(numbers, power, exact)


def _errors_of_ratio(space: Space, ratio: Ratio, exact: Exact | None) -> Errors | None:
    return _errors(numbers_of(space, ratio), form_of(space, ratio).power_of_s, exact)


def reference(
    space: Space, derivation: Derivation, numbers: NominalNumbers, power: int, budget: Budget
) -> tuple[Exact, str]:
    """Give what errors are counted from, and where its range of frequencies comes from in words."""
    band = space.band.band
    impedance = derivation.system.find.quantity == "impedance"
    edges = edges_of(numbers, power, band, impedance=impedance)
    low, high = (edges.low_hz, edges.high_hz) if edges else (None, None)
    sides = (("lower", low), ("upper", high))
    own = [(f"{side} −3 dB frequency", edge) for side, edge in sides if edge is not None]
    chosen, says = default_range(numbers, low, high)
    if budget.range_hz is not None:
        chosen, says = (float(budget.range_hz[0]), float(budget.range_hz[1])), "stated by the user"
    named = [("lower end of the range", chosen[0]), *own, ("upper end of the range", chosen[1])]
    distinct = {hertz: name for name, hertz in reversed(named)}
    distinct |= {hertz: name for name, hertz in own}
    ordered = tuple((name, hertz) for hertz, name in sorted(distinct.items()))
    return Exact(numbers, power, band, impedance, edges, chosen, ordered), says


def default_range(numbers: NominalNumbers, low: float | None, high: float | None) -> tuple[Range, str]:
    """Give the range over which errors are counted where the user stated none.

    It is the pass band to −3 dB. Where that is open, a decade beyond the lowest or the highest corner takes
    the place of its end; a response without corners is the same at every frequency.
    """
    sizes = [root.magnitude / (2 * math.pi) for root in (*numbers.poles, *numbers.zeros)]
    corners = [size for size in sizes if size > 0]
    if not corners:
        return (1.0, 1.0e9), "any: the exact response has no corner"
    beyond_low, beyond_high = min(corners) / 10, max(corners) * 10
    says = "the pass band to −3 dB"
    if low is None and high is None:
        says = "from a decade below the lowest corner to a decade above the highest"
    elif low is None:
        says += ", from a decade below the lowest corner"
        beyond_low = min(beyond_low, (high or beyond_low) / 10)
    elif high is None:
        says += ", to a decade above the highest corner"
        beyond_high = max(beyond_high, low * 10)
    return (low or beyond_low, high or beyond_high), says


def _sampling(work: _Work, entries: list[Entry]) -> str:
    if work.exact is None:
        return ""
    exact = work.exact
    kinds = []
    for entry in entries:
        reduced = entry.reduced
        if reduced.numbers is not None:
            found = difference(reduced.numbers, exact.numbers, reduced.form.power_of_s - exact.power)
            kinds.append(SAMPLED if found is not None and found.sampled else EXACTLY)
    nominal = SAMPLED if SAMPLED in kinds else EXACTLY
    return f"nominal values: {nominal}; corners: {SAMPLES_A_DECADE} frequencies a decade"
