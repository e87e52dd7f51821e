"""Entries of equations in short: a name or a single part's value with a sign, and what the names stand for."""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass, field
from fractions import Fraction

from derive.algebra import modular
from derive.algebra.modular import PRIME
from derive.algebra.ring import Polynomial, Ring
from derive.expressions.polynomials import add, divide, multiply, negate
from derive.expressions.tree import ONE, Expression, Name, Negative, Number, Power, Quotient

Monomial = tuple[int, ...]
# Coefficients by monomial, a name that the ring inverts counted as the reciprocal that it stands for.
Terms = dict[Monomial, Fraction]


@dataclass(frozen=True, slots=True)
class Entry:
    """sign · what; `residue` is the value of the whole at a random point modulo a prime."""

    sign: int
    what: Expression
    residue: int

    @property
    def expression(self) -> Expression:
        """The entry with its sign."""
        return negate(self.what) if self.sign < 0 else self.what

    @property
    def negated(self) -> Entry:
        """The entry with its sign changed."""
        return Entry(-self.sign, self.what, -self.residue % PRIME)


@dataclass(slots=True)
class Naming:
    """Gives short names y_1, y_2, … and m_1, m_2, … to what is longer than one part's value.

    `taken` holds the names that have a meaning already. One and the same sum has one name.
    """

    ring: Ring
    taken: frozenset[str]
    point: Mapping[str, int] = field(default_factory=dict)
    counts: dict[str, int] = field(default_factory=dict)
    known: dict[tuple[tuple[Monomial, Fraction], ...], Expression] = field(default_factory=dict)

    def fresh(self, letter: str) -> Name:
        """Give the next name of a letter, "y" or "m"."""
        while any(name == letter or name.startswith(f"{letter}_") for name in self.taken):
            letter += letter[0]
        self.counts[letter] = self.counts.get(letter, 0) + 1
        return Name(f"{letter}_{self.counts[letter]}")

    def entry(self, terms: Terms) -> tuple[Entry, tuple[Name, Expression] | None]:
        """Give an entry for a sum, and the name and its meaning where the sum got one just now."""
        place = self.ring.names.index("s")
        ordered = sorted(terms.items(), key=lambda item: (item[0][place], [-power for power in item[0]]))
        sign = 1 if any(value > 0 for _, value in ordered) else -1
        key = tuple((monomial, value * sign) for monomial, value in ordered)
        flipped = tuple((monomial, -value) for monomial, value in key)
        if flipped in self.known:
            key, sign = flipped, -sign
        residue = self._residue(key) * sign % PRIME
        if key in self.known:
            return Entry(sign, self.known[key], residue), None
        meaning = collected(self.ring, key)
        if len(key) == 1 and sum(key[0][0]) <= 1 and abs(key[0][1]) == 1:
            return Entry(sign, meaning, residue), None
        name = self.fresh("y")
        self.known[key] = name
        return Entry(sign, name, residue), (name, meaning)

    def _residue(self, terms: Iterable[tuple[Monomial, Fraction]]) -> int:
        total = 0
        values = [self.point[name] for name in self.ring.names]
        for monomial, value in terms:
            product = value.numerator * pow(value.denominator, -1, PRIME)
            for base, power in zip(values, monomial, strict=False):
                if power:
                    product = product * pow(base, power, PRIME) % PRIME
            total += product
        return total % PRIME


def naming(ring: Ring, taken: Iterable[str]) -> Naming:
    """Begin with no names given, at a random point of the ring."""
    values = modular.residues(len(ring.names), "nested")
    return Naming(ring, frozenset(taken), dict(zip(ring.names, values, strict=True)))


def terms_of(polynomial: Polynomial, weight: Fraction = Fraction(1)) -> Terms:
    """Give a polynomial's coefficients by monomial, each times a weight."""
    return {
        tuple(map(int, monomial)): int(value) * weight
        for monomial, value in polynomial.to_dict().items()
        if weight
    }


def combined(parts: Iterable[Terms]) -> Terms:
    """Add sums; what cancels is left out."""
    total: Terms = {}
    for part in parts:
        for monomial, value in part.items():
            total[monomial] = total.get(monomial, Fraction(0)) + value
    return {monomial: value for monomial, value in total.items() if value}


def collected(ring: Ring, terms: Iterable[tuple[Monomial, Fraction]]) -> Expression:
    """Write a sum as c_0 + s·(c_1) + …, reciprocals as fractions, a positive term first where there is one."""
    place = ring.names.index("s")
    by_power: dict[int, list[Expression]] = {}
    for monomial, value in terms:
        rest = (*monomial[:place], 0, *monomial[place + 1 :])
        by_power.setdefault(monomial[place], []).append(term(ring, rest, value))
    parts = []
    for power, found in sorted(by_power.items()):
        whole = add(sorted(found, key=_is_negative))
        s: Expression = Name("s") if power == 1 else Power(Name("s"), power)
        parts.append(multiply([s, whole]) if power else whole)
    return add(sorted(parts, key=_is_negative))


def term(ring: Ring, monomial: Monomial, value: Fraction) -> Expression:
    """Write one product: names over the names that the ring inverts."""
    above: list[Expression] = [Number(Fraction(abs(value.numerator)))]
    below: list[Expression] = [Number(Fraction(value.denominator))]
    for name, power in zip(ring.names, monomial, strict=False):
        if power:
            factor: Expression = Name(name) if power == 1 else Power(Name(name), power)
            (below if name in ring.inverted else above).append(factor)
    whole = divide(multiply(above), multiply(below))
    return negate(whole) if value < 0 else whole


def fraction(above: Iterable[Expression], below: Iterable[Expression] = ()) -> Expression:
    """Give a product over a product as one fraction: (1/R)·V is V/R."""
    top: list[Expression] = []
    bottom: list[Expression] = []
    for factors, own, other in ((above, top, bottom), (below, bottom, top)):
        for factor in factors:
            bare = factor.operand if isinstance(factor, Negative) else factor
            if isinstance(factor, Negative):
                own.append(negate(ONE))
            if isinstance(bare, Quotient):
                own.append(bare.numerator)
                other.append(bare.denominator)
            else:
                own.append(bare)
    return divide(multiply(top), multiply(bottom))


def _is_negative(expression: Expression) -> bool:
    return isinstance(expression, Negative)
