"""The workshop floor of readable forms: ratios in lowest terms over a ring, split and taken apart."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from functools import cached_property

from derive.algebra.ratio import lowest_terms
from derive.algebra.ring import Polynomial, Ring, negative
from derive.algebra.ring import ring as make_ring


@dataclass(frozen=True, eq=False)
class Ratio:
    """top/bottom in lowest terms, most of the terms of each positive; `minus` is the sign in front."""

    top: Polynomial
    bottom: Polynomial
    minus: bool = False

    @cached_property
    def above(self) -> str:
        """A text that is the same for the same numerator."""
        return str(self.top)

    @cached_property
    def below(self) -> str:
        """A text that is the same for the same denominator."""
        return str(self.bottom)

    @cached_property
    def key(self) -> str:
        """A text that is the same for the same ratio."""
        return f"{'-' if self.minus else ''}{self.above}/{self.below}"

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
    places: dict[str, int] = field(init=False)

    def __post_init__(self) -> None:
        object.__setattr__(self, "places", {name: place for place, name in enumerate(self.ring.names)})

    def ratio(self, top: Polynomial, bottom: Polynomial, minus: bool = False) -> Ratio:
        """Give a ratio in lowest terms, its sign in front."""
        return self.signed(*lowest_terms(self.ring, top, bottom), minus)

    def signed(self, top: Polynomial, bottom: Polynomial, minus: bool = False) -> Ratio:
        """Give a ratio of two that share nothing, its sign in front."""
        if negative(top):
            top, minus = -top, not minus
        if negative(bottom):
            bottom, minus = -bottom, not minus
        return Ratio(top, bottom, minus)

    def names(self, *polynomials: Polynomial) -> tuple[str, ...]:
        """Give the names that occur, in the ring's order."""
        degrees = [polynomial.degrees() for polynomial in polynomials]
        found = degrees[0] if len(degrees) == 1 else map(max, *degrees)
        return tuple(name for name, degree in zip(self.ring.names, found, strict=False) if degree > 0)

    def degree(self, polynomial: Polynomial, name: str) -> int:
        """Give the highest power of a name."""
        return int(polynomial.degrees()[self.places[name]])

    def split(self, polynomial: Polynomial, name: str) -> tuple[Polynomial, Polynomial] | None:
        """Give (p_0, p_1) with p = p_0 + name·p_1; None where the name has a higher power."""
        place = self.places[name]
        if polynomial.degrees()[place] > 1:
            return None
        slope = polynomial.derivative(place)
        return polynomial - self.ring.context.gen(place) * slope, slope

    def pieces(self, polynomial: Polynomial, key: str | None = None) -> Pieces:
        """Take a polynomial apart; `key` is its text, where that is known."""
        key = key or str(polynomial)
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


def workspace_of(names: tuple[str, ...], numbers: Mapping[str, int] | None = None) -> Workspace:
    """Make a workspace over these names; with `numbers`, keys are the same in all workspaces."""
    return Workspace(make_ring(names, numbers=numbers))
