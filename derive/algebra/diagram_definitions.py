"""The coefficients of a diagram's determinants as short definitions, each in terms of earlier ones."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from derive.algebra.diagram import Diagram

# A sum of products of names, each with its factor 1 or −1; () is zero, and a product () is one.
Sum = tuple[tuple[int, tuple[str, ...]], ...]
# The coefficient of one power of the degree variable in the value of one fork.
Key = tuple[int, int]


@dataclass(frozen=True, slots=True)
class Definition:
    """A name for a sum of products of the terms' names and of names defined before."""

    name: str
    value: Sum


@dataclass(frozen=True, slots=True)
class Nested:
    """Definitions in order, and for each determinant its coefficients by power of the variable from 0."""

    definitions: tuple[Definition, ...]
    coefficients: tuple[tuple[Sum, ...], ...]


def definitions(diagram: Diagram, prefix: str, variable: str | None = None) -> Nested:
    """Give every determinant's coefficients by definitions named prefix1, prefix2 and so on.

    Given: a prefix such that no term has one of these names. With a `variable` the determinants are not
    split by its powers: each has one coefficient, in which the variable stands as a name. What stands in
    one place only, or is but one name, is not defined where a flat sum of products can hold it.
    Raises: ValueError where a definition would have the name of a term.
    """
    recipe = _Recipe.of(diagram, variable)
    uses = _uses(recipe)
    written: dict[Key, Sum] = {(1, 0): ((1, ()),)}
    named: dict[Sum, str] = {}
    for fork in range(2, len(recipe.powers)):
        for power in recipe.powers[fork]:
            key = fork, power
            if key not in uses:
                continue
            value = tuple(
                (sign * own, (*before, *factors))
                for sign, before, inner in recipe.parts(key)
                for own, factors in written[inner]
            )
            if not _stays_flat(value, *uses[key]):
                value = ((1, (named.setdefault(value, f"{prefix}{len(named) + 1}"),)),)
            written[key] = value
    clash = {term.name for term in diagram.terms}.intersection(named.values())
    if clash:
        raise ValueError(f"{min(clash)} is the name of a term")
    coefficients = tuple(
        tuple(
            tuple((sign * own, factors) for own, factors in written.get((fork, power), ()))
            for power in range(max(recipe.powers[fork], default=-1) + 1)
        )
        for sign, fork in diagram.roots
    )
    return Nested(tuple(Definition(name, value) for value, name in named.items()), coefficients)


@dataclass(frozen=True, slots=True, eq=False)
class _Recipe:
    """A diagram with the (sign, factors, degree) of each bundle's terms and the powers in each fork."""

    diagram: Diagram
    entries: tuple[tuple[tuple[int, tuple[str, ...], int], ...], ...]
    powers: Sequence[Sequence[int]]

    @staticmethod
    def of(diagram: Diagram, variable: str | None) -> _Recipe:
        """Make the recipe; with a variable its powers are factors, and count no more as powers."""
        entries: list[tuple[tuple[int, tuple[str, ...], int], ...]] = []
        for bundle in diagram.bundles:
            if variable is None:
                entries.append(tuple((e.sign, (e.name,), e.degree) for e in bundle.entries))
            else:
                entries.append(
                    tuple((e.sign, (variable,) * e.degree + (e.name,), 0) for e in bundle.entries)
                )
        powers: list[Sequence[int]] = [(), (0,)]
        for item, taken, left, _ in diagram.forks:
            degrees = {degree for _, _, degree in entries[item]}
            occurring = {power + degree for power in powers[taken] for degree in degrees}
            powers.append(sorted(occurring.union(powers[left])))
        return _Recipe(diagram, tuple(entries), powers)

    def parts(self, key: Key) -> list[tuple[int, tuple[str, ...], Key]]:
        """Give a coefficient as a sum of (sign, factors, coefficient of a fork that comes before)."""
        fork, power = key
        item, taken, left, sign = self.diagram.forks[fork - 2]
        found = [
            (own, factors, (taken, power - degree))
            for own, factors, degree in self.entries[item]
            if power - degree in self.powers[taken]
        ]
        if power in self.powers[left]:
            found.append((sign, (), (left, power)))
        return found


def _uses(recipe: _Recipe) -> dict[Key, tuple[int, int]]:
    """Count how often each coefficient that is needed stands as a factor, and how often as a summand."""
    uses: dict[Key, tuple[int, int]] = {}
    for _, root in recipe.diagram.roots:
        for power in recipe.powers[root]:
            factor, summand = uses.get((root, power), (0, 0))
            uses[root, power] = factor, summand + 1
    for fork in range(len(recipe.powers) - 1, 1, -1):
        for power in recipe.powers[fork]:
            if (fork, power) not in uses:
                continue
            for _, factors, key in recipe.parts((fork, power)):
                factor, summand = uses.get(key, (0, 0))
                uses[key] = (factor + 1, summand) if factors else (factor, summand + 1)
    return uses


def _stays_flat(value: Sum, factor: int, summand: int) -> bool:
    """Whether a value is written out where it is used: one product always can be, a sum as a summand."""
    if len(value) == 1:
        return len(value[0][1]) == 1 or factor + summand == 1
    return not factor and summand == 1
