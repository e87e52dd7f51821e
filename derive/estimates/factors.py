"""A polynomial's factors in s over the rationals: cascaded sections show as separate factors."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from fractions import Fraction

from derive.algebra.ratio import coefficients, exact_value
from derive.algebra.ring import Polynomial, Ring, negative

# Multivariate factoring of longer polynomials may take seconds; first and second order are served as they are.
MOST_TERMS = 400


@dataclass(frozen=True, slots=True, eq=False)
class Section:
    """A factor c_0 + c_1·s + … of a polynomial, by its coefficients, and how often it occurs.

    `values` are the coefficients at the nominal values, None where a value is open; c_0 is positive.
    """

    coefficients: tuple[Polynomial, ...]
    multiplicity: int
    values: tuple[Fraction, ...] | None

    @property
    def order(self) -> int:
        """The degree in s."""
        return len(self.coefficients) - 1

    @property
    def size(self) -> int:
        """The number of terms."""
        return sum(len(coefficient) for coefficient in self.coefficients)


def sections_of(
    ring: Ring, polynomial: Polynomial, values: Mapping[str, Fraction] | None
) -> tuple[Section, ...]:
    """Give the factors that hold s, those of the slowest roots first; powers of s itself are left out."""
    by_power = coefficients(ring, polynomial, "s")
    lowest = min(by_power)
    if max(by_power) == lowest:
        return ()
    bare = polynomial / ring.monomial({"s": lowest})
    # The common factor of the coefficients in the other names holds no root.
    place = ring.names.index("s")
    factors = bare.factor()[1] if len(bare) <= MOST_TERMS else [(bare, 1)]
    found = [
        _section(ring, factor, int(count), values)
        for factor, count in factors
        if factor.degrees()[place] > 0
    ]
    return tuple(sorted(found, key=_slowness))


def _section(
    ring: Ring, factor: Polynomial, count: int, values: Mapping[str, Fraction] | None
) -> Section:
    by_power = coefficients(ring, factor, "s")
    dense = [by_power.get(power, ring.zero) for power in range(max(by_power) + 1)]
    exact: list[Fraction] = (
        [] if values is None else [exact_value(ring, part, values, {}) for part in dense]
    )
    # c_0 is made positive, so that square roots of products may be taken apart.
    if exact[0] < 0 if exact and exact[0] else negative(dense[0]):
        dense = [ring.zero - part for part in dense]
        exact = [-value for value in exact]
    return Section(tuple(dense), count, tuple(exact) or None)


def _slowness(section: Section) -> tuple[int, float, int, str]:
    """Order by the geometric mean of the roots' magnitudes; open values go by order and terms."""
    terms = str([sorted(part.to_dict().items()) for part in section.coefficients])
    values = section.values
    if values is None or not values[0] or not values[-1]:
        return 1, 0.0, section.order, terms
    return 0, float(abs(values[0] / values[-1])) ** (1 / section.order), section.order, terms
