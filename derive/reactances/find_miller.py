"""Miller's theorem for every capacitor that bridges two nodes of a circuit.

A capacitor C between a near and a far node with the gain A(s) = V_far/V_near draws from the near node what
the admittance s·C·(1 − A) to ground would, and from the far node what s·C·(1 − 1/A) would: this is exact,
with A(s) the gain in the circuit as it is. The usual approximation takes A at zero frequency.

Source: J. M. Miller, Dependence of the input impedance of a three-electrode vacuum tube upon the load in
the plate circuit, Scientific Papers of the Bureau of Standards 15 (1920) 367-385; from memory.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import replace
from fractions import Fraction

from derive.algebra.ratio import exact_value, lowest_terms
from derive.algebra.ring import Polynomial, Ring
from derive.devices.elements import Coupling, Inductor, SmallSignal
from derive.eliminate.derivation import Derivation
from derive.eliminate.scribe import writer_for
from derive.errors import DeriveError
from derive.expressions.polynomials import Writer, add, divide
from derive.expressions.tree import ONE, ZERO, Expression, Negative, Quotient
from derive.nodal.system import NodalSystem
from derive.normalise.form import NominalNumbers, NormalForm
from derive.normalise.numbers import values_of
from derive.reactances.miller import MillerView
from derive.reactances.miller_bridges import Bridge, bridges
from derive.reactances.miller_cause import cause_of_change
from derive.reactances.miller_errors import compare, corners
from derive.reactances.miller_gain import NodeGain, NodeGains
from derive.reactances.miller_judgement import judge
from derive.readable.readable import definitions_used, read_ratio
from derive.readable.vocabulary import Vocabulary

# Beyond these a reader has lost the thread, and the work would be felt.
MOST_CAPACITORS = 6
MOST_UNKNOWNS = 6
# Ratios of more terms than this are not rewritten: to seek their shortest form would be felt.
GAIN_TERMS = 40
# Up to here 1 − A_0 is sought anew; beyond, the gain is put into it as it is written.
FACTOR_TERMS = 6


def find_miller(
    derivation: Derivation, form: NormalForm, numbers: NominalNumbers | None, vocabulary: Vocabulary
) -> tuple[MillerView, ...]:
    """Give Miller's view of every bridging capacitor, at most MOST_CAPACITORS, in the circuit's order.

    Gives () for a circuit of more than MOST_UNKNOWNS unknowns. Left out are capacitors at a node that the
    input does not reach, and those across which the gain is zero or infinite at zero frequency: there
    the signal goes through the capacitor itself, as through a coupling capacitor.
    """
    system = derivation.system
    if form.is_zero or len(system.unknowns) > MOST_UNKNOWNS:
        return ()
    try:
        found = bridges(system)
        gains = NodeGains.of(system) if found else None
    except DeriveError:
        return ()
    writer = writer_for(system)
    views: list[MillerView] = []
    for bridge in found:
        if gains is None or len(views) == MOST_CAPACITORS:
            break
        try:
            gain = gains.between(bridge.near, bridge.far)
        except DeriveError:
            continue
        if gain is not None:
            view = _view(bridge, gain, writer, vocabulary)
            views.append(view if numbers is None else _with_numbers(view, system, bridge, gain))
    order = [element.name for element in system.small_signal.elements]
    return tuple(sorted(views, key=lambda view: order.index(view.element)))


def _view(bridge: Bridge, gain: NodeGain, writer: Writer, vocabulary: Vocabulary) -> MillerView:
    """Say all that holds for all values."""
    capacitor = bridge.capacitor
    above, below = gain.at_zero
    at_zero = _read(writer, vocabulary, above, below, GAIN_TERMS)
    top, bottom = (_normalised(writer, vocabulary, part) for part in (gain.top, gain.bottom))
    factors = _factors(writer, vocabulary, above, below, at_zero)
    used = (at_zero, *top, *bottom, *factors)
    return MillerView(
        capacitor.part,
        capacitor.capacitance,
        capacitor.name,
        bridge.near,
        bridge.far,
        at_zero,
        top,
        bottom,
        *factors,
        (),
        None,
        (),
        definitions_used(used, vocabulary),
    )


def _read(
    writer: Writer, vocabulary: Vocabulary, above: Polynomial, below: Polynomial, most: int
) -> Expression:
    """Write a ratio in the fewest signs, or as it is where it has more terms than `most`."""
    if above == 0:
        return ZERO
    above, below = lowest_terms(writer.ring, above, below)
    if len(above) + len(below) > most:
        return writer.ratio(above, below)
    return read_ratio(writer.ring, above, below, vocabulary)


def _normalised(
    writer: Writer, vocabulary: Vocabulary, found: Mapping[int, Polynomial]
) -> tuple[Expression, ...]:
    zero = writer.ring.zero
    return (
        ONE,
        *(
            _read(writer, vocabulary, found.get(power, zero), found[0], GAIN_TERMS)
            for power in range(1, max(found) + 1)
        ),
    )


def _factors(
    writer: Writer, vocabulary: Vocabulary, above: Polynomial, below: Polynomial, gain: Expression
) -> tuple[Expression, Expression]:
    """Give 1 − A_0 and 1 − 1/A_0: as short ratios, or with the gain as it is written put in."""
    if len(above) + len(below) <= FACTOR_TERMS:
        return (
            _read(writer, vocabulary, below - above, below, 2 * FACTOR_TERMS),
            _read(writer, vocabulary, above - below, above, 2 * FACTOR_TERMS),
        )
    bare, turned = (gain.operand, True) if isinstance(gain, Negative) else (gain, False)
    inverse = (
        Quotient(bare.denominator, bare.numerator) if isinstance(bare, Quotient) else divide(ONE, bare)
    )
    signed = (bare, inverse) if turned else (Negative(bare), Negative(inverse))
    return add([ONE, signed[0]]), add([ONE, signed[1]])


def _with_numbers(view: MillerView, system: NodalSystem, bridge: Bridge, gain: NodeGain) -> MillerView:
    """Add what the approximation makes of the response at the nominal values."""
    circuit = system.small_signal
    values = values_of(circuit)
    if values is None or not _all_exact(circuit, values):
        return view
    above, below = (exact_value(gain.ring, part, values, {}) for part in gain.at_zero)
    if not above or not below:
        return view
    at_zero = above / below
    value = values[bridge.capacitor.capacitance]
    halves = (value * (1 - at_zero), value * (1 - 1 / at_zero))
    try:
        comparison = compare(circuit, system.find, bridge, halves)
    except DeriveError:
        return replace(view, halves=halves)
    if comparison is None:
        return replace(view, halves=halves)
    own = [root for part in (gain.top, gain.bottom) for root in corners(_dense(gain.ring, part, values))]
    nodes, capacitor = (bridge.near, bridge.far), bridge.capacitor.capacitance
    cause = cause_of_change(gain, circuit, values)
    usable, reasons = judge(comparison, at_zero, own, nodes, capacitor=capacitor, cause=cause)
    return replace(
        view,
        errors=comparison.errors,
        usable=usable,
        reasons=reasons,
        halves=halves,
        missing_zeros=comparison.missing_zeros,
    )


def _all_exact(circuit: SmallSignal, values: Mapping[str, Fraction]) -> bool:
    """Whether no mutual inductance is a rounded root: what should cancel would leave false zeros."""
    coils = {e.name: values[e.inductance] for e in circuit.elements if isinstance(e, Inductor)}
    for element in circuit.elements:
        if isinstance(element, Coupling):
            first, second = (coils[coil] for coil in element.coils)
            if values[element.mutual] ** 2 != values[element.coefficient] ** 2 * first * second:
                return False
    return True


def _dense(ring: Ring, found: dict[int, Polynomial], values: Mapping[str, Fraction]) -> list[Fraction]:
    """Give the coefficients at the nominal values by rising power, without zeros at the end."""
    dense = [
        exact_value(ring, found[power], values, {}) if power in found else Fraction(0)
        for power in range(max(found) + 1)
    ]
    while not dense[-1]:
        dense.pop()
    return dense
