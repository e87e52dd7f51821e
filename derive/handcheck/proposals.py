"""Single changes at one place of a line that would make it true there, each looked up, not yet proved."""

from __future__ import annotations

from collections.abc import Callable, Iterator
from fractions import Fraction

from derive.algebra.modular import PRIME
from derive.expressions.text import to_text
from derive.expressions.tree import (
    ONE,
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
from derive.handcheck.lexicon import Entry, Lexicon, product_of, sum_of
from derive.handcheck.missing import missing_factors, missing_in_parallel, missing_terms
from derive.handcheck.places import Place, inverse
from derive.handcheck.report import EditKind
from derive.handcheck.slips import PER_LEAF, Proposal, make
from derive.readable.measure import leaves

# Parts longer than this are not replaced as a whole: that would be writing the line anew.
LONGEST_REPLACED = 3


def proposals_at(
    place: Place,
    lexicon: Lexicon,
    multipliers: list[Entry],
    is_resistance: Callable[[Expression], bool],
) -> Iterator[Proposal]:
    """Give the changes at one place that would make the line true.

    Given: the lexicon; what a missing term may be a multiple of; whether an expression is in ohms.
    """
    if place.vanishes:
        yield make(
            "extra term",
            place,
            None,
            PER_LEAF * 0.5 + 0.6,
            f"leave {to_text(place.node)} out of the parallel combination",
        )
    for needed in place.needed:
        if needed == place.value:
            continue
        yield from _signs(place, needed)
        yield from _left_out(place, needed)
        if needed:
            yield from _of_the_node(place, needed)
            yield from _replaced(place, needed, lexicon)
            yield from missing_factors(place, needed, lexicon)
            yield from missing_in_parallel(place, needed, lexicon, is_resistance)
        yield from missing_terms(place, needed, lexicon, multipliers, is_resistance)


def negated(node: Expression) -> Expression:
    """Give a node with its sign changed, as one would write it."""
    if isinstance(node, Negative):
        return node.operand
    if isinstance(node, Sum):
        return Sum(tuple(negated(term) for term in node.terms))
    return Negative(node)


def _signs(place: Place, needed: int) -> Iterator[Proposal]:
    if (needed + place.value) % PRIME:
        return
    inside = isinstance(place.within, Product | Quotient | Negative)
    if inside and not isinstance(place.node, Sum):
        return  # what it is a factor of says the same
    after = negated(place.node)
    size = 0.0 if isinstance(place.within, Sum) else 0.6 if inside else 0.2
    yield make("sign", place, after, size, f"write {to_text(after)} for {to_text(place.node)}")


def _left_out(place: Place, needed: int) -> Iterator[Proposal]:
    node = place.node
    size = PER_LEAF * 0.5 * leaves(node)
    if needed == 0 and isinstance(place.within, Sum):
        one = node in (ONE, Negative(ONE))
        yield make(
            "one more" if one else "extra term",
            place,
            None,
            0.0 if one else size,
            f"leave out the term {to_text(node)}",
        )
    if needed == 1 and place.value != 1:
        if isinstance(place.within, Product):
            yield make("extra factor", place, None, size, f"leave out the factor {to_text(node)}")
        elif isinstance(place.within, Quotient):
            yield make("extra factor", place, ONE, size, f"write 1 for {to_text(node)}")
    if isinstance(node, Quotient) and isinstance(node.numerator, Product) and needed:
        yield from _without_divider(place, node, node.numerator, needed)


def _without_divider(place: Place, node: Quotient, above: Product, needed: int) -> Iterator[Proposal]:
    """Give a factor above that is to be left out together with what stands below: a divider too many."""
    top = place.valued.children[0]
    for number, child in enumerate(top.children):
        if child.value and needed * child.value % PRIME == top.value:
            kept = product_of(*(f for k, f in enumerate(above.factors) if k != number))
            out = to_text(Quotient(child.node, node.denominator))
            yield make("extra factor", place, kept, 0.0, f"leave out the factor {out}")


def _of_the_node(place: Place, needed: int) -> Iterator[Proposal]:
    """Give changes that need nothing but the node itself."""
    node, value = place.node, place.value
    if value and needed * value % PRIME == 1 and not isinstance(node, Number):
        after = _turned(node)
        size = 0.2 if isinstance(node, Quotient) else 0.6
        yield make("inverted", place, after, size, f"write {to_text(after)} for {to_text(node)}")
    more: Expression | None = None
    if (needed - value) % PRIME in (1, PRIME - 1) and not isinstance(node, Number):
        more = ONE if (needed - value) % PRIME == 1 else Negative(ONE)
        around = [n.terms for n in (node, place.within) if isinstance(n, Sum)]
        if any({ONE, Negative(ONE)} & set(terms) for terms in around):
            more = None  # told as a term to be left out
    if more is not None:
        after = sum_of(node, more)
        size = 0.0 if isinstance(node, Name) or not isinstance(place.within, Sum) else 0.4
        yield make("one more", place, after, size, f"write {to_text(after)} for {to_text(node)}")
    if needed == value * value % PRIME and not isinstance(node, Number):
        after = Power(node, 2)
        yield make("exponent", place, after, 0.2 * leaves(node), f"square {to_text(node)}")
    if isinstance(node, Power):
        base = place.valued.children[0].value
        for exponent in (node.exponent - 1, node.exponent + 1, -node.exponent):
            if base and exponent and pow(base, exponent, PRIME) == needed:
                after = node.base if exponent == 1 else Power(node.base, exponent)
                yield make("exponent", place, after, 0.0, f"write {to_text(after)} for {to_text(node)}")
    yield from _series_or_parallel(place, needed)
    yield from _part_of_product(place, needed)
    if isinstance(node, Number):
        number = _small_number(needed)
        if number is not None:
            after = Number(number)
            yield make("number", place, after, 0.0, f"write {to_text(after)} for {to_text(node)}")


def _turned(node: Expression) -> Expression:
    if isinstance(node, Quotient):
        return node.numerator if node.denominator == ONE else Quotient(node.denominator, node.numerator)
    return Quotient(ONE, node)


def _series_or_parallel(place: Place, needed: int) -> Iterator[Proposal]:
    node = place.node
    if not isinstance(node, Sum | Parallel):
        return
    values = [child.value for child in place.valued.children]
    after: Expression
    try:
        if isinstance(node, Parallel):
            found, after = sum(values) % PRIME, Sum(node.branches)
        else:
            found, after = inverse(sum(inverse(v) for v in values)), Parallel(node.terms)
    except ZeroDivisionError:
        return
    if found == needed:
        yield make(
            "parallel for series", place, after, 0.0, f"write {to_text(after)} for {to_text(node)}"
        )


def _part_of_product(place: Place, needed: int) -> Iterator[Proposal]:
    """1 + x for some factors x of a product: the 1 of 1 + g_m·R is what is dropped most."""
    node = place.node
    if not isinstance(node, Product) or not 2 < len(node.factors) <= 8:
        return
    values = [child.value for child in place.valued.children]
    count = len(values)
    for mask in range(1, 1 << count):
        if not 2 <= bin(mask).count("1") < count:
            continue
        inside = 1
        for k in range(count):
            if mask >> k & 1:
                inside = inside * values[k] % PRIME
        if not inside:
            return
        outside = place.value * inverse(inside) % PRIME
        for sign in (1, -1):
            if (outside * (inside + sign) - needed) % PRIME:
                continue
            grouped = product_of(*(f for k, f in enumerate(node.factors) if mask >> k & 1))
            rest = [f for k, f in enumerate(node.factors) if not mask >> k & 1]
            more = Sum((ONE, grouped)) if sign == 1 else Sum((grouped, Negative(ONE)))
            after = product_of(*rest, more)
            yield make("one more", place, after, 0.3, f"write {to_text(more)} for {to_text(grouped)}")


def _small_number(value: int) -> Fraction | None:
    for below in (1, 2, 3, 4):
        above = value * below % PRIME
        for found in (above, above - PRIME):
            if abs(found) <= 100 and found:
                return Fraction(found, below)
    return None


def _replaced(place: Place, needed: int, lexicon: Lexicon) -> Iterator[Proposal]:
    """Something else that should stand at the place: another symbol, another node."""
    node = place.node
    length = leaves(node)
    if length > LONGEST_REPLACED or (place.within is None and length > 1) or node == ONE:
        return
    entry = lexicon.get(needed)
    if entry is None:
        return
    cost, found = entry
    if isinstance(found, Number) != isinstance(node, Number) and found != Name("pi"):
        return
    kind: EditKind = "other symbol"
    size = PER_LEAF * (cost - 1 + length - 1)
    if isinstance(node, Name) and isinstance(found, Name):
        if node.text.startswith("v_") and found.text.startswith("v_"):
            kind = "other node"
        elif node.text.rstrip("0123456789") == found.text.rstrip("0123456789"):
            size -= 0.3
    elif isinstance(node, Number):
        kind = "number"
    elif not isinstance(found, Name):
        size += 0.5
    yield make(kind, place, found, size, f"write {to_text(found)} for {to_text(node)}")
