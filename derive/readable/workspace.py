"""The workshop floor of readable forms: ratios in lowest terms over a ring, split and taken apart."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field

from derive.algebra.ratio import lowest_terms
from derive.algebra.ring import Polynomial, Ring, negative, used_names
from derive.algebra.ring import ring as make_ring


@dataclass(frozen=True, slots=True, eq=False)
class Ratio:
    """top/bottom in lowest terms, most of the terms of each positive; `minus` is the sign in front."""

    top: Polynomial
    bottom: Polynomial
    minus: bool = False

    @property
    def key(self) -> str:
        """A text that is the same for the same ratio."""
        return f"{'-' if self.minus else ''}{self.top}/{self.bottom}"

    @property
    def length(self) -> int:
        """The number of terms above and below."""
        return len(self.top) + len(self.bottom)


@dataclass(frozen=True, slots=True)
class Pieces:
    """A polynomial taken apart: number · names to powers · irreducible factors of several terms."""

    number: int
    powers: Mapping[str, int]
    sums: tuple[Polynomial, ...]


@dataclass(frozen=True, slots=True, eq=False)
class Workspace:
    """A small ring with what is asked of it often; the factors of polynomials are kept."""

    ring: Ring
    factors: dict[str, Pieces] = field(default_factory=dict)

    def ratio(self, top: Polynomial, bottom: Polynomial, minus: bool = False) -> Ratio:
        """Give a ratio in lowest terms, its sign in front."""
        top, bottom = lowest_terms(self.ring, top, bottom)
        if negative(top):
            top, minus = -top, not minus
        if negative(bottom):
            bottom, minus = -bottom, not minus
        return Ratio(top, bottom, minus)

    def names(self, *polynomials: Polynomial) -> tuple[str, ...]:
        """Give the names that occur, in the ring's order."""
        return used_names(self.ring, polynomials)

    def degree(self, polynomial: Polynomial, name: str) -> int:
        """Give the highest power of a name."""
        return int(polynomial.degrees()[self.ring.names.index(name)])

    def split(self, polynomial: Polynomial, name: str) -> tuple[Polynomial, Polynomial] | None:
        """Give (p_0, p_1) with p = p_0 + name·p_1; None where the name has a higher power."""
        if self.degree(polynomial, name) > 1:
            return None
        slope = polynomial.derivative(self.ring.names.index(name))
        return polynomial - self.ring.generator(name) * slope, slope

    def pieces(self, polynomial: Polynomial) -> Pieces:
        """Take a polynomial apart."""
        key = str(polynomial)
        found = self.factors.get(key)
        if found is None:
            found = self.factors[key] = self._pieces(polynomial)
        return found

    def _pieces(self, polynomial: Polynomial) -> Pieces:
        content, factors = polynomial.factor()
        number, powers, sums = int(content), {}, []
        for factor, power in factors:
            if len(factor) > 1:
                if negative(factor):
                    factor, number = -factor, -number if power % 2 else number
                sums += [factor] * int(power)
            else:
                (name,) = self.names(factor)
                powers[name] = int(power)
        ordered = {name: powers[name] for name in self.ring.names if name in powers}
        return Pieces(number, ordered, tuple(sorted(sums, key=lambda p: (len(p), str(p)))))


def workspace_of(names: tuple[str, ...]) -> Workspace:
    """Make a workspace over these names."""
    return Workspace(make_ring(names))
