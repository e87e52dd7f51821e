"""The hand derivation that a topology names: read before the work begins, judged when the results are there."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from pathlib import PurePath

from derive.check.verdict import Solution
from derive.errors import InputError
from derive.handcheck.check_lines import check_lines
from derive.handcheck.choose import choose, place_of
from derive.handcheck.read import parse_hand
from derive.handcheck.report import HandFile, HandReport
from derive.topology.topology import BandName, Topology


@dataclass(frozen=True, slots=True)
class AttachedHand:
    """A hand derivation, and the result that it is of."""

    hand: HandFile
    find: str
    band: BandName


def read_attached(topology: Topology, bands: Sequence[BandName]) -> AttachedHand | None:
    """Read the derivation that a topology names; None where it names none.

    Given: the bands that the topology is worked in.
    Raises: InputError where its file cannot be used, or belongs to another topology.
    """
    source = topology.hand
    if source is None:
        return None
    hand = parse_hand(source.text, source.path)
    if hand.topology and PurePath(hand.topology).name != topology.file:
        raise InputError(
            f"this derivation belongs to {hand.topology}, and {topology.file} names it as its own",
            where=place_of(hand, "topology", source.path),
            cure=f"take hand = ... out of {topology.file}, or name the right file there",
        )
    find, band = choose(hand, topology, bands, source.path)
    return AttachedHand(hand, find.name, band)


def judge_attached(attached: AttachedHand | None, solutions: Sequence[Solution]) -> HandReport | None:
    """Judge it against the result that it is of; None where that result was not asked for."""
    if attached is None:
        return None
    for solution in solutions:
        name = solution.derivation.system.find.name
        if (name, solution.band_name) == (attached.find, attached.band):
            return check_lines(solution, attached.hand)
    return None
