"""The search for the shortest way to write a ratio: every rewrite proposes, the shortest is kept.

A rewrite takes a ratio apart into smaller ones, for which the search is asked again; what was found is kept.
The work is bounded by a count of ratios looked at, so that the same input always gives the same form.
"""

from __future__ import annotations

import importlib
import pkgutil
from collections.abc import Callable, Iterator, Mapping
from dataclasses import dataclass, field
from fractions import Fraction
from functools import cache
from typing import Any

from derive.algebra.ring import Polynomial
from derive.expressions.tree import ONE, ZERO, Expression, Name, Negative, Number
from derive.quantities.dimension import Dimension
from derive.readable import rewrites as folder
from derive.readable.compose import Composer
from derive.readable.measure import NAME, Ruler
from derive.readable.memory import Record, Shelf
from derive.readable.workspace import Pieces, Ratio, Workspace

# Ratios looked at for one result; a stage of three nodes takes some dozens.
BUDGET = 80
# The bonus of a proposal after which nothing else needs to be looked at.
CERTAIN = 1_000_000
# Ideal gain over 1 + 1/T is worth reading even where it takes a few signs more.
AMPLIFIER_BONUS = 16
# Proposals whose parts are shortened in their turn: those that look shortest.
BEAM = 3
# Longer polynomials are split at their commonest name only.
WIDE = 6


@dataclass(frozen=True, slots=True, eq=False)
class Proposal:
    """One way to write a ratio: `build` makes the expression from those of its `parts`.

    The bonus is taken off its measure, where a form is worth a little more than its length says.
    """

    parts: tuple[Ratio, ...]
    build: Callable[..., Expression]
    bonus: int = 0


@cache
def find_rewrites() -> tuple[Any, ...]:
    """Give the rewrites in their folder by ORDER.

    Raises: RuntimeError where two claim one place.
    """
    names = sorted(module.name for module in pkgutil.iter_modules(folder.__path__))
    modules = [importlib.import_module(f"{folder.__name__}.{name}") for name in names]
    if len({module.ORDER for module in modules}) < len(modules):
        raise RuntimeError("two rewrites claim one place")
    return tuple(sorted(modules, key=lambda module: module.ORDER))


@dataclass(slots=True)
class Search:
    """One search: its workspace, what names mean, and what was found so far.

    `weights` are the measures of names that stand for more than themselves; `output_side` holds, for a
    transconductance, the resistances that its current flows into.
    """

    space: Workspace
    composer: Composer
    dimensions: Mapping[str, Dimension]
    weights: Mapping[str, int]
    output_side: Mapping[str, frozenset[str]]
    amplifiers: frozenset[str] = frozenset()
    left: int = BUDGET
    shelf: Shelf = field(default_factory=Shelf)
    found: dict[str, Expression] = field(default_factory=dict)
    open: set[str] = field(default_factory=set)
    record: Record = field(default_factory=Record)
    ruler: Ruler = field(init=False)

    def __post_init__(self) -> None:
        self.ruler = Ruler(self.weights)

    def best(self, ratio: Ratio) -> Expression:
        """Give the shortest form found."""
        if ratio.top == 0:
            return ZERO
        if ratio.minus:
            best = self.best(Ratio(ratio.top, ratio.bottom))
            return best.operand if isinstance(best, Negative) else Negative(best)
        if len(ratio.top) == 1 == len(ratio.bottom):
            return self.whole(ratio)
        known = self.found.get(ratio.key)
        if known is not None:
            self.record.used(ratio.key)
            return known
        if ratio.key in self.open or self.left <= 0:
            # What is asked for again while it is being worked is written as it stands.
            self.record.spoil()
            return self.whole(ratio)
        return self._taken_over(ratio.key) or self._worked(ratio)

    def _taken_over(self, key: str) -> Expression | None:
        """Give what an earlier search came to, where this one would come to the same and count as much."""
        settled = self.shelf.settled.get(key)
        if settled is None:
            return None
        best, needs = settled
        new = [need for need in needs if need not in self.found]
        if len(new) > self.left or not self.open.isdisjoint(needs) or self.record.spoilt(needs):
            return None
        self.left -= len(new)
        for need in new:
            self.found[need], self.record.closures[need] = self.shelf.settled[need]
        self.record.used(key)
        return best

    def _worked(self, ratio: Ratio) -> Expression:
        key = ratio.key
        self.left -= 1
        self.open.add(key)
        self.record.begin(key)
        best = self.found[key] = self._shortest(ratio)
        self.open.remove(key)
        needs = self.record.end(key)
        if needs is not None:
            self.shelf.settled[key] = best, needs
        return best

    def _shortest(self, ratio: Ratio) -> Expression:
        """Work out the proposals that look shortest before their parts are shortened, and keep the best."""
        looks: list[tuple[int, int, Proposal]] = []
        for proposal in self._proposals(ratio):
            if proposal.bonus >= CERTAIN:
                return proposal.build(*map(self.best, proposal.parts))
            look = sum(map(self.guess, proposal.parts)) - proposal.bonus
            looks.append((look, len(looks), proposal))
        best = self.whole(ratio)
        least = self.measure(best)
        for _, _, proposal in sorted(looks, key=lambda look: look[:2])[:BEAM]:
            form = proposal.build(*map(self.best, proposal.parts))
            length = self.measure(form) - proposal.bonus
            if length < least:
                best, least = form, length
        return best

    def _proposals(self, ratio: Ratio) -> Iterator[Proposal]:
        for rewrite in find_rewrites():
            yield from rewrite.propose(ratio, self)

    def guess(self, ratio: Ratio) -> int:
        """Guess how long a ratio will be, from what its factors are made of, without writing it."""
        return self._guessed(ratio.top, ratio.above) + self._guessed(ratio.bottom, ratio.below)

    def _guessed(self, polynomial: Polynomial, key: str) -> int:
        known = self.shelf.guesses.get(key)
        if known is None:
            pieces = self.space.pieces(polynomial, key)
            known = NAME * sum(pieces.powers.values())
            for factor in pieces.sums:
                names = len(self.space.names(factor))
                # Taken out again and again, a name stands once, and once more for every two terms beyond.
                known += NAME * names + NAME * max(0, len(factor) - names) // 2
            self.shelf.guesses[key] = known
        return known

    def measure(self, expression: Expression) -> int:
        """Give an expression's length."""
        return self.ruler.measure(expression)

    def whole(self, ratio: Ratio) -> Expression:
        """Write a ratio as one fraction, factors and common parts taken out above and below."""
        above = self.polynomial(ratio.top, ratio.above)
        result = self.composer.quotient(above, self.polynomial(ratio.bottom, ratio.below))
        return Negative(result) if ratio.minus else result

    def polynomial(self, polynomial: Polynomial, key: str | None = None) -> Expression:
        """Write a polynomial with its common factors taken out, again and again."""
        key = key or str(polynomial)
        known = self.shelf.written.get(key)
        if known is None:
            pieces = self.space.pieces(polynomial, key)
            known = self.shelf.written[key] = self._assembled(pieces)
        return known

    def _assembled(self, pieces: Pieces) -> Expression:
        factors = [self.monomial(pieces.number, pieces.powers)]
        factors += [self._nested(factor) for factor in pieces.sums]
        return self.composer.product(factors)

    def monomial(self, number: int, powers: Mapping[str, int]) -> Expression:
        """Write a number times names to powers."""
        factors: list[Expression] = [] if abs(number) == 1 else [Number(Fraction(abs(number)))]
        factors += [self.composer.power(Name(name), power) for name, power in powers.items()]
        product = self.composer.product(factors) if factors else ONE
        return Negative(product) if number < 0 else product

    def _nested(self, polynomial: Polynomial) -> Expression:
        """Write an irreducible sum as name·(…) + rest, with the name that makes it shortest."""
        space = self.space
        degrees = zip(space.ring.names, polynomial.degrees(), strict=False)
        names = [name for name, degree in degrees if degree == 1]
        counts = {name: len(polynomial.derivative(space.places[name])) for name in names}
        names = [name for name in names if counts[name] < len(polynomial)]
        if len(polynomial) > WIDE:
            names = sorted(names, key=lambda name: -counts[name])[:1]
        if max(counts.values(), default=0) <= 1 or not names:
            return self._flat(polynomial)
        best: Expression | None = None
        least = 0
        for name in names:
            if counts[name] == 1 and len(polynomial) <= WIDE:
                continue
            split = space.split(polynomial, name)
            if split is None:
                continue
            rest, slope = split
            times: Expression = Name(name)
            if len(rest - slope) == len(rest) - len(slope):
                # β·R + R + … is (1 + β)·R + …
                rest, times = rest - slope, self.composer.sum([ONE, times])
            first = self.composer.product([times, self.polynomial(slope)])
            proposal = self.composer.sum([first, self.polynomial(rest)])
            length = self.measure(proposal)
            if best is None or length < least:
                best, least = proposal, length
        return self._flat(polynomial) if best is None else best

    def _flat(self, polynomial: Polynomial) -> Expression:
        terms = []
        names = self.space.ring.names
        for exponents, coefficient in polynomial.to_dict().items():
            powers = {name: int(e) for name, e in zip(names, exponents, strict=False) if e}
            terms.append(self.monomial(int(coefficient), powers))
        return self.composer.sum(terms)
