"""Single changes that touch a line in several places at once: symbols swapped or mistaken throughout, brackets."""

from __future__ import annotations

from collections.abc import Callable, Iterator, Mapping
from itertools import combinations

from derive.algebra.modular import PRIME
from derive.errors import DeriveError
from derive.expressions.text import to_text
from derive.expressions.tree import Expression, Name, Negative, Product, Quotient, Sum
from derive.expressions.walk import children_of, evaluate_modulo, names_of, substitute
from derive.handcheck.lexicon import product_of, sum_of
from derive.handcheck.places import Place, inverse
from derive.handcheck.proposals import negated
from derive.handcheck.slips import BASE, Proposal
from derive.quantities.dimension import Dimension

# Nodes that may be evaluated for one line in looking for names that were swapped or mistaken.
MOST_WORK = 150_000
# Within a part of a line names are swapped if there are no more than these.
MOST_SWAPPED = 10


def size_of(expression: Expression) -> int:
    """Give the number of nodes."""
    return 1 + sum(size_of(child) for child in children_of(expression))


def names_mistaken(
    side: int,
    expression: Expression,
    needed: int,
    values: Mapping[str, int],
    dimension: Callable[[str], Dimension | None],
    pool: tuple[str, ...],
    strange: Callable[[str], float],
) -> Iterator[Proposal]:
    """Give the names of one side that would have to be swapped, or written for another, throughout.

    Given: the pool of names that may be written instead, and what a name costs that the derivation does not use;
    only names of one dimension are exchanged.
    """
    used = [name for name in names_of(expression) if name in values]
    left = MOST_WORK // max(1, size_of(expression))
    alike = [(a, b) for a, b in combinations(used, 2) if dimension(a) == dimension(b)]
    for a, b in alike:
        if left <= 0:
            return
        left -= 1
        if _value(expression, {**values, a: values[b], b: values[a]}) == needed:
            after = substitute(expression, {a: Name(b), b: Name(a)})
            says = f"swap {a} and {b}"
            yield Proposal("swapped", (side,), expression, after, BASE["swapped"], says)
    counts = _counted(expression)
    for name in used:
        if counts[name] < 2:
            continue
        for other in pool:
            if other == name or not values.get(other) or dimension(other) != dimension(name):
                continue
            if left <= 0:
                return
            left -= 1
            if _value(expression, {**values, name: values[other]}) == needed:
                after = substitute(expression, {name: Name(other)})
                node = name.startswith("v_") and other.startswith("v_")
                kind = "other node" if node else "other symbol"
                cost = BASE[kind] + 0.3 + 0.1 * counts[name] + strange(other)
                says = f"write {other} for {name}, {counts[name]} times"
                yield Proposal(
                    "other node" if node else "other symbol", (side,), expression, after, cost, says
                )


def names_swapped(
    place: Place, values: Mapping[str, int], dimension: Callable[[str], Dimension | None]
) -> Iterator[Proposal]:
    """Give the names that would have to be swapped within one part of a line only."""
    node = place.node
    if place.within is None or not isinstance(node, Sum | Product | Quotient):
        return
    used = [name for name in names_of(node) if name in values]
    if len(used) > MOST_SWAPPED or size_of(node) > 6 * MOST_SWAPPED:
        return
    for a, b in combinations(used, 2):
        if dimension(a) != dimension(b):
            continue
        if _value(node, {**values, a: values[b], b: values[a]}) in place.needed:
            after = substitute(node, {a: Name(b), b: Name(a)})
            if after != node:
                says = f"swap {a} and {b} in {to_text(node)}"
                yield Proposal("swapped", place.way, node, after, BASE["swapped"] + 0.2, says)


def _counted(expression: Expression) -> dict[str, int]:
    found: dict[str, int] = {}
    pending = [expression]
    while pending:
        node = pending.pop()
        if isinstance(node, Name):
            found[node.text] = found.get(node.text, 0) + 1
        pending.extend(children_of(node))
    return found


def _value(expression: Expression, values: Mapping[str, int]) -> int | None:
    try:
        return evaluate_modulo(expression, values, PRIME)
    except (ZeroDivisionError, DeriveError):
        return None


def brackets_at(place: Place) -> Iterator[Proposal]:
    """Give the brackets that would have to stand elsewhere: x·(a + b) for x·a + b, and the other way."""
    node = place.node
    if isinstance(node, Sum) and len(node.terms) <= 8:
        yield from _gathered(place, node)
    if isinstance(node, Product):
        yield from _spread(place, node)
    if isinstance(node, Quotient) and isinstance(node.numerator, Sum):
        yield from _divided(place, node, node.numerator)


def _gathered(place: Place, node: Sum) -> Iterator[Proposal]:
    """Give x·a + b that should be x·(a + b), and b + a/x that should be (b + a)/x."""
    children = place.valued.children
    for i, child in enumerate(children):
        minus = isinstance(child.node, Negative)
        inner = child.children[0] if minus else child
        sign = -1 if minus else 1
        for factor, value, rest, over in _parts(inner.node, [c.value for c in inner.children]):
            for j, other in enumerate(children):
                if j == i:
                    continue
                change = other.value * (value - 1) % PRIME
                if (place.value + change) % PRIME not in place.needed or not change:
                    continue
                term = negated(other.node) if sign < 0 else other.node
                inside = sum_of(rest, term)
                gathered = Quotient(inside, factor) if over else product_of(factor, inside)
                signed: Expression = Negative(gathered) if sign < 0 else gathered
                kept = [signed if k == i else c.node for k, c in enumerate(children) if k != j]
                after = Sum(tuple(kept)) if len(kept) > 1 else kept[0]
                says = f"take {to_text(other.node)} into the bracket: {to_text(gathered)}"
                yield Proposal("bracket", place.way, node, after, BASE["bracket"], says)


def _parts(node: Expression, values: list[int]) -> Iterator[tuple[Expression, int, Expression, bool]]:
    """Give every factor of a term with its value, what is left without it, and whether it stands below."""
    if isinstance(node, Product):
        for k, factor in enumerate(node.factors):
            yield factor, values[k], product_of(*(f for i, f in enumerate(node.factors) if i != k)), False
    if isinstance(node, Quotient) and values[1]:
        yield node.denominator, inverse(values[1]), node.numerator, True


def _spread(place: Place, node: Product) -> Iterator[Proposal]:
    """Give x·(a + b) that should be x·a + b."""
    children = place.valued.children
    for k, child in enumerate(children):
        if not isinstance(child.node, Sum) or not child.value:
            continue
        outside = place.value * inverse(child.value) % PRIME
        rest = product_of(*(f for i, f in enumerate(node.factors) if i != k))
        for term in child.children:
            found = (outside * (child.value - term.value) + term.value) % PRIME
            if found not in place.needed or found == place.value:
                continue
            others = [c.node for c in child.children if c is not term]
            kept = others[0] if len(others) == 1 else Sum(tuple(others))
            after = sum_of(product_of(rest, kept), term.node)
            says = f"take {to_text(term.node)} out of the bracket: {to_text(after)}"
            yield Proposal("bracket", place.way, node, after, BASE["bracket"], says)


def _divided(place: Place, node: Quotient, above: Sum) -> Iterator[Proposal]:
    """Give (a + b)/x that should be a + b/x."""
    top, bottom = place.valued.children
    if not bottom.value:
        return
    for term in top.children:
        found = ((top.value - term.value) * inverse(bottom.value) + term.value) % PRIME
        if found not in place.needed or found == place.value:
            continue
        others = [c.node for c in top.children if c is not term]
        kept = others[0] if len(others) == 1 else Sum(tuple(others))
        after = sum_of(Quotient(kept, node.denominator), term.node)
        says = f"take {to_text(term.node)} out of the fraction: {to_text(after)}"
        yield Proposal("bracket", place.way, node, after, BASE["bracket"], says)
