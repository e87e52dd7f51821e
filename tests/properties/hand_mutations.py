"""True lines of hand algebra taken from results, one slip made in each, and what a slip does, by exact rationals."""

from __future__ import annotations

import itertools
import random
from collections.abc import Callable, Iterator
from dataclasses import dataclass
from fractions import Fraction
from pathlib import Path

from mutate import children, nodes, rebuilt

from derive.bands.choose import bands_of
from derive.bands.restrict import restrict
from derive.bias.solve import operating_point
from derive.check.excitation import excite
from derive.check.points import Stream, values_exact
from derive.check.solve import solve_exact
from derive.check.stamp import assemble
from derive.check.verdict import Solution
from derive.devices.linearise import linearise
from derive.errors import DeriveError
from derive.expressions.text import to_text
from derive.expressions.tree import (
    ONE,
    Equation,
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
from derive.expressions.walk import evaluate, names_of, substitute
from derive.handcheck.report import HandFile, HandLine
from derive.pipeline import solve
from derive.quantities.dimension import Dimension
from derive.readable.measure import leaves
from derive.readable.vocabulary import vocabulary_of
from derive.reading.read import read

CASES = Path(__file__).resolve().parents[2] / "cases"
LONGEST = 60
ATTEMPTS = 300


def solutions(case: str) -> Iterator[Solution]:
    """Give every result of a case, in every band."""
    topology = read(str(CASES / case / "topology.toml"))
    point = operating_point(topology)
    circuit = linearise(topology, {d.part: d for d in point.devices} if point else {})
    for name in bands_of(circuit):
        band = restrict(circuit, name)
        for find in topology.finds:
            yield solve(band, find)


def true_lines(solution: Solution) -> list[Equation]:
    """Give lines that are true of a result: its gain and coefficients as they read, and the current laws."""
    taken = {symbol.name for symbol in solution.judged.symbols}
    found: list[Equation] = []
    readable = solution.readable
    if readable is not None:
        found.append(Equation(Name("K"), readable.gain))
        for letter, row in (("a", readable.numerator), ("b", readable.denominator)):
            found += [Equation(Name(f"{letter}_{k}"), entry) for k, entry in enumerate(row) if k]
    for law in solution.derivation.system.equations:
        if law.terms:
            found.append(law.equation)
    return [
        line
        for line in found
        if not taken & ({"K"} & set(names_of(line.left)))
        and 2 <= leaves(line.left) + leaves(line.right) <= LONGEST
    ]


@dataclass(frozen=True, slots=True)
class Slip:
    """A line with one slip in it, of the kind told."""

    kind: str
    line: Equation


def slips(line: Equation, solution: Solution, chance: random.Random) -> Iterator[Slip]:
    """Give a line with slips at random places, one at a time; none where the line has no place for one."""
    dimensions = _dimensions(solution)
    kinds = sorted(SLIPS)
    for _ in range(ATTEMPTS):
        kind = chance.choice(kinds)
        side = line.right if line.right != Number(Fraction(0)) else line.left
        places = list(nodes(side))
        node, put = chance.choice(places)
        after = SLIPS[kind](node, chance, dimensions)
        if after is None or after == node:
            continue
        changed = put(after)
        yield Slip(
            kind, Equation(line.left, changed) if side is line.right else Equation(changed, line.right)
        )


Dimensions = dict[str, Dimension]
Change = Callable[[Expression, random.Random, Dimensions], "Expression | None"]


def _dimensions(solution: Solution) -> Dimensions:
    vocabulary = vocabulary_of(solution.derivation.system.small_signal)
    return dict(vocabulary.dimensions)


def _sign(node: Expression, chance: random.Random, _: Dimensions) -> Expression | None:
    if not isinstance(node, Sum):
        return None
    terms = list(node.terms)
    k = chance.randrange(len(terms))
    term = terms[k]
    terms[k] = term.operand if isinstance(term, Negative) else Negative(term)
    return Sum(tuple(terms))


def _dropped(kind: type, node: Expression, chance: random.Random) -> Expression | None:
    if not isinstance(node, kind) or len(children(node)) < 2:
        return None
    parts = list(children(node))
    parts.pop(chance.randrange(len(parts)))
    return parts[0] if len(parts) == 1 else rebuilt(node, tuple(parts))


def _one_more(node: Expression, _: random.Random, dimensions: Dimensions) -> Expression | None:
    if isinstance(node, Name) and dimensions.get(node.text) == Dimension():
        return Sum((node, ONE))
    if isinstance(node, Sum) and ONE in node.terms:
        rest = tuple(term for term in node.terms if term != ONE)
        return rest[0] if len(rest) == 1 else Sum(rest)
    return None


def _series(node: Expression, _: random.Random, __: Dimensions) -> Expression | None:
    if isinstance(node, Parallel):
        return Sum(node.branches)
    if isinstance(node, Sum) and len(node.terms) == 2 and all(isinstance(t, Name) for t in node.terms):
        return Parallel(node.terms)
    return None


def _inverted(node: Expression, _: random.Random, __: Dimensions) -> Expression | None:
    if isinstance(node, Quotient) and node.numerator != ONE:
        return Quotient(node.denominator, node.numerator)
    return None


def _other(node: Expression, chance: random.Random, dimensions: Dimensions) -> Expression | None:
    if not isinstance(node, Name):
        return None
    alike = [n for n, d in dimensions.items() if n != node.text and d == dimensions.get(node.text)]
    return Name(chance.choice(sorted(alike))) if alike and node.text in dimensions else None


def _swapped(node: Expression, chance: random.Random, dimensions: Dimensions) -> Expression | None:
    used = sorted(name for name in names_of(node) if name in dimensions)
    pairs = [(a, b) for a, b in itertools.combinations(used, 2) if dimensions[a] == dimensions[b]]
    if not pairs or (isinstance(node, Sum | Parallel) and len(used) == 2):
        return None
    a, b = chance.choice(pairs)
    return substitute(node, {a: Name(b), b: Name(a)})


def _exponent(node: Expression, _: random.Random, __: Dimensions) -> Expression | None:
    if isinstance(node, Power):
        return node.base if node.exponent == 2 else Power(node.base, node.exponent - 1)
    return Power(node, 2) if isinstance(node, Name) else None


def _double(node: Expression, _: random.Random, __: Dimensions) -> Expression | None:
    return Product((Number(Fraction(2)), node)) if isinstance(node, Product | Quotient) else None


def _extra(node: Expression, chance: random.Random, dimensions: Dimensions) -> Expression | None:
    if isinstance(node, Sum) and isinstance(node.terms[0], Name):
        alike = [n for n, d in dimensions.items() if d == dimensions.get(node.terms[0].text)]
        return Sum((*node.terms, Name(chance.choice(sorted(alike))))) if alike else None
    if isinstance(node, Product):
        return Product((*node.factors, Name(chance.choice(sorted(dimensions)))))
    return None


SLIPS: dict[str, Change] = {
    "sign": _sign,
    "dropped term": lambda node, chance, _: _dropped(Sum, node, chance),
    "dropped factor": lambda node, chance, _: _dropped(Product, node, chance),
    "dropped branch": lambda node, chance, _: _dropped(Parallel, node, chance),
    "one more": _one_more,
    "series for parallel": _series,
    "inverted": _inverted,
    "other symbol": _other,
    "swapped": _swapped,
    "exponent": _exponent,
    "twice": _double,
    "something extra": _extra,
}


def with_other_node(line: Equation, solution: Solution, chance: random.Random) -> Slip | None:
    """Give a current law with one node voltage mistaken for another."""
    voltages = [u.name for u in solution.derivation.system.unknowns if u.quantity == "voltage"]
    found = [(n, put) for n, put in nodes(line.left) if isinstance(n, Name) and n.text in voltages]
    if not found or len(voltages) < 2:
        return None
    node, put = chance.choice(found)
    other = chance.choice([name for name in voltages if name != node.text])
    return Slip("other node", Equation(put(Name(other)), line.right))


class Exactly:
    """Every name of a result in exact rationals, the circuit solved at whole values."""

    def __init__(self, solution: Solution, seed: int) -> None:
        system = solution.derivation.system
        numbers = Stream(f"slips/{seed}")
        values = values_exact(solution.judged, numbers)
        values["s"] = Fraction(numbers.below(99) + 1)
        state = solve_exact(assemble(solution.judged, excite(system), values.__getitem__), values["s"])
        scale = Fraction(numbers.below(50) + 1)
        for drive in solution.judged.drives:
            values[drive.name] = excite(system).level(drive.name) * scale
        values[system.input] = scale
        for unknown in system.unknowns:
            known = state.nodes if unknown.quantity == "voltage" else state.branches
            if unknown.subject in known:
                values[unknown.name] = known[unknown.subject] * scale
        for merged in solution.band.definitions if solution.band else ():
            values[merged.name] = evaluate(merged.definition, values, Fraction)
        for name, meaning in vocabulary_of(system.small_signal).definitions:
            values.setdefault(name, evaluate(meaning, values, Fraction))
        form = solution.form
        values.setdefault("K", evaluate(form.gain, values, Fraction))
        for letter, row in (("a", form.numerator), ("b", form.denominator)):
            for k, entry in enumerate(row):
                values.setdefault(f"{letter}_{k}", evaluate(entry, values, Fraction))
        self.values = values
        self._voltages = [u.name for u in system.unknowns]

    def difference(self, line: Equation, free: int = 0) -> Fraction | None:
        """Give left − right, None where it has no value; with `free`, unknowns have other values instead."""
        values = dict(self.values)
        if free:
            chance = random.Random(free)
            values |= {name: Fraction(chance.randrange(2, 10**6)) for name in self._voltages}
        try:
            left, right = (evaluate(side, values, Fraction) for side in (line.left, line.right))
        except (ZeroDivisionError, DeriveError):
            return None
        return left - right


def same_claim(exact: Exactly, one: Equation, other: Equation) -> bool:
    """Whether two lines claim the same: the one's difference is a multiple of the other's."""
    if one == other:
        return True
    first, second = exact.difference(one), exact.difference(other)
    if first is None or second is None or first != second:
        return False
    ratios = set()
    for free in (1, 2, 3):
        above, below = exact.difference(one, free), exact.difference(other, free)
        if above is None or below is None:
            return False
        if not below:
            if above:
                return False
            continue
        ratios.add(above / below)
    return len(ratios) <= 1


def hand_file(line: Equation) -> HandFile:
    """Give the hand derivation that consists of one line."""
    text = to_text(line)
    one = HandLine(1, "hand.toml:1", text, "=", line.left, line.right)
    return HandFile("hand.toml", text, "topology.toml", "", "", (one,))
