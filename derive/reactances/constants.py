"""The table of time constants: one for each capacitor and inductor, the others at rest or turned."""

from __future__ import annotations

from fractions import Fraction

from derive.algebra.ring import Polynomial
from derive.devices.elements import Capacitor, Inductor, SmallSignal
from derive.expressions.tree import ZERO, Expression
from derive.reactances.expansion import Expansion
from derive.reactances.reader import Reader, constant_of
from derive.reactances.resistance import INFINITE, NOT_FIXED, Resistance
from derive.reactances.states import State
from derive.reactances.time_constants import Kind, TimeConstant
from derive.readable.readable import definitions_used


def table_row(
    reader: Reader, circuit: SmallSignal, kind: Kind, state: State, found: Resistance
) -> TimeConstant:
    """Give one row, its share left open."""
    element = next(item for item in circuit.elements if item.name == state.element)
    if not isinstance(element, Capacitor | Inductor):
        raise TypeError(f"{state.element} is no part with a resistance of its own")
    resistance: Expression | None = None
    readable: Expression | None = None
    constant: Expression | None = None
    if found.numerator is not None:
        resistance = reader.raw(found.numerator, found.denominator)
        readable = ZERO if resistance == ZERO else reader.readable(found.numerator, found.denominator)
    if state.kind == "capacitor":
        constant = None if readable is None else constant_of(state, readable)
    elif readable is None:
        constant = ZERO if found.why == INFINITE else None
    elif readable != ZERO:
        constant = constant_of(state, readable)
    return TimeConstant(
        element.part,
        state.symbol,
        element.name,
        "capacitor" if isinstance(element, Capacitor) else "inductor",
        kind,
        element.between,
        found.derivation,
        resistance,
        readable,
        constant,
        _seconds(reader, state, resistance, found),
        None,
        definitions_used([item for item in (readable, constant) if item is not None], reader.vocabulary),
    )


def _seconds(
    reader: Reader, state: State, resistance: Expression | None, found: Resistance
) -> Fraction | None:
    """Give R·C or L/R at the nominal values, from the form in the circuit's own symbols."""
    if resistance is None:
        return Fraction(0) if state.kind == "inductor" and found.why == INFINITE else None
    return (
        reader.number(constant_of(state, resistance))
        if resistance != ZERO or state.kind == "capacitor"
        else None
    )


def completed(
    expansion: Expansion | None, found: Resistance, place: int, before: int | None
) -> Resistance:
    """Take from the circuit's polynomial what could not be derived on its own.

    Given: the states that are turned, as a mask; None where the polynomial has no one beginning. Where
    others bring poles at zero frequency, the derivation must agree with it: at zero frequency itself such a
    circuit may have a solution that is no limit of those nearby.
    """
    if expansion is None or before is None:
        return found
    bit = 1 << place
    below = expansion.bottom.get(before & ~bit)
    above = expansion.bottom.get(before | bit)
    if expansion.states[place].kind == "inductor":
        above, below = below, above
    if found.numerator is None:
        return _ratio(expansion, above, below)
    if expansion.base:
        other = _ratio(expansion, above, below)
        same = (found.numerator, found.denominator) == (other.numerator, other.denominator)
        return found if same else other
    return found


def _ratio(expansion: Expansion, above: Polynomial | None, below: Polynomial | None) -> Resistance:
    if below is None:
        return Resistance(None, None, None, INFINITE if above is not None else NOT_FIXED)
    if above is None:
        return Resistance(None, expansion.ring.zero, expansion.ring.one)
    return Resistance(None, *expansion.ratio(above, below))
