"""How each root follows each part: (x/p)·dp/dx, from the polynomial's exact partial derivatives.

On P(p, x) = 0 the root moves by dp/dx = −(∂P/∂x)/(∂P/∂s). Both derivatives are exact polynomials, their
values exact rationals; the root alone is a number, and it is first brought to many more digits than a
float has, so that close roots cost none of those printed.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from fractions import Fraction
from typing import Any, Literal

from flint import acb, ctx, fmpq

from derive.algebra.rationals import rational
from derive.algebra.ring import Polynomial, Ring
from derive.devices.elements import Coupling
from derive.eliminate.derivation import Derivation
from derive.estimates.estimates import RootSensitivity
from derive.estimates.response import BITS
from derive.normalise.form import CertifiedRoot, NominalNumbers
from derive.normalise.numbers import values_of

# Longer polynomials would make a sheet wait for rows that nobody could read.
MOST_TERMS = 2000
# Each doubles the digits: from a float's 53 bits to more than BITS.
NEWTON_STEPS = 4
# Beneath this a sensitivity is rounding.
NOISE = 1e-12


def root_sensitivities(derivation: Derivation, numbers: NominalNumbers) -> tuple[RootSensitivity, ...]:
    """Give the sensitivities of every simple root but those at the origin to every symbol it moves with.

    A multiple root has none: its derivative is infinite. Circuits with coupled coils, whose mutual
    inductance is itself made of other symbols, are left out.
    """
    circuit = derivation.system.small_signal
    values = values_of(circuit)
    if values is None or any(isinstance(element, Coupling) for element in circuit.elements):
        return ()
    names = [symbol.name for symbol in circuit.symbols]
    ring = derivation.system.ring.plain()
    sides: tuple[tuple[Literal["pole", "zero"], Polynomial, Sequence[CertifiedRoot]], ...] = (
        ("pole", derivation.denominator, numbers.poles),
        ("zero", derivation.numerator, numbers.zeros),
    )
    found: list[RootSensitivity] = []
    for kind, polynomial, roots in sides:
        if roots and len(polynomial) <= MOST_TERMS:
            own, partial = _derivatives(ring, polynomial, values)
            for index, root in enumerate(roots):
                if root.multiplicity == 1 and root.magnitude > 0:
                    by_symbol = _of_root(root, own, partial, names)
                    place = complex(root.real, root.imaginary)
                    found.append(
                        RootSensitivity(kind, index, place, by_symbol, _of_quality(root, by_symbol))
                    )
    return tuple(found)


def _of_quality(
    root: CertifiedRoot, by_symbol: Sequence[tuple[str, complex]]
) -> tuple[tuple[str, float], ...]:
    """Give (x/Q)·dQ/dx for Q = |p|/(2·|Re p|): with S = (x/p)·dp/dx it is Im S·Im p/Re p."""
    if root.quality is None:
        return ()
    # ln Q moves by Re S − Re(S·p)/Re p, and Re(S·p) = Re S·Re p − Im S·Im p.
    turn = root.imaginary / root.real
    return tuple((name, value.imag * turn) for name, value in by_symbol)


def _derivatives(
    ring: Ring, polynomial: Polynomial, values: Mapping[str, Fraction]
) -> tuple[list[Any], dict[str, list[Any]]]:
    """Give P and every x·∂P/∂x as coefficients by rising power of s, at the nominal values."""
    place = ring.names.index("s")
    degree = polynomial.degrees()[place]
    point = [rational(values[name]) if name in values else fmpq(1) for name in ring.names]
    own = [fmpq(0)] * (degree + 1)
    partial: dict[str, list[Any]] = {}
    for exponents, coefficient in polynomial.to_dict().items():
        value = fmpq(int(coefficient))
        moved = []
        for index, exponent in enumerate(exponents):
            if exponent and index != place:
                value *= point[index] ** int(exponent)
                moved.append((ring.names[index], int(exponent)))
        power = int(exponents[place])
        own[power] += value
        for name, exponent in moved:
            partial.setdefault(name, [fmpq(0)] * (degree + 1))[power] += exponent * value
    return own, partial


def _of_root(
    root: CertifiedRoot, own: Sequence[Any], partial: Mapping[str, Sequence[Any]], names: Sequence[str]
) -> tuple[tuple[str, complex], ...]:
    slope = [power * value for power, value in enumerate(own)][1:]
    found = []
    with ctx.workprec(BITS):
        p = acb(root.real, root.imaginary)
        for _ in range(NEWTON_STEPS):
            p = _middle(p - _at(own, p) / _at(slope, p))
        below = p * _at(slope, p)
        for name in names:
            if name in partial:
                value = _settled(complex(_middle(-_at(partial[name], p) / below)))
                # What stands in a common factor, or in another section alone, does not move this root.
                if value:
                    found.append((name, value))
    return tuple(found)


def _at(coefficients: Sequence[Any], s: Any) -> Any:
    total = acb(0)
    for value in reversed(coefficients):
        total = total * s + acb(value)
    return total


def _middle(ball: Any) -> Any:
    return acb(ball.real.mid(), ball.imag.mid())


def _settled(value: complex) -> complex:
    """Take away a part that is nothing beside the other, and what is nothing beside 1."""
    floor = NOISE * max(1.0, abs(value))
    real = value.real if abs(value.real) > floor else 0.0
    return complex(real, value.imag if abs(value.imag) > floor else 0.0)
