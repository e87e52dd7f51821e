"""Find what each capacitor and inductor does to a response, and how that makes its coefficients."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from fractions import Fraction

from derive.algebra.ratio import coefficients
from derive.devices.elements import Capacitor, Coupling, Inductor, SmallSignal
from derive.eliminate.derivation import Derivation
from derive.expressions.tree import ONE, Expression
from derive.normalise.form import NormalForm
from derive.reactances.constants import completed, table_row
from derive.reactances.expansion import Expansion, Ratio, determinants, expand, hidden_factor
from derive.reactances.hidden import hidden_symbols, sentence, without
from derive.reactances.inactive import at_the_origin
from derive.reactances.products import (
    denominator_coefficients,
    highest_power,
    numerator_coefficients,
    order_of,
)
from derive.reactances.reader import Reader, shares
from derive.reactances.resistance import resistance_seen
from derive.reactances.states import State, states_of
from derive.reactances.time_constants import Coefficient, Kind, TimeConstant, TimeConstants
from derive.readable.readable import definitions_used
from derive.readable.vocabulary import Vocabulary

# Beyond these, products are not read by anybody; the table of constants alone goes a little further.
STATES_LIMIT, UNKNOWNS_LIMIT = 8, 8
TABLE_STATES_LIMIT, TABLE_UNKNOWNS_LIMIT, TABLE_TERMS_LIMIT = 16, 16, 20_000
_UNKNOWN: tuple[Expression, ...] = ()


@dataclass(frozen=True, slots=True)
class _Cancelled:
    """What the circuit has and the response has not."""

    says: str = ""
    readable: tuple[Expression, ...] = ()
    symbols: tuple[str, ...] = ()


_NOTHING = _Cancelled()


def find_time_constants(
    derivation: Derivation, form: NormalForm, vocabulary: Vocabulary
) -> TimeConstants | None:
    """Give the time constants of a response and its coefficients by them; None where nothing stores energy.

    What cannot be given is left out, and said in the remark.
    """
    circuit = derivation.system.small_signal
    states = states_of(circuit)
    if not states:
        return None
    unknowns = len(derivation.system.unknowns)
    terms = len(derivation.numerator) + len(derivation.denominator)
    if len(states) > TABLE_STATES_LIMIT or unknowns > TABLE_UNKNOWNS_LIMIT or terms > TABLE_TERMS_LIMIT:
        return TimeConstants(
            (), (), (), _UNKNOWN, "the circuit is too large for a table of time constants"
        )
    reader = Reader.of(derivation, vocabulary)
    remarks: list[str] = []
    found, hidden, cancelled = None, _UNKNOWN, _NOTHING
    if len(states) <= STATES_LIMIT and unknowns <= UNKNOWNS_LIMIT:
        found = determinants(derivation.system, derivation.plan)
    expansion = None if found is None else expand(derivation, found)
    if found is None:
        remarks.append("the circuit is too large for coefficients as sums of products")
    else:
        factor = hidden_factor(derivation, found[1])
        hidden = tuple(reader.raw(*ratio) for ratio in factor)
        if len(factor) > 1:
            cancelled = _cancelled(derivation, reader, factor)
    opened = _table(reader, circuit, expansion, states, "open-circuit", remarks)
    closed: tuple[TimeConstant, ...] = ()
    if _has_low_corners(circuit, form):
        closed = _table(reader, circuit, expansion, states, "short-circuit", remarks)
    own = expansion
    if cancelled.says:
        own = without(expansion, cancelled.symbols) if expansion and cancelled.symbols else None
    products = _coefficients(reader, derivation, form, own, remarks)
    remarks += _about_circuit(circuit, states)
    written = [item for each in products for product in each.products for item in [product.readable]]
    return TimeConstants(
        _with_shares(opened, () if cancelled.says else products, reader),
        closed,
        products,
        hidden,
        "; ".join(dict.fromkeys(remarks)),
        definitions_used([*written, *cancelled.readable], vocabulary),
        cancelled.says,
        cancelled.readable,
        cancelled.symbols,
    )


def _cancelled(derivation: Derivation, reader: Reader, factor: tuple[Ratio, ...]) -> _Cancelled:
    """Say which modes the response does not show."""
    symbols = hidden_symbols(derivation, factor)
    ring = derivation.system.ring.plain()
    readable = tuple(ONE if not power else reader.readable(*ratio) for power, ratio in enumerate(factor))
    sides = (derivation.numerator, derivation.denominator)
    own = any(len(coefficients(ring, side, "s")) > 1 for side in sides)
    says = sentence(derivation.system.find.name, readable, symbols, coefficients=own)
    return _Cancelled(says, readable, symbols)


def _has_low_corners(circuit: SmallSignal, form: NormalForm) -> bool:
    """Whether the response falls towards low frequencies, and nothing acts at high ones alone."""
    roles = dict(circuit.roles)
    own = [roles.get(e.name, "") for e in circuit.elements if isinstance(e, Capacitor | Inductor)]
    return "parasitic" not in own and (form.power_of_s > 0 or "coupling" in own or "bypass" in own)


def _table(
    reader: Reader,
    circuit: SmallSignal,
    expansion: Expansion | None,
    states: Sequence[State],
    kind: Kind,
    remarks: list[str],
) -> tuple[TimeConstant, ...]:
    """Give one kind of time constant of every part, in the order of the circuit."""
    names = frozenset(state.element for state in states)
    every = (1 << len(states)) - 1
    if kind == "short-circuit" and expansion is not None and every not in expansion.bottom:
        remarks.append("no short-circuit time constants: capacitors in a loop, or inductors in a cut")
        return ()
    parts = {e.name: e for e in circuit.elements if isinstance(e, Capacitor | Inductor)}
    rows = []
    for place, state in enumerate(states):
        if state.kind == "op amp":
            continue
        turned = names - {state.element} if kind == "short-circuit" else frozenset[str]()
        resistance = resistance_seen(circuit, parts[state.element], turned)
        if expansion is not None:
            before = every if kind == "short-circuit" else expansion.base
            resistance = completed(expansion, resistance, place, before)
        row = table_row(reader, circuit, kind, state, resistance)
        rows.append(row)
        if row.resistance is None and not _alone(expansion, place):
            where = "at DC" if kind == "open-circuit" else "with all others turned"
            remarks.append(f"the resistance that {state.symbol} sees is {resistance.why} {where}")
    if kind == "open-circuit":
        return tuple(rows)
    parts_of_sum = shares([_reciprocal(row) for row in rows])
    return tuple(replace(row, share=share) for row, share in zip(rows, parts_of_sum, strict=True))


def _alone(expansion: Expansion | None, place: int) -> bool:
    """Whether a state brings a pole at zero and nothing else, which is said of it elsewhere."""
    return expansion is not None and expansion.base is not None and bool(expansion.base >> place & 1)


def _reciprocal(row: TimeConstant) -> Fraction | None:
    if row.seconds:
        return 1 / row.seconds
    # An infinite time constant adds nothing to the sum of reciprocals; a value left open is another thing.
    infinite = row.constant is None and (row.resistance is not None or row.reactance == "capacitor")
    return Fraction(0) if infinite else None


def _with_shares(
    rows: tuple[TimeConstant, ...], coefficients: Sequence[Coefficient], reader: Reader
) -> tuple[TimeConstant, ...]:
    """Give each open-circuit time constant its part of b_1, or of their sum where b_1 is not taken apart."""
    first = next((each for each in coefficients if each.name == "b_1"), None)
    if first is not None:
        total = [reader.number(product.term) for product in first.products]
        known = [value for value in total if value is not None]
        whole = sum(known, Fraction(0)) if len(known) == len(total) else Fraction(0)
        return tuple(
            replace(row, share=float(row.seconds / whole)) if whole and row.seconds is not None else row
            for row in rows
        )
    parts = shares([row.seconds for row in rows])
    return tuple(replace(row, share=share) for row, share in zip(rows, parts, strict=True))


def _coefficients(
    reader: Reader,
    derivation: Derivation,
    form: NormalForm,
    expansion: Expansion | None,
    remarks: list[str],
) -> tuple[Coefficient, ...]:
    if expansion is None:
        return ()
    base = expansion.base
    if base is None:
        remarks.append("so b_1 and higher are no sums of time constants")
        return ()
    remarks += at_the_origin(derivation, form, expansion, base)
    found = list(denominator_coefficients(reader, expansion, base))
    remarks += _left_out("b", len(found), highest_power(expansion.bottom, base))
    for mask in expansion.bottom:
        own = mask & ~base
        if order_of(expansion, base, own) is None and own.bit_count() <= len(found):
            names = " and ".join(state.symbol for state in expansion.among(own))
            remarks.append(f"the product of {names} is taken whole: each alone sees nothing or no end")
    if len(form.numerator) == 1:
        return tuple(found)
    if expansion.top_base is None:
        remarks.append("a_1 and higher are no sums of terms that each belong to a set of parts")
        return tuple(found)
    above = list(numerator_coefficients(reader, expansion, expansion.top_base))
    remarks += _left_out("a", len(above), highest_power(expansion.top, expansion.top_base))
    return (*found, *above)


def _left_out(letter: str, given: int, highest: int) -> list[str]:
    if given == highest:
        return []
    return [f"{letter}_{given + 1} and higher have too many terms to be read product by product"]


def _about_circuit(circuit: SmallSignal, states: Sequence[State]) -> list[str]:
    """Say what the sums do not hold."""
    said = [
        f"{element.part} couples {element.coils[0]} and {element.coils[1]}: "
        "what they do together is no time constant of either, and the coefficients are not taken apart"
        for element in circuit.elements
        if isinstance(element, Coupling)
    ]
    own = [state for state in states if state.kind == "op amp"]
    said += [
        f"an op amp's own pole has no part to own it: its terms stand in the coefficients under {state.symbol}"
        for state in own
    ]
    return said
