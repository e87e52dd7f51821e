"""Every place of a written line with its value, and the value that it would need for the line to be true."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import dataclass

from flint import nmod_poly

from derive.algebra.modular import PRIME
from derive.check.solve import residue
from derive.expressions.tree import (
    Expression,
    Name,
    Negative,
    Number,
    Parallel,
    Power,
    Product,
    Quotient,
    Sum,
)
from derive.expressions.walk import children_of, with_children
from derive.handcheck.report import Way

# Roots of higher degree are not looked for.
HIGHEST_POWER = 6


def inverse(value: int) -> int:
    """Give the reciprocal modulo the prime.

    Raises: ZeroDivisionError for zero.
    """
    if not value % PRIME:
        raise ZeroDivisionError
    return pow(value, -1, PRIME)


@dataclass(frozen=True, slots=True)
class Valued:
    """A tree with the value of each of its nodes at one point; `node` has `children` in order."""

    node: Expression
    value: int
    children: tuple[Valued, ...]


@dataclass(frozen=True, slots=True)
class Place:
    """A node of a line: the way to it, its value, and the values that would make the line true.

    `vanishes` tells that the line would be true with this branch of a parallel combination left out. `within` is
    the node around it, None for a whole side.
    """

    way: Way
    node: Expression
    valued: Valued
    needed: tuple[int, ...]
    within: Expression | None
    vanishes: bool = False

    @property
    def value(self) -> int:
        """The node's value as it is written."""
        return self.valued.value


def valued(node: Expression, values: Mapping[str, int]) -> Valued:
    """Give a tree with all its values.

    Raises: ZeroDivisionError where something has no value; KeyError for a root or a name that has none.
    """
    if isinstance(node, Name):
        return Valued(node, values[node.text] % PRIME, ())
    if isinstance(node, Number):
        return Valued(node, residue(node.value, PRIME), ())
    children = tuple(valued(child, values) for child in children_of(node))
    return Valued(node, combined(node, [child.value for child in children]), children)


def combined(node: Expression, values: list[int]) -> int:
    """Give the value of a node from those of its operands."""
    if isinstance(node, Sum):
        return sum(values) % PRIME
    if isinstance(node, Product):
        total = 1
        for value in values:
            total = total * value % PRIME
        return total
    if isinstance(node, Quotient):
        return values[0] * inverse(values[1]) % PRIME
    if isinstance(node, Power):
        base = values[0] if node.exponent >= 0 else inverse(values[0])
        return pow(base, abs(node.exponent), PRIME)
    if isinstance(node, Negative):
        return -values[0] % PRIME
    if isinstance(node, Parallel):
        return inverse(sum(inverse(value) for value in values))
    raise KeyError(type(node).__name__)


def places(side: int, tree: Valued, needed: int) -> Iterator[Place]:
    """Give every place of a side, from the whole of it down, each before its operands.

    Given: 0 for the left side or 1 for the right one, and the value of the other.
    """
    pending = [Place((side,), tree.node, tree, (needed % PRIME,), None)]
    while pending:
        place = pending.pop()
        yield place
        for number in reversed(range(len(place.valued.children))):
            child = place.valued.children[number]
            wanted: dict[int, None] = {}
            vanishes = False
            for value in place.needed:
                for found in _needed(place.valued, number, value):
                    if found is None:
                        vanishes = True
                    else:
                        wanted[found % PRIME] = None
            way = (*place.way, number)
            pending.append(Place(way, child.node, child, tuple(wanted), place.node, vanishes))


def _needed(tree: Valued, number: int, value: int) -> list[int | None]:
    """Give what an operand would have to be for the node to have a value; None for a branch left out."""
    node = tree.node
    others = [child.value for place, child in enumerate(tree.children) if place != number]
    own = tree.children[number].value
    try:
        if isinstance(node, Sum):
            return [value - tree.value + own]
        if isinstance(node, Product):
            rest = tree.value * inverse(own) if own else combined(node, others)
            return [value * inverse(rest)]
        if isinstance(node, Quotient):
            return [value * others[0] if number == 0 else others[0] * inverse(value)]
        if isinstance(node, Negative):
            return [-value]
        if isinstance(node, Power):
            return list(_roots(value, node.exponent))
        if isinstance(node, Parallel):
            left = (inverse(value) - inverse(tree.value) + inverse(own)) % PRIME
            return [inverse(left)] if left else [None]
    except ZeroDivisionError:
        pass
    return []


def _roots(value: int, exponent: int) -> list[int]:
    if exponent < 0:
        value, exponent = inverse(value), -exponent
    if exponent == 1:
        return [value]
    if not 1 < exponent <= HIGHEST_POWER:
        return []
    _, factors = nmod_poly([-value % PRIME, *([0] * (exponent - 1)), 1], PRIME).factor()
    return [-int(f[0]) % PRIME for f, _ in factors if f.degree() == 1]


def replaced(tree: Expression, way: Way, after: Expression) -> Expression:
    """Give a tree with the node at a way (without the side) changed."""
    if not way:
        return after
    children = list(children_of(tree))
    children[way[0]] = replaced(children[way[0]], way[1:], after)
    return with_children(tree, tuple(children))


def taken_out(tree: Expression, way: Way) -> Expression | None:
    """Give a tree without the term, factor or branch at a way; None where nothing would be left."""
    if len(way) == 1:
        kept = tuple(child for place, child in enumerate(children_of(tree)) if place != way[0])
        if not isinstance(tree, Sum | Product | Parallel) or not kept:
            return None
        return kept[0] if len(kept) == 1 else with_children(tree, kept)
    children = list(children_of(tree))
    inner = taken_out(children[way[0]], way[1:])
    if inner is None:
        return None
    children[way[0]] = inner
    return with_children(tree, tuple(children))
