"""What changed between two sets of results: coefficients term by term, gain, poles, bandwidth, checks that flipped."""

from __future__ import annotations

import math
from collections.abc import Iterator, Sequence
from fractions import Fraction

from derive.check.verdict import Outcome, Result, Solution, Verdict
from derive.expressions.tree import ONE, Expression
from derive.normalise.form import CertifiedRoot
from derive.quantities.dimension import CURRENT, RATIO, RESISTANCE, Dimension
from derive.quantities.format import engineering
from derive.quantities.symbol import Symbol
from derive.review.redline.nouns import POINT, Change, Sign
from derive.review.redline.terms import same_value, term_changes
from derive.sheet.document import Inline, Line, Maths, Text
from derive.sheet.figures import hertz, root_value
from derive.topology.topology import Find, Topology

# Roots and edges are rounded: nearer than this they are the same.
ALIKE = 1e-9
DIGITS = 6
_STATES = {True: "passed", False: "failed", None: "not decided"}
Key = tuple[str, str]


def point_changes(old: Outcome, new: Outcome) -> Iterator[Change]:
    """Give what changed in the values that follow from the operating point, and in its checks."""
    currents = [_currents(outcome) for outcome in (old, new)]
    for part in dict.fromkeys((*currents[0], *currents[1])):
        first, second = (side.get(part) for side in currents)
        if first != second:
            yield _change(POINT, part, "current", _amperes(first), _amperes(second))
    before, after = (_derived(outcome) for outcome in (old, new))
    for name in dict.fromkeys((*before, *after)):
        old_symbol, new_symbol = before.get(name), after.get(name)
        if old_symbol is None or new_symbol is None or old_symbol.value != new_symbol.value:
            yield _change(POINT, name, "value", _valued(old_symbol), _valued(new_symbol))
    states = [_point_checks(outcome) for outcome in (old, new)]
    yield from _flips(POINT, *states)


def result_changes(old: Outcome, new: Outcome) -> Iterator[Change]:
    """Give what changed in each result, and which results came in or went."""
    before, after = (_results(outcome) for outcome in (old, new))
    for key in dict.fromkeys((*before, *after)):
        group = f"{key[0]}, {key[1]} band"
        if key not in before or key not in after:
            here = before.get(key) or after[key]
            gain = (Text("gain "), Maths(_readable(here.solution)))
            sides = (gain, ()) if key in before else ((), gain)
            yield _change(group, key[0], "result", *sides)
            continue
        yield from _result(group, before[key], after[key], new.circuit.topology)


def _results(outcome: Outcome) -> dict[Key, Result]:
    return {
        (result.solution.derivation.system.find.name, result.solution.band_name): result
        for result in outcome.results
    }


def _result(group: str, old: Result, new: Result, topology: Topology) -> Iterator[Change]:
    first, second = old.solution, new.solution
    yield from _gain_value(group, first, second, topology)
    yield from _expressions(group, first, second)
    yield from _numbers(group, first, second)
    yield from _flips(group, _checks(old), _checks(new))


def _expressions(group: str, old: Solution, new: Solution) -> Iterator[Change]:
    if old.form.power_of_s != new.form.power_of_s:
        powers = ((Text(f"s^{form.power_of_s}"),) for form in (old.form, new.form))
        yield _change(group, "s", "power before the fraction", *powers)
    if not same_value(old.form.gain, new.form.gain):
        shown = (Maths(_readable(old)),), (Maths(_readable(new)),)
        yield _change(group, "gain", "expression", *shown)
        yield from _terms(group, "gain", old.form.gain, new.form.gain)
    sides = (
        ("a", old.form.numerator, new.form.numerator),
        ("b", old.form.denominator, new.form.denominator),
    )
    for letter, before, after in sides:
        for power in range(1, max(len(before), len(after))):
            name = f"{letter}_{power}"
            first = before[power] if power < len(before) else None
            second = after[power] if power < len(after) else None
            if first is None or second is None:
                yield _change(group, name, "coefficient", _maths(first), _maths(second))
            elif not same_value(first, second):
                yield from _terms(group, name, first, second)
    meanings = dict(old.form.definitions), dict(new.form.definitions)
    for name in dict.fromkeys((*meanings[0], *meanings[1])):
        first, second = meanings[0].get(name), meanings[1].get(name)
        if first is None or second is None or not same_value(first, second):
            yield _change(group, name, "definition", _maths(first), _maths(second))


def _terms(group: str, name: str, old: Expression, new: Expression) -> Iterator[Change]:
    """Give the terms that came in and went out, one by one."""
    found = term_changes(old, new)
    for which, scale in (("before", found.scaled), ("after", found.scaled_new)):
        if scale != ONE:
            line: Line = (Text(f"{which}, above and below the bar, to be compared: "), Maths(scale))
            yield Change("changed", group, name, "multiplied", (), line)
    for place, went, came in (
        ("above", found.went_above, found.came_above),
        ("below", found.went_below, found.came_below),
    ):
        for term in went:
            yield Change("removed", group, name, f"term {place} the bar", before=(Maths(term),))
        for term in came:
            yield Change("added", group, name, f"term {place} the bar", after=(Maths(term),))


def _gain_value(group: str, old: Solution, new: Solution, topology: Topology) -> Iterator[Change]:
    dimension = _dimension(new.derivation.system.find, topology)
    gains = [solution.numbers.gain if solution.numbers else None for solution in (old, new)]
    if gains[0] != gains[1]:
        yield _change(group, "gain", "value", *(_figure(gain, dimension) for gain in gains))


def _numbers(group: str, old: Solution, new: Solution) -> Iterator[Change]:
    for kind in ("poles", "zeros"):
        roots = [getattr(s.numbers, kind) if s.numbers else () for s in (old, new)]
        if not _same_roots(*roots):
            yield _change(group, kind, "at nominal values", *(_roots(found) for found in roots))
    bandwidths = [s.estimates.bandwidth if s.estimates else None for s in (old, new)]
    for side in ("low_hz", "high_hz"):
        edges = [getattr(found, side) if found else None for found in bandwidths]
        if not _alike(*edges):
            words = "low −3 dB frequency" if side == "low_hz" else "high −3 dB frequency"
            yield _change(
                group, "bandwidth", words, *(_line(hertz(e, DIGITS) if e else "") for e in edges)
            )


def _flips(group: str, old: dict[str, bool | None], new: dict[str, bool | None]) -> Iterator[Change]:
    for name in dict.fromkeys((*old, *new)):
        if name in old and name in new and old[name] != new[name]:
            states = ((Text(_STATES[side[name]]),) for side in (old, new))
            yield _change(group, name, "check", *states)


def _checks(result: Result) -> dict[str, bool | None]:
    def state(verdict: Verdict) -> bool | None:
        return verdict.passed

    found = {verdict.name: state(verdict) for verdict in result.verdicts if verdict.applies}
    register = result.solution.register
    return found if register is None else found | {"assumptions within their limits": not register.failed}


def _point_checks(outcome: Outcome) -> dict[str, bool | None]:
    point = outcome.point
    if point is None:
        return {}
    found: dict[str, bool | None] = {f"region of {c.part}": c.passed for c in point.regions}
    return found | {f"current of {c.part} by Newton's method": c.passed for c in point.newton}


def _derived(outcome: Outcome) -> dict[str, Symbol]:
    """Give the symbols that follow from others: what is given stands in the circuit."""
    devices = outcome.circuit.devices
    follow = {line.symbol for device in devices for line in device.lines if line.says != "given"}
    return {symbol.name: symbol for symbol in outcome.circuit.symbols if symbol.name in follow}


def _currents(outcome: Outcome) -> dict[str, Fraction]:
    return {device.part: device.current for device in outcome.point.devices} if outcome.point else {}


def _amperes(current: Fraction | None) -> Line:
    return () if current is None else (Text(engineering(current, CURRENT, DIGITS)),)


def _valued(symbol: Symbol | None) -> Line:
    if symbol is None:
        return ()
    if symbol.value is None:
        return (Text("left open"),)
    return (Text(engineering(symbol.value, symbol.dimension, DIGITS)),)


def _change(group: str, subject: str, aspect: str, before: Line, after: Line) -> Change:
    sign: Sign = "changed" if before and after else "added" if after else "removed"
    return Change(sign, group, subject, aspect, before, after)


def _readable(solution: Solution) -> Expression:
    return solution.readable.gain if solution.readable else solution.form.gain


def _maths(expression: Expression | None) -> Line:
    return () if expression is None else (Maths(expression),)


def _line(words: str) -> tuple[Inline, ...]:
    return (Text(words),) if words else ()


def _figure(value: Fraction | None, dimension: Dimension) -> Line:
    return (Text("not finite" if value is None else engineering(value, dimension, DIGITS)),)


def _dimension(find: Find, topology: Topology) -> Dimension:
    """Give the dimension of a quantity: what it is per decides."""
    if find.quantity == "impedance":
        return RESISTANCE
    kinds = {drive.name: drive.quantity for drive in topology.drives}
    current_drive = {kinds.get(name) for name, _ in find.per} == {"current"}
    if find.quantity == "voltage":
        return RESISTANCE if current_drive else RATIO
    return RATIO if current_drive else RATIO / RESISTANCE


def _alike(old: float | None, new: float | None) -> bool:
    if old is None or new is None:
        return old is new
    return math.isclose(old, new, rel_tol=ALIKE)


def _same_roots(old: Sequence[CertifiedRoot], new: Sequence[CertifiedRoot]) -> bool:
    if len(old) != len(new):
        return False
    size = max((root.magnitude for root in (*old, *new)), default=0.0)
    return all(
        a.multiplicity == b.multiplicity
        and math.isclose(a.real, b.real, rel_tol=ALIKE, abs_tol=min(a.magnitude, size) * ALIKE)
        and math.isclose(a.imaginary, b.imaginary, rel_tol=ALIKE, abs_tol=min(a.magnitude, size) * ALIKE)
        for a, b in zip(old, new, strict=True)
    )


def _roots(roots: Sequence[CertifiedRoot]) -> Line:
    words = []
    for root in roots:
        if root.imaginary >= 0:
            times = f" ({root.multiplicity}-fold)" if root.multiplicity > 1 else ""
            words.append(f"{root_value(root)}{times}")
    return (Text("; ".join(words) if words else "none"),)
