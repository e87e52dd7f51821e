"""Every small mistake in the definition of a merged name or in a step of the bias is noticed."""

from __future__ import annotations

import random
from collections import Counter
from collections.abc import Iterator
from dataclasses import replace
from functools import cache
from itertools import cycle, product

import pytest
from biased_stages import COMMON_EMITTER, COMMON_SOURCE
from mutate import WAYS, differs, nodes

from derive.bands.restrict import restrict
from derive.bias import currents, square_law
from derive.bias.operating_point import CurrentDerivation
from derive.bias.replay import broken_steps
from derive.bias.solve import operating_point
from derive.check.judge import finish, start
from derive.check.verdict import Solution
from derive.devices.linearise import linearise
from derive.expressions.tree import Equation, Expression, Name, Parallel, Sum
from derive.expressions.walk import names_of
from derive.pipeline import solve
from derive.reading.read import parse

BIAS_MUTATIONS, DEFINITION_MUTATIONS = 100, 40


def drop_branch(node, chance):
    """Leave one of the parts in parallel out."""
    if not isinstance(node, Parallel):
        return None
    branches = list(node.branches)
    branches.pop(chance.randrange(len(branches)))
    return branches[0] if len(branches) == 1 else Parallel(tuple(branches))


def in_series(node, _):
    """Take parts in parallel for parts in series."""
    return Sum(node.branches) if isinstance(node, Parallel) else None


def another_name(node, _):
    """Put another part's name in place of one."""
    return Name("R_E2") if isinstance(node, Name) and node.text != "R_E2" else None


DEFINITION_WAYS = WAYS | {
    "drop one branch": drop_branch,
    "take for series": in_series,
    "another part": another_name,
}


def changed(tree: Expression, way, chance: random.Random) -> Expression | None:
    """Give the tree with one change of this way in it that changes its value; None where none is found."""
    found = list(nodes(tree))
    for node, put in chance.sample(found, len(found)):
        new = way(node, chance)
        if new is not None and differs(tree, put(new), chance):
            return put(new)
    return None


@cache
def solved(band: str) -> Solution:
    topology = parse(COMMON_EMITTER, "stage.toml")
    point = operating_point(topology)
    circuit = linearise(topology, {device.part: device for device in point.devices})
    return solve(restrict(circuit, band), topology.finds[0], explain=False)


def failed(solution: Solution) -> list[str]:
    (verdicts,) = finish(start((solution,), lcapy=False))
    return [verdict.name for verdict in verdicts if verdict.passed is False]


def with_definition(solution: Solution, place: int, tree: Expression) -> Solution:
    merged = list(solution.band.definitions)
    merged[place] = replace(merged[place], definition=tree)
    return replace(solution, band=replace(solution.band, definitions=tuple(merged)))


def definition_mutations() -> Iterator[tuple[str, Solution]]:
    chance = random.Random("definitions")
    sites = [(band, i) for band in ("mid", "high") for i in range(len(solved(band).band.definitions))]
    for (band, place), way in cycle(product(sites, sorted(DEFINITION_WAYS))):
        solution = solved(band)
        tree = changed(solution.band.definitions[place].definition, DEFINITION_WAYS[way], chance)
        if tree is not None:
            yield way, with_definition(solution, place, tree)


@pytest.mark.parametrize("band", ["mid", "high"])
def test_the_right_definitions_pass_and_all_of_them_are_used(band):
    solution = solved(band)
    assert failed(solution) == []
    form = solution.form
    used = {name for tree in (form.gain, *form.numerator, *form.denominator) for name in names_of(tree)}
    names = {merged.name for merged in solution.band.definitions}
    assert len(names) >= 2
    assert names <= used


def test_every_mutation_of_a_definition_is_noticed():
    ways = Counter()
    for (way, solution), _ in zip(definition_mutations(), range(DEFINITION_MUTATIONS), strict=False):
        ways[way] += 1
        assert failed(solution), (way, solution.band.definitions)
    assert sum(ways.values()) == DEFINITION_MUTATIONS
    assert {"drop one branch", "take for series", "another part", "scale by 2"} <= set(ways)


@cache
def derived(text: str) -> tuple[CurrentDerivation, dict]:
    """Give the derivation of the one current, and the values with which the product replays it."""
    replayed = []

    def kept(found, values):
        replayed.append((found, dict(values)))
        return broken_steps(found, values)

    with pytest.MonkeyPatch.context() as patch:
        patch.setattr(currents, "broken_steps", kept)
        patch.setattr(square_law, "broken_steps", kept)
        (found,) = operating_point(parse(text, "stage.toml")).derivations
    assert found.broken == ()
    return replayed[-1]


def sites(found: CurrentDerivation):
    """Give every expression of the steps, with the place's kind and the derivation with another in it."""
    for index, step in enumerate(found.steps):

        def put(changed, index=index):
            return replace(found, steps=(*found.steps[:index], changed, *found.steps[index + 1 :]))

        left, right = step.equation.left, step.equation.right
        kind = "law" if step.row is not None else "definition" if step.defines else "step"
        yield (
            kind,
            left,
            lambda new, step=step, right=right, put=put: put(
                replace(step, equation=Equation(new, right))
            ),
        )
        yield (
            kind,
            right,
            lambda new, step=step, left=left, put=put: put(replace(step, equation=Equation(left, new))),
        )
        proof = step.certificate
        if proof is None:
            continue
        yield (
            "divisor",
            proof.divisor,
            lambda new, step=step, proof=proof, put=put: put(
                replace(step, certificate=replace(proof, divisor=new))
            ),
        )
        for place, (number, multiplier) in enumerate(proof.uses):
            # A definition is true by itself, so that any multiple of it proves as much.
            if found.steps[number - 1].defines is not None:
                continue
            yield (
                "multiplier",
                multiplier,
                lambda new, step=step, proof=proof, place=place, number=number, put=put: put(
                    replace(
                        step,
                        certificate=replace(
                            proof,
                            uses=(*proof.uses[:place], (number, new), *proof.uses[place + 1 :]),
                        ),
                    )
                ),
            )


def bias_mutations(text: str) -> Iterator[tuple[str, str, CurrentDerivation]]:
    chance = random.Random("bias")
    found, _ = derived(text)
    by_kind: dict[str, list] = {}
    for kind, tree, put in sites(found):
        by_kind.setdefault(kind, []).append((tree, put))
    for kind, way in cycle(product(sorted(by_kind), sorted(WAYS))):
        for tree, put in chance.sample(by_kind[kind], len(by_kind[kind])):
            new = changed(tree, WAYS[way], chance)
            if new is not None:
                yield kind, way, put(new)
                break


@pytest.mark.parametrize("text", [COMMON_EMITTER, COMMON_SOURCE], ids=["linear", "square law"])
def test_the_right_steps_of_the_bias_are_whole(text):
    found, values = derived(text)
    assert found.steps
    assert broken_steps(found, values) == ()


@pytest.mark.parametrize("text", [COMMON_EMITTER, COMMON_SOURCE], ids=["linear", "square law"])
def test_every_mutation_of_a_step_of_the_bias_is_noticed(text):
    _, values = derived(text)
    kinds, ways = Counter(), Counter()
    for (kind, way, found), _ in zip(bias_mutations(text), range(BIAS_MUTATIONS), strict=False):
        kinds[kind] += 1
        ways[way] += 1
        assert broken_steps(found, values), (kind, way, found.steps)
    assert sum(kinds.values()) == BIAS_MUTATIONS
    assert {"law", "step", "multiplier", "divisor"} <= set(kinds)
    assert set(ways) == set(WAYS)
