"""The noun of a proposal, and what each kind of slip costs."""

from __future__ import annotations

from dataclasses import dataclass

from derive.expressions.tree import Expression
from derive.handcheck.places import Place
from derive.handcheck.report import EditKind, Way

# What each kind of slip costs before its size is counted: the likelier the cheaper. Common practice.
BASE: dict[str, float] = {
    "sign": 1.0,
    "one more": 1.1,
    "parallel for series": 1.2,
    "inverted": 1.3,
    "exponent": 1.5,
    "number": 1.5,
    "other node": 1.6,
    "other symbol": 1.6,
    "swapped": 1.7,
    "bracket": 2.2,
    "extra term": 1.3,
    "extra factor": 1.5,
    "dropped term": 1.6,
    "dropped factor": 1.7,
    "missing resistance": 1.6,
}
PER_LEAF = 0.55


@dataclass(frozen=True, slots=True)
class Proposal:
    """A change at a place: `after` is what stands there then, None where it is taken out."""

    kind: EditKind
    way: Way
    before: Expression
    after: Expression | None
    cost: float
    says: str


def make(kind: EditKind, place: Place, after: Expression | None, size: float, says: str) -> Proposal:
    """Give a proposal at a place; `size` is added to what its kind costs."""
    return Proposal(kind, place.way, place.node, after, BASE[kind] + size, says)
