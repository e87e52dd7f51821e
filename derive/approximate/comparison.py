"""The smaller and the larger term of an assumption, and how much smaller the one is."""

from __future__ import annotations

from dataclasses import dataclass

from derive.algebra.ratio import coefficients, lowest_terms
from derive.algebra.ring import Polynomial
from derive.approximate.carry_out import Applied
from derive.approximate.limits import leading
from derive.approximate.space import Space
from derive.expressions.tree import ONE, Expression, Name
from derive.topology.topology import Assumption


@dataclass(frozen=True, slots=True, eq=False)
class Comparison:
    """|above/below| is the ratio of the smaller term to the larger; without s.

    For a tie it is the mismatch of its two sides, and there is neither smaller nor larger.
    """

    smaller: Expression | None
    larger: Expression | None
    above: Polynomial
    below: Polynomial

    def nominal(self, space: Space) -> float | None:
        """Give the ratio at the nominal values; None where a value is open, or nothing is there to compare with."""
        if space.values is None:
            return None
        below = space.value(self.below)
        return abs(float(space.value(self.above) / below)) if below else None


def compare(space: Space, assumption: Assumption, applied: Applied) -> Comparison | None:
    """Give the two terms of an assumption as it was carried out; None where nothing is comparable."""
    if applied.weights:
        return _of_limit(space, applied)
    if assumption.right is None:
        return _of_pure_number(space, assumption) if applied.struck else None
    one, other = space.folded(assumption.left), space.folded(assumption.right)
    (a, b), (c, d) = space.polynomials_of(one), space.polynomials_of(other)
    if assumption.form == "equal":
        return Comparison(None, None, a * d - b * c, b * c)
    if assumption.form == "much_greater":
        return Comparison(other, one, b * c, a * d)
    return Comparison(one, other, a * d, b * c)


def _of_pure_number(space: Space, assumption: Assumption) -> Comparison:
    left = space.folded(assumption.left)
    a, b = space.polynomials_of(left)
    if assumption.form == "to_inf":
        return Comparison(ONE, left, b, a)
    return Comparison(left, ONE, a, b)


def _of_limit(space: Space, applied: Applied) -> Comparison | None:
    """Compare what the limit leaves out with what stays, in the coefficient where that is most.

    For a part that is removed this comes to the part against what the circuit shows to it.
    """
    found: list[tuple[float, int, Polynomial, Polynomial]] = []
    weights = dict(applied.weights)
    for polynomial in (applied.before.bottom, applied.before.top):
        _, kept = leading(space.ring, polynomial, weights)
        stays, goes = (
            coefficients(space.ring, kept, "s"),
            coefficients(space.ring, polynomial - kept, "s"),
        )
        for power in sorted(stays.keys() & goes.keys()):
            found.append(
                (_size(space, goes[power], stays[power]), -len(found), goes[power], stays[power])
            )
    if not found:
        return None
    _, _, small, large = max(found, key=lambda item: item[:2])
    small, large = lowest_terms(space.ring, small, large)
    smaller, larger = _named(space, weights, small, large)
    return Comparison(smaller, larger, small, large)


def _size(space: Space, above: Polynomial, below: Polynomial) -> float:
    if space.values is None:
        return 0.0
    bottom = space.value(below)
    return abs(float(space.value(above) / bottom)) if bottom else 0.0


def _named(
    space: Space, weights: dict[str, int], small: Polynomial, large: Polynomial
) -> tuple[Expression, Expression]:
    """Write the two so that a part that goes to a limit stands alone on its side."""
    if len(weights) == 1:
        ((name, sign),) = weights.items()
        place, symbol = space.ring.names.index(name), space.ring.generator(name)
        side, other = (large, small) if sign > 0 else (small, large)
        if (
            _lowest(side, place) == 1
            and int(side.degrees()[place]) == 1
            and not int(other.degrees()[place])
        ):
            rest = space.read(other, side / symbol)
            return (rest, Name(name)) if sign > 0 else (Name(name), rest)
    return space.writer.collected(small), space.writer.collected(large)


def _lowest(polynomial: Polynomial, place: int) -> int:
    return min(int(exponents[place]) for exponents in polynomial.monoms())
