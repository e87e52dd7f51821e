"""Short expressions by their values at one point: what may be missing from a line is looked up here.

Every entry is an expression that an engineer writes in one go: a symbol, a sum, a parallel combination, a divider,
1 + g_m·R, a resistance over β + 1, a product of a few symbols, and what the derivation itself and the machine's
result are made of. The cheapest expression of a value is kept.
"""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from fractions import Fraction
from itertools import combinations, combinations_with_replacement

from derive.algebra.modular import PRIME
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
from derive.expressions.walk import children_of
from derive.handcheck.places import Valued, inverse, valued
from derive.quantities.dimension import CAPACITANCE, CONDUCTANCE, RATIO, RESISTANCE, Dimension
from derive.readable.measure import leaves

# Names of which combinations are made, and of which products of more than two.
MOST_NAMES, MOST_IN_PRODUCTS = 30, 13
LONGEST_PART = 14
MOST_PARTS = 1500
# What a name costs that the derivation does not use itself.
STRANGE = 0.6
Entry = tuple[Expression, int]


class Lexicon:
    """Expressions by value, each with its cost."""

    def __init__(self, familiar: Iterable[str]) -> None:
        self._familiar = frozenset(familiar)
        self._found: dict[int, tuple[float, Expression]] = {}
        self._second: dict[int, tuple[float, Expression]] = {}
        self.singles: list[Entry] = []

    def add(self, expression: Expression, value: int, extra: float = 0.0) -> None:
        """Take in an expression, if it is cheaper than what is there of the same value."""
        value %= PRIME
        if value == 0:
            return
        before = self._found.get(value)
        if before is None:
            self._found[value] = (self.cost(expression) + extra, expression)
            return
        if value in self._second and before[0] <= 1.0:
            return
        cost = self.cost(expression) + extra
        if expression == before[1]:
            return
        if cost < before[0]:
            self._found[value], self._second[value] = (cost, expression), before
        elif value not in self._second or cost < self._second[value][0]:
            self._second[value] = (cost, expression)

    def cost(self, expression: Expression) -> float:
        """Give the cost of an expression: its leaves, and more for names that the derivation does not use."""
        kind = type(expression)
        if kind is Name:
            name = expression.text  # type: ignore[union-attr]
            return 1.0 if name in self._familiar or name == "s" else 1.0 + STRANGE
        if kind is Number:
            return 1.0
        total = 0.0
        for child in children_of(expression):
            total += self.cost(child)
        return total * abs(expression.exponent) if isinstance(expression, Power) else total

    def get(self, value: int, but: Sequence[Expression] = ()) -> tuple[float, Expression] | None:
        """Give the cheapest expression of a value with its cost, or the next one where it is one of `but`."""
        found = self._found.get(value % PRIME)
        if found is not None and found[1] in but:
            found = self._second.get(value % PRIME)
            return None if found is None or found[1] in but else found
        return found

    def copy(self) -> Lexicon:
        """Give a lexicon that can be added to without changing this one."""
        other = Lexicon(self._familiar)
        other._found = dict(self._found)
        other._second = dict(self._second)
        other.singles = list(self.singles)
        return other

    def __len__(self) -> int:
        return len(self._found)


def sum_of(*parts: Expression) -> Expression:
    """Give a flat sum."""
    terms: list[Expression] = []
    for part in parts:
        terms.extend(part.terms if isinstance(part, Sum) else (part,))
    return Sum(tuple(terms))


def product_of(*parts: Expression) -> Expression:
    """Give a flat product, without factors of 1."""
    factors: list[Expression] = []
    for part in parts:
        factors.extend(part.factors if isinstance(part, Product) else (part,))
    kept = [factor for factor in factors if factor != ONE]
    kept.sort(key=lambda factor: not isinstance(factor, Number))
    return Product(tuple(kept)) if len(kept) > 1 else kept[0] if kept else ONE


def parallel_of(*parts: Expression) -> Expression:
    """Give a flat parallel combination."""
    branches: list[Expression] = []
    for part in parts:
        branches.extend(part.branches if isinstance(part, Parallel) else (part,))
    return Parallel(tuple(branches))


def build(
    names: Sequence[tuple[str, Dimension | None]],
    values: Mapping[str, int],
    familiar: Sequence[str],
    written: Iterable[Expression],
) -> Lexicon:
    """Give the lexicon of a derivation at a point.

    Given: the names that values of the circuit are written with, and what they are in; the point; the names that
    the derivation uses itself, first to be used; expressions whose parts are to be entries as well.
    """
    lexicon = Lexicon(familiar)
    for number in (1, 2, 3, 4, 5, 6, 8, 10):
        lexicon.add(Number(Fraction(number)), number)
    if "pi" in values:
        lexicon.add(Name("pi"), values["pi"])
        lexicon.add(Product((Number(Fraction(2)), Name("pi"))), 2 * values["pi"])
    for expression in written:
        add_parts(lexicon, expression, values)
    known = [(name, dimension) for name, dimension in names if values.get(name)]
    known.sort(key=lambda item: item[0] not in familiar)
    known = known[:MOST_NAMES]
    atoms: list[Entry] = [(Name(name), values[name]) for name, _ in known]
    s = (Name("s"), values["s"])
    for expression, value in (*atoms, s):
        lexicon.add(expression, value)
        lexicon.add(Quotient(ONE, expression), inverse(value))
    lexicon.singles = [*atoms, s]
    of: dict[Dimension | None, list[Entry]] = {}
    for (_, dimension), atom in zip(known, atoms, strict=True):
        of.setdefault(dimension, []).append(atom)
    _pairs(lexicon, of)
    _resistances(lexicon, of)
    _one_and(lexicon, of, s)
    _products(lexicon, [*atoms[:MOST_IN_PRODUCTS], s])
    return lexicon


def add_parts(lexicon: Lexicon, expression: Expression, values: Mapping[str, int]) -> None:
    """Take in the parts of an expression that are short; those that have no value here are passed over."""
    try:
        tree = valued(expression, values)
    except (KeyError, ZeroDivisionError):
        return
    pending: list[Valued] = [tree]
    seen = 0
    while pending and seen < MOST_PARTS:
        node = pending.pop()
        seen += 1
        if children_of(node.node) and leaves(node.node) <= LONGEST_PART:
            if isinstance(node.node, Negative):
                lexicon.add(node.node.operand, -node.value)
            elif isinstance(node.node, Quotient | Product | Sum | Parallel):
                lexicon.add(node.node, node.value)
        pending.extend(reversed(node.children))


def _pairs(lexicon: Lexicon, of: Mapping[Dimension | None, list[Entry]]) -> None:
    """Products, quotients, sums and parallel combinations of two names."""
    everything = [entry for group in of.values() for entry in group]
    inverses = {value: inverse(value) for _, value in everything}
    for (a, x), (b, y) in combinations_with_replacement(everything, 2):
        lexicon.add(Product((a, b)), x * y)
        if a != b:
            lexicon.add(Quotient(a, b), x * inverses[y])
            lexicon.add(Quotient(b, a), y * inverses[x])
    for dimension, group in of.items():
        for (a, x), (b, y) in combinations(group, 2):
            lexicon.add(Sum((a, b)), x + y)
            for c, z in everything[:20]:
                lexicon.add(Product((c, Sum((a, b)))), z * (x + y))
            if dimension == RESISTANCE and (x + y) % PRIME:
                lexicon.add(Parallel((a, b)), x * y * inverse(x + y), -0.1)


def _resistances(lexicon: Lexicon, of: Mapping[Dimension | None, list[Entry]]) -> None:
    """Dividers, three resistances, resistances seen through a base or from an emitter."""
    resistances = of.get(RESISTANCE, [])[:14]
    ratios = of.get(RATIO, [])[:6]
    conductances = of.get(CONDUCTANCE, [])[:4]
    pairs: list[Entry] = []
    for (a, x), (b, y) in combinations(resistances, 2):
        if not (x + y) % PRIME:
            continue
        whole = inverse(x + y)
        lexicon.add(Quotient(a, Sum((a, b))), x * whole, -0.6)
        lexicon.add(Quotient(b, Sum((a, b))), y * whole, -0.6)
        both = (Parallel((a, b)), x * y * whole % PRIME)
        pairs += [both, (Sum((a, b)), (x + y) % PRIME)]
        for c, z in resistances:
            if c not in (a, b) and (x + y + z) % PRIME:
                lexicon.add(Sum((a, b, c)), x + y + z)
                lexicon.add(Sum((both[0], c)), both[1] + z)
                lexicon.add(Quotient(a, Sum((a, b, c))), x * inverse(x + y + z))
                lexicon.add(Quotient(c, Sum((a, b, c))), z * inverse(x + y + z))
                lexicon.add(Quotient(b, Sum((a, b, c))), y * inverse(x + y + z))
                if (both[1] + z) % PRIME:
                    lexicon.add(Parallel((a, b, c)), both[1] * z * inverse(both[1] + z), -0.2)
                    lexicon.add(Parallel((c, Sum((a, b)))), z * (x + y) * inverse(x + y + z))
    one_more = [(Sum((r, ONE)), (v + 1) % PRIME) for r, v in ratios if (v + 1) % PRIME]
    one_more += [
        (Sum((ONE, Product((g, r)))), (1 + u * v) % PRIME)
        for g, u in conductances
        for r, v in resistances
        if (1 + u * v) % PRIME
    ]
    for (m, more), (r, v) in ((m, r) for m in one_more for r in (*resistances, *pairs[:40])):
        lexicon.add(Quotient(r, m), v * inverse(more), -0.5)
        lexicon.add(product_of(m, r), v * more, -0.5)
    for g, u in conductances:
        for r, v in pairs:
            lexicon.add(product_of(g, r), u * v)
            lexicon.add(Sum((ONE, product_of(g, r))), 1 + u * v, -0.5)
        for r, v in resistances:
            if (1 + u * v) % PRIME:
                lexicon.add(Parallel((r, Quotient(ONE, g))), v * inverse(1 + u * v))
                lexicon.add(Sum((r, Quotient(ONE, g))), v + inverse(u))


def _one_and(lexicon: Lexicon, of: Mapping[Dimension | None, list[Entry]], s: Entry) -> None:
    """1 + something without a unit, and its reciprocal: β + 1, 1 + g_m·R, 1 + s·R·C, 1 + R_1/R_2."""
    found: list[Entry] = list(of.get(RATIO, []))
    for r, v in of.get(RESISTANCE, []):
        found += [(Product((g, r)), u * v % PRIME) for g, u in of.get(CONDUCTANCE, [])]
        found += [(Product((s[0], r, c)), s[1] * u * v % PRIME) for c, u in of.get(CAPACITANCE, [])]
    for c, u in of.get(CAPACITANCE, []):
        for g, v in of.get(CONDUCTANCE, []):
            found.append((Quotient(Product((s[0], c)), g), s[1] * u * inverse(v) % PRIME))
    for group in of.values():
        for (a, x), (b, y) in combinations(group, 2):
            found.append((Quotient(a, b), x * inverse(y) % PRIME))
            found.append((Quotient(b, a), y * inverse(x) % PRIME))
    for expression, value in found:
        lexicon.add(expression, value)
        if (1 + value) % PRIME:
            lexicon.add(Sum((ONE, expression)), 1 + value, -0.5)
            lexicon.add(Quotient(ONE, Sum((ONE, expression))), inverse(1 + value), -0.5)
        if (1 - value) % PRIME:
            lexicon.add(Sum((ONE, Negative(expression))), 1 - value)


def _products(lexicon: Lexicon, atoms: Sequence[Entry]) -> None:
    """Products of three and four names."""
    for count in (3, 4):
        for chosen in combinations(atoms, count):
            value = 1
            for _, x in chosen:
                value = value * x % PRIME
            lexicon.add(Product(tuple(a for a, _ in chosen)), value)
