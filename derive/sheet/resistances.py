"""What the reactances see, as the sheet prints it: shares, and each derivation once for all results."""

from __future__ import annotations

from dataclasses import dataclass, replace

from derive.check.verdict import Outcome
from derive.eliminate.derivation import Derivation, Step
from derive.expressions.polynomials import multiply
from derive.expressions.tree import ONE, Equation, Name
from derive.expressions.walk import substitute
from derive.nodal.voltages import fresh
from derive.reactances.time_constants import TimeConstant, TimeConstants
from derive.readable.measure import leaves
from derive.sheet.document import Inline, Line, Maths, Text
from derive.sheet.figures import percent
from derive.sheet.view import View, views
from derive.sheet.wording import Wording

SEEN = "R_seen_"
# As many shares as a line holds.
MOST_SHARES = 5
LEAST_SHARE = 1e-4
COUNTS = dict(enumerate(("one", "two", "three", "four", "five", "six", "seven", "eight", "nine"), 1))


@dataclass(frozen=True, slots=True)
class Seen:
    """The derivation of a resistance, its steps and their wording, and the result under which it stands.

    The steps are those of the derivation with the resistance under the name that is printed.
    """

    constant: TimeConstant
    derivation: Derivation
    steps: tuple[Step, ...]
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
            if derivation is None or is_plain(constant) or _among(found, derivation) is not None:
                continue
            number, own = len(found) + 1, _renamed(derivation, name_of(constant))
            wording = Wording(own, f"R{number}.", f"seen-{number}")
            found.append(Seen(constant, derivation, own.steps, wording, view.place))
    return tuple(found)


def is_plain(constant: TimeConstant) -> bool:
    """Whether a resistance is a single part, or a name for several: its derivation would tell nothing."""
    return constant.readable is not None and leaves(constant.readable) == 1


def name_of(constant: TimeConstant) -> str:
    """Give the name of a resistance in its own derivation as it is printed, "" where it has none.

    R_seen_C_2 is what C_2 sees: R_C_2 would read as the second of the resistors R_C.
    """
    derivation = constant.derivation
    if derivation is None or constant.kind != "open-circuit" or is_plain(constant):
        return ""
    taken = {symbol.name for symbol in derivation.system.small_signal.symbols}
    name = f"{SEEN}{derivation.system.find.name.removeprefix('R_').removeprefix('seen_')}"
    return fresh(taken, name)


def _renamed(derivation: Derivation, name: str) -> Derivation:
    """Give a derivation in which what is sought bears another name; as it is where that is ""."""
    find = derivation.system.find
    if not name:
        return derivation
    names = {find.name: Name(name)}
    steps = tuple(
        replace(
            step,
            equation=Equation(
                substitute(step.equation.left, names), substitute(step.equation.right, names)
            ),
            subject=name if step.subject == find.name else step.subject,
        )
        for step in derivation.steps
    )
    system = replace(derivation.system, find=replace(find, name=name))
    return replace(derivation, system=system, steps=steps)


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
    rest = known[len(shown) :]
    if not rest:
        return tuple(line)
    small = all(abs(share) < LEAST_SHARE for _, share in rest)
    count = COUNTS.get(len(rest), str(len(rest)))
    return (*line, Text(f" and {count} more{f' below {percent(LEAST_SHARE)}' if small else ''}"))


def _symbols(symbols: tuple[str, ...]) -> Line:
    return (Maths(multiply([Name(symbol) for symbol in symbols])),)
