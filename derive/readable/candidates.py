"""The ways to write one ratio: in the transistor's words, by its reactances, as it is."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass

from derive.algebra.ring import Polynomial
from derive.eliminate.scribe import positive_first
from derive.expressions.polynomials import add
from derive.expressions.tree import ONE, Expression, Name, Product
from derive.expressions.walk import children_of, names_of, substitute, with_children
from derive.quantities.dimension import (
    CAPACITANCE,
    FREQUENCY,
    INDUCTANCE,
    RATIO,
    Dimension,
)
from derive.readable.clusters import Cluster, clustered
from derive.readable.compose import Composer
from derive.readable.measure import NAME, magnitude, measure
from derive.readable.memory import Memory
from derive.readable.search import AMPLIFIER_BONUS, BUDGET, Search
from derive.readable.vocabulary import Junction, Vocabulary
from derive.readable.words import WAYS, Way
from derive.readable.workspace import Ratio, Workspace

# A cluster is read as one thing, though it takes more ink than one name.
CLUSTER = NAME + 2
# A sum of time constants, each with its part, is what is asked for, even where another form is shorter.
PER_PART = 1_000
# (1 + 1/β)·g_m/C is worth a sign or two more than (1 + β)/(r_π·C).
CORNER_BONUS = NAME + 6
# Of ratios with more terms than this, not every way of writing the transistors is searched through.
SEARCH_ALL = 30
# Of longer ones fewer forms are tried, and of very long ones only common factors are taken out.
SEARCH_DEEP, SEARCH_AT_ALL = 60, 160

Candidate = tuple[Expression, int]


def candidates(
    space: Workspace, ratio: Ratio, vocabulary: Vocabulary, memory: Memory
) -> Iterator[Candidate]:
    """Give forms of a ratio, each with the bonus that is taken off its measure."""
    desk = _Desk(space, vocabulary, _composer(vocabulary), memory)
    reactive = _by_reactances(space, ratio, vocabulary)
    alone = all(len(names) == 1 for names, _ in reactive)
    if len(reactive) > 1:
        yield desk.per_part(ratio, reactive), PER_PART if alone else 0
    if len(reactive) <= 1 or not alone:
        if _dimension(space, ratio, vocabulary) == FREQUENCY:
            form = desk.form(ratio, deep=alone, corner=True)
            yield form, CORNER_BONUS if _in_g_m(form, vocabulary.junctions) else 0
            # 1/(R·C) where R is easier to read than its reciprocal.
            inverse = desk.form(space.ratio(ratio.bottom, ratio.top, ratio.minus))
            yield desk.composer.quotient(ONE, inverse), 0
        else:
            yield desk.form(ratio, deep=alone), 0
        if vocabulary.amplifiers & set(space.names(ratio.top, ratio.bottom)):
            ideal = _Desk(space, vocabulary, desk.composer, memory, ideal=True)
            yield ideal.form(ratio), AMPLIFIER_BONUS


@dataclass(frozen=True, slots=True)
class _Desk:
    space: Workspace
    vocabulary: Vocabulary
    composer: Composer
    memory: Memory
    ideal: bool = False

    def form(self, ratio: Ratio, *, deep: bool = True, corner: bool = False) -> Expression:
        """Give the shortest form in any of the transistors' words, one transistor after the other.

        Not `deep`: the words are chosen by how long the ratio looks as one fraction, and only those searched.
        A `corner` frequency is written with g_m/C and not with r_e.
        """
        key = ratio.key, deep, corner, self.ideal
        found = self.memory.forms.get(key)
        if found is None:
            found = self.memory.forms[key] = self._form(ratio, deep, corner)
        return found

    def _form(self, ratio: Ratio, deep: bool, corner: bool) -> Expression:
        space = self.space
        best: Expression | None = None
        for junction in self.vocabulary.junctions:
            if {junction.g_m, junction.r_pi} <= set(space.names(ratio.top, ratio.bottom)):
                turned = [
                    (_exchanged(space, ratio, junction, way), way)
                    for way in WAYS
                    if way.corner is None or way.corner == corner
                ]
                ratio, best = self._shortest(ratio, turned, deep)
        best = self._plain(ratio, deep) if best is None else best
        return self.composer.again(_with_words(best, self.vocabulary.junctions))

    def _shortest(
        self, ratio: Ratio, turned: Sequence[tuple[Ratio, Way]], deep: bool
    ) -> tuple[Ratio, Expression]:
        """Give the ratio with the shortest form; of long ratios only the likeliest is searched."""
        ratios = [*(one for one, _ in turned), ratio]
        bonuses = [*(CORNER_BONUS if way.corner else 0 for _, way in turned), 0]
        if not deep or max(one.length for one in ratios) > SEARCH_ALL:
            search = self._search({}, 0)
            # Where nothing tells them apart, the words are taken before the bare g_m and r_π.
            likeliest = min(range(len(ratios)), key=lambda k: (search.guess(ratios[k]), k))
            return ratios[likeliest], self._plain(ratios[likeliest], deep)
        forms = [self._plain(one, deep) for one in ratios]
        place = min(range(len(forms)), key=lambda k: (measure(forms[k]) - bonuses[k], -k))
        return ratios[place], forms[place]

    def per_part(
        self, ratio: Ratio, reactive: Sequence[tuple[tuple[str, ...], Polynomial]]
    ) -> Expression:
        """Give a sum over the parts: each with the resistance that it sees, the largest first."""
        shared: dict[Expression, list[Expression]] = {}
        for names, top in reactive:
            part = self.space.ratio(top, ratio.bottom, ratio.minus)
            coefficient = self.form(part, deep=len(names) == 1)
            # Parts that see the same stand in one bracket: R·(C_1 + C_2).
            shared.setdefault(coefficient, []).append(
                self.composer.product([Name(name) for name in names])
            )
        terms = [self.composer.product([add(parts), seen]) for seen, parts in shared.items()]
        sizes = [magnitude(term, self.vocabulary.values) for term in terms]
        if None not in sizes:
            order = sorted(range(len(terms)), key=lambda k: (-(sizes[k] or 0.0), k))
            terms = [terms[k] for k in order]
        return add(positive_first(terms))

    def _plain(self, ratio: Ratio, deep: bool) -> Expression:
        """Give the shortest form in the ratio's own names."""
        vocabulary = self.vocabulary
        inner, clusters = clustered(self.space, ratio, vocabulary.dimensions)
        stands_for: dict[str, Expression] = {}
        for cluster in clusters:
            stands_for[cluster.kept] = self._joined(cluster, stands_for)
        weights = {name: min(CLUSTER, measure(value)) for name, value in stands_for.items()}
        budget = BUDGET if deep and inner.length <= SEARCH_DEEP else BUDGET // 4
        search = self._search(weights, budget if inner.length <= SEARCH_AT_ALL else 0)
        # Sums within sums and parallel parts within parallel parts, which clusters bring, are put in order.
        return self.composer.again(substitute(search.best(inner), stands_for))

    def _search(self, weights: dict[str, int], budget: int) -> Search:
        vocabulary = self.vocabulary
        return Search(
            self.space,
            self.composer,
            vocabulary.dimensions,
            weights,
            vocabulary.output_side or {},
            vocabulary.amplifiers if self.ideal else frozenset(),
            budget,
            self.memory.shelf((self.ideal, *weights.items())),
        )

    def _joined(self, cluster: Cluster, stands_for: dict[str, Expression]) -> Expression:
        pair = [stands_for.get(name, Name(name)) for name in (cluster.kept, cluster.gone)]
        return self.composer.sum(pair) if cluster.way == "series" else self.composer.parallel(pair)


def _in_g_m(form: Expression, junctions: Sequence[Junction]) -> bool:
    """Whether a corner is written with g_m and β alone: (1 + 1/β)·g_m/C."""
    used = set(names_of(form))
    return any(j.g_m in used and j.r_pi not in used and j.beta in used for j in junctions)


def _with_words(expression: Expression, junctions: Sequence[Junction]) -> Expression:
    """Write β for every product of g_m and r_π that is left."""
    if isinstance(expression, Product):
        factors = list(expression.factors)
        for junction in junctions:
            pair = (Name(junction.g_m), Name(junction.r_pi))
            while pair[0] in factors and pair[1] in factors:
                factors[factors.index(pair[0])] = Name(junction.beta)
                factors.remove(pair[1])
        expression = Product(tuple(factors)) if len(factors) > 1 else factors[0]
    return with_children(
        expression, tuple(_with_words(child, junctions) for child in children_of(expression))
    )


def _composer(vocabulary: Vocabulary) -> Composer:
    dimensions = vocabulary.dimensions
    return Composer(
        {name: place for place, name in enumerate(vocabulary.order)},
        frozenset(name for name, dimension in dimensions.items() if dimension == RATIO),
    )


def _by_reactances(
    space: Workspace, ratio: Ratio, vocabulary: Vocabulary
) -> list[tuple[tuple[str, ...], Polynomial]]:
    """Group the terms above by their capacitances and inductances; [] where that means nothing.

    It means nothing where some are below the fraction bar, or the terms have unequally many.
    """
    reactances = [
        index
        for index, name in enumerate(space.ring.names)
        if vocabulary.dimensions.get(name) in (CAPACITANCE, INDUCTANCE)
    ]
    below = set(space.names(ratio.bottom))
    if any(space.ring.names[index] in below for index in reactances):
        return []
    groups: dict[tuple[int, ...], dict[tuple[int, ...], int]] = {}
    for exponents, coefficient in ratio.top.to_dict().items():
        key = tuple(index for index in reactances for _ in range(int(exponents[index])))
        rest = tuple(0 if index in reactances else int(e) for index, e in enumerate(exponents))
        groups.setdefault(key, {})[rest] = int(coefficient)
    if len({len(key) for key in groups}) != 1 or () in groups:
        return []
    return [
        (tuple(space.ring.names[index] for index in key), space.ring.context.from_dict(terms))
        for key, terms in sorted(groups.items())
    ]


def _exchanged(space: Workspace, ratio: Ratio, junction: Junction, way: Way) -> Ratio:
    turned = way.exchange(space, ratio, junction)
    return _with_alpha(space, turned, junction) if way.corner is False else turned


def _with_alpha(space: Workspace, ratio: Ratio, junction: Junction) -> Ratio:
    """Write α for β/(1 + β) where that is a factor."""
    beta, alpha = space.ring.generator(junction.beta), space.ring.generator(junction.alpha)
    if junction.beta not in space.pieces(ratio.top).powers:
        return ratio
    if all(factor != beta + 1 for factor in space.pieces(ratio.bottom).sums):
        return ratio
    return space.ratio(ratio.top / beta * alpha, ratio.bottom / (beta + 1), ratio.minus)


def _dimension(space: Workspace, ratio: Ratio, vocabulary: Vocabulary) -> Dimension | None:
    """Give the dimension of a ratio's first terms; None where a name has none."""
    total = RATIO
    for polynomial, sign in ((ratio.top, 1), (ratio.bottom, -1)):
        exponents = next(iter(polynomial.to_dict()))
        for name, power in zip(space.ring.names, exponents, strict=False):
            if power:
                if name == "s":
                    known: Dimension | None = FREQUENCY
                else:
                    known = vocabulary.dimensions.get(name)
                if known is None:
                    return None
                total *= known ** (int(power) * sign)
    return total
