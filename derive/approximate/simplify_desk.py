"""Quantities of stages written for reading, each a name with a line of its own, and what was assumed for them."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field, replace

from derive.approximate.questions import Without
from derive.approximate.simplify_lines import WIDTH, Lines
from derive.approximate.simplify_network import NOWHERE, Network
from derive.approximate.simplify_original import Original
from derive.approximate.simplify_quantities import Piece, Quantity, Short
from derive.approximate.simplify_trials import Change
from derive.approximate.simplify_words import element_assumption, term_assumptions, tie_assumption
from derive.expressions.polynomials import multiply
from derive.expressions.text import to_text
from derive.expressions.tree import Expression, Parallel
from derive.expressions.unicode_text import to_unicode
from derive.readable.measure import leaves
from derive.readable.readable import read_ratio
from derive.readable.vocabulary import Vocabulary

# Up to so many names and numbers, a value stands where it is used.
INLINE = 2


@dataclass(slots=True)
class Desk:
    """What is written so far: lines, the expressions met, and the assumptions made, with what each was made for."""

    network: Network
    vocabulary: Vocabulary
    lines: Lines
    met: list[Expression] = field(default_factory=list)
    made: dict[str, tuple[Without, list[str]]] = field(default_factory=dict)
    unlisted: int = 0
    longest: int = 0

    def write(self, short: Short, quantity: Quantity, stem: str) -> tuple[int, Expression]:
        """Write a quantity: its sign, and its size by its name, or as it is where that is no longer."""
        single = len(short.pieces) == 1
        sign = -1 if single and short.value < 0 else 1
        trees = []
        for piece in short.pieces:
            trees.append(read_ratio(piece.ring, sign * piece.top, piece.bottom, self.vocabulary))
            self.longest = max(self.longest, piece.terms)
        self.met += trees
        tree = trees[0] if single else self._parallel(trees, quantity, stem)
        where = tree
        if leaves(tree) > INLINE or isinstance(tree, Parallel):
            where = self.lines.name(tree, stem, self.says(quantity))
        self.assume(short.network, short.changes, short.pieces, to_text(where))
        return sign, where

    def _parallel(self, trees: Sequence[Expression], quantity: Quantity, stem: str) -> Expression:
        """Write what hangs at a node side by side, long parts by names of their own."""
        branches: list[Expression] = []
        for tree in trees:
            branches += tree.branches if isinstance(tree, Parallel) else [tree]
        if len(to_unicode(Parallel(tuple(branches)))) <= WIDTH:
            return Parallel(tuple(branches))
        words = f"one of the ways from {self.node(quantity.at)} to ground"
        return Parallel(
            tuple(
                self.lines.part(branch, stem, words) if leaves(branch) > 2 * INLINE else branch
                for branch in branches
            )
        )

    def node(self, place: int | None, otherwise: str = "ground") -> str:
        """Say which node it is."""
        return otherwise if place is None or place == NOWHERE else f"node {self.network.labels[place][1]}"

    def says(self, quantity: Quantity) -> str:
        """Say what a quantity is."""
        start = self.node(quantity.driven, "the input")
        end = self.node(quantity.at, "the output")
        if quantity.kind == "gain":
            return f"gain from {start} to {end}"
        if quantity.kind == "transfer":
            return f"current from {end} into a short to ground, per unit at {start}"
        if quantity.other != NOWHERE:
            return f"resistance between {end} and {self.node(quantity.other)}"
        held = "" if quantity.driven is None else f", {start} held"
        return f"resistance from {end} to ground{held}"

    def assume(
        self, network: Network, changes: Sequence[Change], pieces: Sequence[Piece], where: str
    ) -> None:
        """Note what was assumed for what is written as `where`."""
        found = [element_assumption(network, change) for change in changes if not change.idle]
        for piece in pieces:
            used = set(piece.ring.names)
            found += [tie_assumption(name, leader) for name, leader in piece.ties if leader in used]
            for terms, kept in piece.dropped:
                listed, unlisted = term_assumptions(piece.ring, self.vocabulary.order, terms, kept)
                found += listed
                self.unlisted += unlisted
        for each in found:
            _, places = self.made.setdefault(each.assumption.that, (each, []))
            if where not in places:
                places.append(where)

    @property
    def assumptions(self) -> tuple[Without, ...]:
        """What was assumed, each once, with what it was assumed for."""
        return tuple(_placed(each, places) for each, places in self.made.values())


def _placed(each: Without, places: Sequence[str]) -> Without:
    because = f"in {', '.join(places)}: {each.assumption.because}"
    return Without(replace(each.assumption, because=because), None)


def product(factors: Sequence[tuple[int, Expression]]) -> tuple[int, Expression]:
    """Multiply factors with their signs."""
    sign = 1
    for one, _ in factors:
        sign *= one
    return sign, multiply([tree for _, tree in factors])


def desk_of(original: Original, network: Network) -> Desk:
    """Begin a desk for a circuit."""
    lines = Lines(set(original.taken), dict(original.vocabulary.dimensions))
    return Desk(network, original.vocabulary, lines)
