"""Exact coefficients of a diagram's determinants at rational values, one long integer for each fork.

Two tricks, each worth a factor of two or more on matrices of 26 rows. Sums of fractions would spend half of
the time in greatest common divisors: so a product without a bundle gets that bundle's denominator
instead, and all products have the same one. And a polynomial with whole coefficients is packed into one
integer, its value at a power of two that exceeds all coefficients (Kronecker's substitution), for many
short integers cost more than one long one.
"""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field
from fractions import Fraction
from typing import Any

from flint import fmpz

from derive.algebra.diagram_forks import Fork, fold
from derive.algebra.diagram_terms import Bundle

# A common denominator of the values of positive degree is taken out where it is no longer than this.
SCALE_BITS = 128


def coefficients(
    bundles: Sequence[Bundle],
    forks: Sequence[Fork],
    roots: Sequence[tuple[int, int]],
    values: Mapping[str, Fraction],
) -> tuple[tuple[Fraction, ...], ...]:
    """Give each determinant's coefficients of the degree variable's powers, from 0 up; () is zero."""
    whole = _Whole.of(bundles, values)
    weights, bits, passed = whole.weights, whole.bits, whole.passed
    starts = [len(bundles)] * 2 + [fork.bundle for fork in forks]

    def combined(fork: Fork, found: Sequence[Any]) -> Any:
        item, taken, left, sign = fork
        high = found[taken]
        factor = passed(item + 1, starts[taken])
        if factor is not None:
            high = high * factor
        value = None
        for degree, weight in weights[item]:
            part = high * weight
            if degree:
                part = part << bits * degree
            value = part if value is None else value + part
        if left:
            low = found[left]
            factor = passed(item, starts[left])
            if factor is not None:
                low = low * factor
            value = value + low if sign > 0 else value - low
        return value

    found = fold(forks, [fork for _, fork in roots], fmpz(0), fmpz(1), combined)
    result = []
    for (sign, fork), value in zip(roots, found, strict=True):
        below = int(passed(starts[fork], len(bundles)) or 1)
        unpacked = _unpacked(sign * int(value), bits)
        result.append(
            tuple(Fraction(part, below * whole.scale**power) for power, part in enumerate(unpacked))
        )
    return tuple(result)


@dataclass(frozen=True, slots=True, eq=False)
class _Whole:
    """The bundles' weights with whole coefficients.

    A bundle's weight is the sum of its (degree, weight) over its denominator; the degree variable is counted
    in units of `scale`. No coefficient of any product of these is longer than `bits` less one.
    """

    weights: tuple[tuple[tuple[int, Any], ...], ...]
    denominators: tuple[int, ...]
    scale: int
    bits: int
    products: dict[tuple[int, int], Any] = field(default_factory=dict)

    @staticmethod
    def of(bundles: Sequence[Bundle], values: Mapping[str, Fraction]) -> _Whole:
        """Make the weights from the names' values."""
        lifted = [entry for item in bundles for entry in item.entries if entry.degree]
        scale = math.lcm(*(values[entry.name].denominator for entry in lifted))
        if scale.bit_length() > SCALE_BITS:
            scale = 1
        weights, denominators = [], []
        bits = 2
        for item in bundles:
            scaled = [entry.sign * values[entry.name] * scale**entry.degree for entry in item.entries]
            shared = math.lcm(*(value.denominator for value in scaled))
            sums: dict[int, int] = {}
            for entry, value in zip(item.entries, scaled, strict=True):
                sums[entry.degree] = sums.get(entry.degree, 0) + int(value * shared)
            weights.append(tuple((degree, fmpz(value)) for degree, value in sums.items()))
            denominators.append(shared)
            bits += (sum(map(abs, sums.values())) + shared).bit_length()
        return _Whole(tuple(weights), tuple(denominators), scale, bits)

    def passed(self, first: int, end: int) -> Any:
        """Give the product of the denominators of bundles `first` to `end`, that excluded; None for 1."""
        key = first, end
        if key in self.products:
            return self.products[key]
        product = math.prod(self.denominators[first:end])
        self.products[key] = None if product == 1 else fmpz(product)
        return self.products[key]


def _unpacked(packed: int, bits: int) -> list[int]:
    """Give the coefficients, each of fewer than `bits` bits with its sign, that an integer was made of."""
    found = []
    while packed:
        value = packed & (1 << bits) - 1
        if value >> bits - 1:
            value -= 1 << bits
        found.append(value)
        packed = packed - value >> bits
    return found
