"""A pole by three coefficients, in short lines: p_2 = −1/(τ_2a − τ_2b), with a line for each time constant."""

from __future__ import annotations

from derive.approximate.questions import Question, Simplified
from derive.approximate.simplify_desk import desk_of
from derive.approximate.simplify_expand import expand
from derive.approximate.simplify_form import LEFT, lined
from derive.approximate.simplify_original import Original
from derive.approximate.simplify_roots import three_term_roots
from derive.approximate.simplify_setups import pole_asked
from derive.approximate.simplify_stages import LONGEST_LINE
from derive.approximate.simplify_trials import Bench, Change
from derive.errors import SingularError, TooLargeError
from derive.expressions.tree import Expression
from derive.readable.readable import read_ratio
from derive.topology.topology import Budget

# The constants of each pole have names of their own.
STEMS = {"dominant pole": ("1a", "1b"), "second pole": ("2a", "2b")}
# What is said of the two lines.
SAYS = (
    "of three neighbouring coefficients of the denominator, the second over the first",
    "the third over the second",
)


def rooted_form(
    question: Question, budget: Budget, original: Original, bench: Bench, changes: tuple[Change, ...]
) -> Simplified | None:
    """Give a pole as the root of three coefficients of what is left of the circuit; None where none comes near."""
    pole = pole_asked(question, original)
    if pole is None or pole.imag:
        return None
    network = original.network
    try:
        expanded = expand(bench)
    except (TooLargeError, SingularError):
        return None
    found = three_term_roots(expanded, network, pole.real, float(question.corner_limit))
    best = min(found, key=lambda each: each.terms, default=None)
    if best is None:
        return None
    pieces = best.pieces(expanded.ties)
    if max(piece.terms for piece in pieces) > LONGEST_LINE:
        return None
    desk = desk_of(original, network)
    trees: list[Expression] = []
    for piece, stem, says in zip(pieces, STEMS[question.kind], SAYS, strict=True):
        tree = read_ratio(piece.ring, piece.top, piece.bottom, original.vocabulary)
        trees.append(desk.lines.name(tree, stem, says))
        desk.longest = max(desk.longest, piece.terms)
    desk.assume(network, changes, pieces, LEFT[question.kind])
    form = best.shape.written(trees[0], trees[1])
    answer = lined(question, budget, original, LEFT[question.kind], form, desk)
    return answer if answer.within else None
