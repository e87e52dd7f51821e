"""What the reactances see, as the sheet prints it: shares, and each derivation once for all results."""

from __future__ import annotations

from dataclasses import dataclass

from derive.check.verdict import Outcome
from derive.eliminate.derivation import Derivation
from derive.expressions.polynomials import multiply
from derive.expressions.tree import ONE, Name
from derive.reactances.time_constants import TimeConstant, TimeConstants
from derive.sheet.document import Inline, Line, Maths, Text
from derive.sheet.figures import percent
from derive.sheet.view import View, views
from derive.sheet.wording import Wording

# As many shares as a line holds.
MOST_SHARES = 5
LEAST_SHARE = 1e-4


@dataclass(frozen=True, slots=True)
class Seen:
    """The derivation of a resistance, the wording of its steps, and the result under which it stands."""

    constant: TimeConstant
    derivation: Derivation
    wording: Wording
    place: int


def time_constants_of(view: View) -> TimeConstants | None:
    """Give the time constants of a result; None where it has none."""
    found = view.result.solution.time_constants
    if found is None or not (found.open_circuit or found.short_circuit or found.remark):
        return None
    return found


def constants_of(view: View) -> tuple[TimeConstant, ...]:
    """Give all time constants of a result in the order in which they are printed."""
    found = time_constants_of(view)
    return (*found.open_circuit, *found.short_circuit) if found else ()


def derivations(outcome: Outcome) -> tuple[Seen, ...]:
    """Give every derivation of a resistance once, in the order in which they are printed."""
    found: list[Seen] = []
    for view in views(outcome):
        for constant in constants_of(view):
            derivation = constant.derivation
            if derivation is None or _among(found, derivation) is not None:
                continue
            number = len(found) + 1
            wording = Wording(derivation, f"R{number}.", f"seen-{number}")
            found.append(Seen(constant, derivation, wording, view.place))
    return tuple(found)


def derivation_of(view: View, constant: TimeConstant) -> Seen | None:
    """Give the derivation of a resistance as it is printed, be it with this result or an earlier one."""
    if constant.derivation is None:
        return None
    return _among(list(derivations(view.outcome)), constant.derivation)


def _among(found: list[Seen], derivation: Derivation) -> Seen | None:
    return next((seen for seen in found if seen.derivation.steps == derivation.steps), None)


def told_before(view: View) -> View | None:
    """Give the earlier result whose table of time constants is the same; None where this one is new."""
    own = [_row(constant) for constant in constants_of(view)]
    for earlier in views(view.outcome)[: view.place] if own else ():
        if own == [_row(constant) for constant in constants_of(earlier)]:
            return earlier
    return None


def _row(constant: TimeConstant) -> tuple[object, ...]:
    return constant.kind, constant.symbol, constant.resistance, constant.seconds, constant.share


def shares_of(view: View, name: str) -> Line:
    """Say who owns a coefficient: "C_cab 81 %, C_π 10 %, C_μ 9 %", the largest first; () where unknown."""
    found = time_constants_of(view)
    if found is None or found.hidden not in ((), (ONE,)):
        return ()
    parts: list[tuple[tuple[str, ...], float | None]] = []
    for coefficient in found.coefficients:
        if coefficient.name == name:
            parts = [(product.symbols, product.share) for product in coefficient.products]
    if name == "b_1" and not parts:
        parts = [((constant.symbol,), constant.share) for constant in found.open_circuit]
    known = [(symbols, share) for symbols, share in parts if share is not None]
    if len(known) < len(parts) or len(known) < 2:
        return ()
    known.sort(key=lambda entry: -abs(entry[1]))
    shown = [entry for entry in known if abs(entry[1]) >= LEAST_SHARE][:MOST_SHARES]
    line: list[Inline] = []
    for place, (symbols, share) in enumerate(shown):
        line += [Text(", ")] if place else []
        line += [*_symbols(symbols), Text(f" {percent(share)}")]
    rest = len(known) - len(shown)
    return (*line, Text(f" and {rest} less")) if rest else tuple(line)


def _symbols(symbols: tuple[str, ...]) -> Line:
    return (Maths(multiply([Name(symbol) for symbol in symbols])),)
