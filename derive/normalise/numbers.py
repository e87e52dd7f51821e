"""The response at the nominal values: exact coefficients, and roots with proven error bounds."""

from __future__ import annotations

import math
from collections.abc import Sequence
from fractions import Fraction

from derive.algebra.ratio import coefficients, exact_value
from derive.algebra.ring import Polynomial
from derive.algebra.roots import Root, roots, shared_roots
from derive.devices.elements import Coupling, Inductor, SmallSignal
from derive.eliminate.derivation import Derivation
from derive.normalise.form import CertifiedRoot, NominalNumbers

# Decimal places of the square root in a mutual inductance; its even powers are exact in any case.
ROOT_DIGITS = 60


def nominal_numbers(derivation: Derivation) -> NominalNumbers | None:
    """Give the numbers at the nominal values; None where a value was left open.

    Where all coefficients of the denominator vanish at these values, `bottom` is empty and there is no
    gain.
    """
    circuit = derivation.system.small_signal
    known = values_of(circuit)
    if known is None:
        return None
    if derivation.numerator == 0:
        return NominalNumbers(Fraction(0), (Fraction(0),), (Fraction(1),), (), (), ())
    squares = mutual_squares(circuit, known)
    top = _values(derivation, derivation.numerator, known, squares)
    bottom = _values(derivation, derivation.denominator, known, squares)
    return numbers_of(top, bottom)


def numbers_of(top: tuple[Fraction, ...], bottom: tuple[Fraction, ...]) -> NominalNumbers:
    """Give the numbers of a ratio of polynomials with exact coefficients, by rising powers of s.

    Given: both from the lowest power that occurs for other values, without leading zeros.
    """
    gain = top[0] / bottom[0] if bottom and bottom[0] else None
    if gain is not None and not top:
        gain = Fraction(0)
    return NominalNumbers(
        gain,
        top,
        bottom,
        _certified(roots(top)) if any(top) else (),
        _certified(roots(bottom)) if any(bottom) else (),
        _certified(shared_roots(top, bottom)) if any(top) and any(bottom) else (),
    )


def values_of(circuit: SmallSignal) -> dict[str, Fraction] | None:
    """Give the nominal value of every symbol, mutual inductances included; None where one is open."""
    values = {symbol.name: symbol.value for symbol in circuit.symbols}
    known = {name: value for name, value in values.items() if value is not None}
    if len(known) < len(values):
        return None
    squares = mutual_squares(circuit, known)
    return known | {name: _square_root(square, known, name, circuit) for name, square in squares.items()}


def _values(
    derivation: Derivation,
    polynomial: Polynomial,
    values: dict[str, Fraction],
    squares: dict[str, Fraction],
) -> tuple[Fraction, ...]:
    """Give the coefficients from the lowest power that occurs, without leading zeros."""
    ring = derivation.system.ring
    found = coefficients(ring, polynomial, "s")
    exact = {power: exact_value(ring, part, values, squares) for power, part in found.items()}
    dense = [exact.get(power, Fraction(0)) for power in range(min(exact), max(exact) + 1)]
    while dense and not dense[-1]:
        dense.pop()
    return tuple(dense) or (Fraction(0),)


def _certified(found: Sequence[Root]) -> tuple[CertifiedRoot, ...]:
    return tuple(
        CertifiedRoot(root.real, root.imaginary, root.radius, root.multiplicity) for root in found
    )


def mutual_squares(circuit: SmallSignal, values: dict[str, Fraction]) -> dict[str, Fraction]:
    """Give M² = k²·L_1·L_2 of every coupling."""
    coils = {e.name: values[e.inductance] for e in circuit.elements if isinstance(e, Inductor)}
    squares = {}
    for element in circuit.elements:
        if isinstance(element, Coupling):
            first, second = (coils[coil] for coil in element.coils)
            squares[element.mutual] = values[element.coefficient] ** 2 * first * second
    return squares


def _square_root(
    square: Fraction, values: dict[str, Fraction], mutual: str, circuit: SmallSignal
) -> Fraction:
    """Give M itself, exactly where it is rational, else to ROOT_DIGITS digits."""
    sign = next(
        -1 if values[element.coefficient] < 0 else 1
        for element in circuit.elements
        if isinstance(element, Coupling) and element.mutual == mutual
    )
    # One integer root of numerator·denominator·10^(2d): exact whenever the square root is rational.
    scale = 10**ROOT_DIGITS
    product = square.numerator * square.denominator
    root = math.isqrt(product)
    if root * root == product:
        return Fraction(sign * root, square.denominator)
    return Fraction(sign * math.isqrt(product * scale * scale), square.denominator * scale)
