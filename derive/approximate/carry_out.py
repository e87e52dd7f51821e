"""Carry out one assumption on an exact or an already reduced ratio; the ratio itself stays as it is.

A limit of one symbol is taken on the circuit: a part is removed or shorted. As a determinant is of the first
degree in every part, that is the same as the leading coefficient in its symbol, which is what is taken here;
the check of assumptions takes the part out of the circuit instead. beta -> inf removes r_pi and keeps g_m,
r_e -> 0 lets g_m grow and keeps beta. The limit of a parallel combination to inf is that of all branches
together, of a sum to 0 that of all terms; another expression must be a pure number, and `x -> inf` is then `x >> 1`.
"""

from __future__ import annotations

from dataclasses import dataclass

from derive.algebra.ring import Polynomial
from derive.approximate.dimensions import UnlikeError, dimension_of
from derive.approximate.elements import said_of
from derive.approximate.leading_order import thin
from derive.approximate.limits import limit, replaced_by, unmerged
from derive.approximate.register import How, ShownCoefficient, StruckTerm
from derive.approximate.space import Ratio, Space
from derive.errors import InputError
from derive.expressions.text import to_text
from derive.expressions.tree import ONE, Expression, Name, Parallel, Sum
from derive.expressions.walk import names_of
from derive.quantities.dimension import RATIO
from derive.topology.topology import Assumption


@dataclass(frozen=True, slots=True, eq=False)
class Applied:
    """What an assumption makes of a ratio, how, and the terms struck for it.

    `before` is the ratio that it was applied to, merged names written out where a single part was meant.
    `weights` are the names that went to a limit together, +1 to infinity and −1 to zero.
    """

    ratio: Ratio
    before: Ratio
    how: How
    says: str
    struck: tuple[StruckTerm, ...] = ()
    left: tuple[Polynomial, Polynomial] | None = None
    shown: tuple[ShownCoefficient, ...] = ()
    weights: tuple[tuple[str, int], ...] = ()


def carry_out(space: Space, ratio: Ratio, assumption: Assumption) -> Applied | None:
    """Give the ratio after an assumption; None where the assumption changes nothing in it.

    Raises: InputError where it removes the whole response, or asks for what cannot be done.
    """
    sides = (assumption.left, assumption.right or ONE)
    names = [name for side in sides for name in names_of(side)]
    if not all(space.knows(name) for name in names):
        return None
    left, right = space.folded(sides[0]), space.folded(sides[1])
    _refuse_unlike(space, assumption, left, right)
    if assumption.form in ("to_inf", "to_zero"):
        found = _limit(space, ratio, assumption, left)
    elif assumption.form == "equal":
        found = _tie(space, ratio, assumption, left, right)
    elif assumption.form == "much_greater":
        found = _compare(space, ratio, assumption, left, right)
    else:
        found = _compare(space, ratio, assumption, right, left)
    return found if found is not None and found.ratio.key != found.before.key else None


def _refuse_unlike(space: Space, assumption: Assumption, left: Expression, right: Expression) -> None:
    if assumption.right is None:
        return
    known = space.vocabulary.dimensions
    try:
        alike = dimension_of(left, known) == dimension_of(right, known)
    except UnlikeError as error:
        raise refusal(assumption, str(error), "compare quantities of one kind") from None
    if not alike:
        raise refusal(
            assumption, "its two sides are quantities of different kinds", "compare like with like"
        )


def refusal(assumption: Assumption, why: str, cure: str) -> InputError:
    """Give the error that refuses an assumption."""
    return InputError(f"{assumption.that}: {why}", where=str(assumption.place or ""), cure=cure)


def _limit(space: Space, ratio: Ratio, assumption: Assumption, left: Expression) -> Applied | None:
    upward = assumption.form == "to_inf"
    if isinstance(left, Name):
        return _limits(space, ratio, assumption, [left.text])
    spread = Parallel if upward else Sum
    if isinstance(left, spread):
        branches = left.branches if isinstance(left, Parallel) else left.terms
        if all(isinstance(branch, Name) for branch in branches):
            return _limits(space, ratio, assumption, [to_text(branch) for branch in branches])
    if dimension_of(left, space.vocabulary.dimensions) != RATIO:
        raise refusal(
            assumption,
            "only a part, a device parameter or a pure number can go to a limit",
            'say what it is large or small against, with ">>" or "<<"',
        )
    return _compare(space, ratio, assumption, *((left, ONE) if upward else (ONE, left)))


def _limits(space: Space, ratio: Ratio, assumption: Assumption, names: list[str]) -> Applied | None:
    """Take the limit of one name, or of several together."""
    weights: dict[str, int] = {}
    says = []
    for name in names:
        own, words = _weights(space, assumption, name)
        weights |= own
        says.append(words)
    for each in weights:
        ratio = unmerged(space, ratio, each)
    if not set(weights) & set(space.names(ratio)):
        return None
    found, way = limit(space, ratio, weights)
    if found is None:
        raise _removed(assumption, way)
    return Applied(found, ratio, "circuit", "; ".join(says), weights=tuple(weights.items()))


def _removed(assumption: Assumption, way: int) -> InputError:
    what = "it makes the response infinite" if way > 0 else "it removes the whole response"
    return refusal(assumption, what, 'take it out, or name with find = "A_v" what it is made for')


def _weights(space: Space, assumption: Assumption, name: str) -> tuple[dict[str, int], str]:
    """Give the names that go to a limit, +1 for infinity and −1 for zero, and it in words."""
    sign = 1 if assumption.form == "to_inf" else -1
    if name in space.ring.names:
        return {name: sign}, said_of(space.band, name, upward=sign > 0)
    for junction in space.vocabulary.junctions:
        if name == junction.beta and sign > 0:
            return {
                junction.r_pi: 1
            }, f"{said_of(space.band, junction.r_pi, upward=True)}, {junction.g_m} kept"
        if name == junction.r_e and sign < 0:
            return {
                junction.g_m: 1,
                junction.r_pi: -1,
            }, f"{junction.g_m} without limit, {junction.beta} kept"
        if name in (junction.beta, junction.r_e, junction.alpha):
            raise refusal(
                assumption,
                f"{name} follows from {junction.g_m} and {junction.r_pi}, which can do this in several ways",
                f"write which of {junction.g_m} and {junction.r_pi} goes to a limit, or {junction.beta} >> 1",
            )
    raise refusal(assumption, f"{name} cannot go to a limit", "name a part or a device parameter")


def _compare(
    space: Space, ratio: Ratio, assumption: Assumption, larger: Expression, smaller: Expression
) -> Applied | None:
    for name in (*names_of(larger), *names_of(smaller)):
        ratio = unmerged(space, ratio, name)
    try:
        a, b = space.polynomials_of(larger)
        c, d = space.polynomials_of(smaller)
    except ZeroDivisionError:
        raise refusal(assumption, "it divides by zero", "mend the expression") from None
    if a == 0 or c == 0:
        raise refusal(assumption, "one side is zero", 'write "x -> 0" for a part that is left out')
    quotient = space.ratio(a * d, b * c)
    thinned = thin(space, ratio, quotient.top, quotient.bottom)
    if not thinned.struck:
        return None
    if thinned.ratio is None:
        raise refusal(assumption, "it removes the whole response", "say what is large against what")
    count = len(thinned.struck)
    says = f"{count} term{'' if count == 1 else 's'} struck beside {'its' if count == 1 else 'their'} "
    says += f"larger partner{'' if count == 1 else 's'}"
    return Applied(
        thinned.ratio, ratio, "coefficients", says, thinned.struck, thinned.left, thinned.shown
    )


def _tie(
    space: Space, ratio: Ratio, assumption: Assumption, left: Expression, right: Expression
) -> Applied | None:
    name, by = _tied(space, assumption, left, right)
    above, below = space.polynomials_of(by)
    says = f"{to_text(by)} put for {name}"
    for junction in space.vocabulary.junctions:
        if name == junction.beta:
            # β is no symbol of the circuit: r_π = β/g_m is what changes.
            name, below = junction.r_pi, below * space.ring.generator(junction.g_m)
            says += f", which changes {junction.r_pi}"
    if above == 0:
        raise refusal(assumption, "one side is zero", f'write "{name} -> 0"')
    ratio = unmerged(space, ratio, name)
    if name not in space.names(ratio):
        return None
    found = replaced_by(space, ratio, name, above, below)
    if found is None:
        raise refusal(assumption, "it removes the whole response", "take it out")
    return Applied(found, ratio, "substitution", says)


def _tied(
    space: Space, assumption: Assumption, left: Expression, right: Expression
) -> tuple[str, Expression]:
    """Give the name that is replaced and what takes its place: the first side that is a name alone."""
    betas = [junction.beta for junction in space.vocabulary.junctions]
    for one, other in ((left, right), (right, left)):
        if isinstance(one, Name) and (one.text in space.ring.names or one.text in betas):
            needs = names_of(other)
            hidden = {j.r_pi for j in space.vocabulary.junctions if j.beta == one.text}
            if one.text not in needs and not hidden & set(needs):
                return one.text, other
    raise refusal(
        assumption,
        "neither side is a part or a device parameter by itself",
        'write "R_3 = R_1", or "x >> y" for what is small',
    )
