"""One small change to a solution: a sign, a term, a symbol, an exponent, a factor of two."""

from __future__ import annotations

import itertools
import random
from collections.abc import Callable, Iterator
from dataclasses import replace
from fractions import Fraction
from typing import NamedTuple

from ledger_arithmetic import PRIME, RESIDUES, calculate

from derive.check.verdict import Solution
from derive.eliminate.derivation import Step
from derive.expressions.ledger_text import to_ledger
from derive.expressions.tree import (
    Equation,
    Expression,
    Name,
    Negative,
    Number,
    Parallel,
    Power,
    Product,
    Quotient,
    Root,
    Sum,
)

Change = Callable[[Expression], Solution]
TWO = Number(Fraction(2))


class Site(NamedTuple):
    """An expression of a solution, and the solution with another in its place."""

    place: str
    tree: Expression
    put: Change


class Mutation(NamedTuple):
    """A mutated solution, with where and how."""

    place: str
    way: str
    solution: Solution


def children(tree: Expression) -> tuple[Expression, ...]:
    """Give the operands of a tree."""
    if isinstance(tree, Sum):
        return tree.terms
    if isinstance(tree, Product):
        return tree.factors
    if isinstance(tree, Quotient):
        return (tree.numerator, tree.denominator)
    if isinstance(tree, Power):
        return (tree.base,)
    if isinstance(tree, Negative):
        return (tree.operand,)
    if isinstance(tree, Parallel):
        return tree.branches
    if isinstance(tree, Root):
        return (tree.radicand,)
    return ()


def rebuilt(tree: Expression, parts: tuple[Expression, ...]) -> Expression:
    """Give the tree with other operands."""
    if isinstance(tree, Sum | Product | Parallel):
        return type(tree)(parts)
    if isinstance(tree, Quotient):
        return Quotient(*parts)
    if isinstance(tree, Power):
        return Power(parts[0], tree.exponent)
    if isinstance(tree, Negative):
        return Negative(parts[0])
    if isinstance(tree, Root):
        return Root(parts[0])
    return tree


def nodes(tree: Expression) -> Iterator[tuple[Expression, Callable[[Expression], Expression]]]:
    """Give every node, with the function that puts another in its place."""
    yield tree, lambda new: new
    for index, child in enumerate(children(tree)):
        for node, put in nodes(child):

            def outer(
                new: Expression, index: int = index, put: Callable[[Expression], Expression] = put
            ) -> Expression:
                parts = list(children(tree))
                parts[index] = put(new)
                return rebuilt(tree, tuple(parts))

            yield node, outer


def flip_sign(node: Expression, _: random.Random) -> Expression:
    """Take a minus off, or put one on."""
    return node.operand if isinstance(node, Negative) else Negative(node)


def drop_term(node: Expression, chance: random.Random) -> Expression | None:
    """Leave one term of a sum out, or one factor of a product."""
    if not isinstance(node, Sum | Product) or len(children(node)) < 2:
        return None
    parts = list(children(node))
    parts.pop(chance.randrange(len(parts)))
    return parts[0] if len(parts) == 1 else rebuilt(node, tuple(parts))


def swap_symbols(node: Expression, chance: random.Random) -> Expression | None:
    """Exchange two names throughout."""
    names = sorted({each.text for each, _ in nodes(node) if isinstance(each, Name)})
    if len(names) < 2:
        return None
    one, other = chance.sample(names, 2)
    return _exchanged(node, {one: other, other: one})


def _exchanged(node: Expression, names: dict[str, str]) -> Expression:
    if isinstance(node, Name):
        return Name(names.get(node.text, node.text))
    return rebuilt(node, tuple(_exchanged(child, names) for child in children(node)))


def change_exponent(node: Expression, chance: random.Random) -> Expression | None:
    """Raise or lower an exponent by one; a bare name is squared."""
    if isinstance(node, Power):
        return Power(node.base, node.exponent + chance.choice((-1, 1)))
    return Power(node, 2) if isinstance(node, Name) else None


def double(node: Expression, _: random.Random) -> Expression:
    """Put the factor two before it."""
    return Product((TWO, node))


WAYS: dict[str, Callable[[Expression, random.Random], Expression | None]] = {
    "flip one sign": flip_sign,
    "drop one term": drop_term,
    "swap two symbols": swap_symbols,
    "change an exponent": change_exponent,
    "scale by 2": double,
}


def sites(solution: Solution) -> list[Site]:
    """Give every expression of a solution that a sheet prints or a proof rests on."""
    form = solution.form
    found = [Site("gain", form.gain, lambda new: replace(solution, form=replace(form, gain=new)))]
    for key in ("numerator", "denominator"):
        trees = getattr(form, key)
        for k, tree in enumerate(trees):

            def put(
                new: Expression, key: str = key, k: int = k, trees: tuple[Expression, ...] = trees
            ) -> Solution:
                changed = (*trees[:k], new, *trees[k + 1 :])
                return replace(solution, form=replace(form, **{key: changed}))

            found.append(Site(key, tree, put))
    for index, step in enumerate(solution.derivation.steps):
        found += _step_sites(solution, index, step)
    return found


def _step_sites(solution: Solution, index: int, step: Step) -> list[Site]:
    steps = solution.derivation.steps

    def with_step(changed: Step) -> Solution:
        derivation = replace(solution.derivation, steps=(*steps[:index], changed, *steps[index + 1 :]))
        return replace(solution, derivation=derivation)

    kind = "nodal equation" if step.row is not None else "step"
    left, right = step.equation.left, step.equation.right
    found = [
        Site(kind, left, lambda new: with_step(replace(step, equation=Equation(new, right)))),
        Site(kind, right, lambda new: with_step(replace(step, equation=Equation(left, new)))),
    ]
    certificate = step.certificate
    if certificate is None:
        return found
    found.append(
        Site(
            "divisor",
            certificate.divisor,
            lambda new: with_step(replace(step, certificate=replace(certificate, divisor=new))),
        )
    )
    for place, (number, multiplier) in enumerate(certificate.uses):

        def put(new: Expression, place: int = place, number: int = number) -> Solution:
            uses = list(certificate.uses)
            uses[place] = (number, new)
            return with_step(replace(step, certificate=replace(certificate, uses=tuple(uses))))

        found.append(Site("multiplier", multiplier, put))
    return found


def mutations(solution: Solution, chance: random.Random) -> Iterator[Mutation]:
    """Give mutations without end; each changes the value of the expression that it touches."""
    by_place: dict[str, list[Site]] = {}
    for site in sites(solution):
        by_place.setdefault(site.place, []).append(site)
    # Every place and every way in turn, else the ways that fit any tree would crowd out the rest.
    for place, way in itertools.cycle(itertools.product(sorted(by_place), sorted(WAYS))):
        for site in chance.sample(by_place[place], len(by_place[place])):
            tree = _mutated(site.tree, way, chance)
            if tree is not None and differs(site.tree, tree, chance):
                yield Mutation(place, way, site.put(tree))
                break


def _mutated(tree: Expression, way: str, chance: random.Random) -> Expression | None:
    found = list(nodes(tree))
    for node, put in chance.sample(found, len(found)):
        changed = WAYS[way](node, chance)
        if changed is not None:
            return put(changed)
    return None


def differs(one: Expression, other: Expression, chance: random.Random) -> bool:
    """Decide at random points, by this folder's own arithmetic, whether two trees differ."""
    texts = to_ledger(one), to_ledger(other)
    names = sorted(
        {node.text for tree in (one, other) for node, _ in nodes(tree) if isinstance(node, Name)}
    )
    for _ in range(12):
        values = {name: chance.randrange(1, PRIME) for name in names}
        try:
            if calculate(texts[0], values, RESIDUES) != calculate(texts[1], values, RESIDUES):
                return True
        except ZeroDivisionError:
            return True
        except ArithmeticError:
            # No square root at this point: another one decides.
            continue
    return False
