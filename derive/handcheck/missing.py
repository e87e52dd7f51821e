"""What is missing at a place of a line: a term, a factor, a resistance in series or in parallel."""

from __future__ import annotations

from collections.abc import Callable, Iterator

from derive.algebra.modular import PRIME
from derive.expressions.text import to_text
from derive.expressions.tree import (
    ONE,
    Expression,
    Name,
    Negative,
    Number,
    Parallel,
    Product,
    Quotient,
    Sum,
)
from derive.handcheck.lexicon import Entry, Lexicon, parallel_of, product_of, sum_of
from derive.handcheck.places import Place, inverse
from derive.handcheck.report import EditKind
from derive.handcheck.slips import PER_LEAF, Proposal, make
from derive.readable.measure import leaves


def missing_terms(
    place: Place,
    needed: int,
    lexicon: Lexicon,
    multipliers: list[Entry],
    is_resistance: Callable[[Expression], bool],
) -> Iterator[Proposal]:
    """Give a term that is missing. In a sum it is looked for once, and not again at each term."""
    if isinstance(place.within, Sum | Negative):
        return
    missing = (needed - place.value) % PRIME
    own = place.node.terms if isinstance(place.node, Sum) else (place.node,)
    best: tuple[float, Expression] | None = None
    for sign in (1, -1):
        # To take off a term that stands there is told as leaving it out.
        entry = lexicon.get(sign * missing, own if sign == -1 else ())
        if entry is not None and (best is None or entry[0] < best[0]):
            best = entry[0], entry[1] if sign == 1 else Negative(entry[1])
    if best is None and (isinstance(place.node, Sum) or place.within is None):
        best = _multiple(missing, lexicon, multipliers)
    if best is None:
        return
    cost, found = best
    bare = found.operand if isinstance(found, Negative) else found
    if bare == ONE:
        return  # told as "one more"
    after = sum_of(place.node, found)
    inside = isinstance(place.node, Sum)
    seen = not isinstance(found, Negative) and is_resistance(place.node)
    kind: EditKind = "missing resistance" if seen and not inside else "dropped term"
    size = PER_LEAF * cost + (0.0 if inside else -0.1 if seen else 0.3)
    verb = f"take off {to_text(bare)}" if isinstance(found, Negative) else f"add {to_text(bare)}"
    at = ""
    if leaves(place.node) <= 4:
        at = f" {'from' if isinstance(found, Negative) else 'to'} {to_text(place.node)}"
    yield make(kind, place, after, size, verb + at)


def _multiple(
    missing: int, lexicon: Lexicon, multipliers: list[Entry]
) -> tuple[float, Expression] | None:
    best: tuple[float, Expression] | None = None
    for factor, value in multipliers:
        rest = missing * inverse(value) % PRIME
        for sign in (1, -1):
            entry = lexicon.get(sign * rest)
            if entry is None:
                continue
            cost = lexicon.cost(factor) + entry[0] + 0.2
            if best is None or cost < best[0]:
                whole = product_of(factor, entry[1])
                best = cost, whole if sign == 1 else Negative(whole)
    return best


def missing_factors(place: Place, needed: int, lexicon: Lexicon) -> Iterator[Proposal]:
    """Give a factor that is missing, above or below. In a product it is looked for once."""
    node = place.node
    if isinstance(place.within, Product | Quotient) or isinstance(node, Negative) or not place.value:
        return
    ratio = needed * inverse(place.value) % PRIME
    for above, value in ((True, ratio), (False, inverse(ratio))):
        entry = lexicon.get(value)
        sign = 1
        if entry is None:
            entry, sign = lexicon.get(-value), -1
        if entry is None or entry[1] == ONE:
            continue
        cost, found = entry
        kind: EditKind = (
            "number" if isinstance(found, Number) or found == Name("pi") else "dropped factor"
        )
        bare = product_of(node, found) if above else _divided(node, found)
        after = bare if sign == 1 else Negative(bare)
        verb = "multiply" if above else "divide"
        size = PER_LEAF * cost + (0.8 if sign < 0 else 0.0) + (0.0 if above else 0.05)
        at = f" {to_text(node)}" if leaves(node) <= 6 else ""
        minus = "" if sign == 1 else "-"
        yield make(kind, place, after, size, f"{verb}{at} by {minus}{to_text(found)}")
        if above and isinstance(found, Name | Product):
            return


def _divided(node: Expression, found: Expression) -> Expression:
    if isinstance(node, Quotient):
        return Quotient(node.numerator, product_of(node.denominator, found))
    return Quotient(node, found)


def missing_in_parallel(
    place: Place, needed: int, lexicon: Lexicon, is_resistance: Callable[[Expression], bool]
) -> Iterator[Proposal]:
    """Give a resistance that is missing in parallel."""
    if isinstance(place.within, Parallel) or not place.value:
        return
    left = (inverse(needed) - inverse(place.value)) % PRIME
    if not left:
        return
    entry = lexicon.get(inverse(left))
    if entry is None or not is_resistance(place.node):
        return
    cost, found = entry
    after = parallel_of(place.node, found)
    says = f"put {to_text(found)} in parallel with {to_text(place.node)}"
    yield make("missing resistance", place, after, PER_LEAF * cost, says)
