"""One quantity of one stage at zero frequency: a gain, a transfer to a short, or a resistance, in few terms.

A node's voltage is the current into a short at it, times the resistance at it (Norton's theorem); and a
resistance is the parallel combination of what hangs at the node, wherever that hangs together nowhere else.
"""

from __future__ import annotations

from collections.abc import Iterator
from copy import copy
from dataclasses import dataclass, replace
from fractions import Fraction
from typing import Any, Literal

import numpy as np
import numpy.typing as npt

from derive.algebra.ratio import coefficients, lowest_terms
from derive.algebra.ring import Polynomial, Ring
from derive.approximate.simplify_expand import Expanded, expand
from derive.approximate.simplify_greedy import reduce_elements
from derive.approximate.simplify_matched import varied
from derive.approximate.simplify_measures import Level, RootOfRatio
from derive.approximate.simplify_network import NOWHERE, Network, Stamp
from derive.approximate.simplify_setups import NEIGHBOURS, SLACK
from derive.approximate.simplify_terms import Kept, Terms, drop_terms, terms_of
from derive.approximate.simplify_trials import REFRESH, Bench, Change
from derive.errors import SingularError, TooLargeError

QuantityKind = Literal["gain", "transfer", "resistance"]
# The part of the tolerance that the elements may use; the terms get what is left.
ELEMENT_PART, TERM_PART = 0.6, 0.98
SLACKS = np.array([1.0] + [SLACK] * NEIGHBOURS)
# Of more terms, no few are left that say enough.
MOST_TERMS = 2_000


@dataclass(frozen=True, slots=True)
class Quantity:
    """What is sought of a stage.

    A "gain" is the voltage at a node, a "transfer" the current into a short there, both per the voltage of the
    node `driven`, or per the circuit's own drive (None). A "resistance" is that from `at` to `other`, with
    `driven` grounded and no drive. With `at` None, the gain is what the question reads.
    """

    kind: QuantityKind
    driven: int | None
    at: int | None
    other: int = NOWHERE


@dataclass(frozen=True, slots=True, eq=False)
class Piece:
    """A ratio of two polynomials, and what was dropped from them."""

    ring: Ring
    top: Polynomial
    bottom: Polynomial
    dropped: tuple[tuple[Terms, Kept], ...]
    ties: tuple[tuple[str, str], ...]

    @property
    def terms(self) -> int:
        """The number of terms in numerator and denominator."""
        return len(self.top) + len(self.bottom)


@dataclass(frozen=True, slots=True, eq=False)
class Short:
    """A quantity in few terms: one piece, or the parallel combination of several.

    `value` is that at the nominal values, `error` what it is off by there, signed and relative.
    """

    network: Network
    pieces: tuple[Piece, ...]
    changes: tuple[Change, ...]
    value: float
    error: float

    @property
    def longest(self) -> int:
        """The number of terms of its longest piece."""
        return max(piece.terms for piece in self.pieces)


def at_zero_frequency(network: Network) -> Network:
    """Give the network without what rises with frequency, as far as it may be left out."""
    kept = [not (stamp.power and stamp.removable) for stamp in network.stamps]
    stamps = tuple(s for s, keep in zip(network.stamps, kept, strict=True) if keep)
    sizes = tuple(s for s, keep in zip(network.sizes, kept, strict=True) if keep)
    return replace(network, stamps=stamps, sizes=sizes)


def short_quantity(network: Network, quantity: Quantity, tolerance: float) -> Short | None:
    """Give a quantity of a network at zero frequency in as few terms as a relative tolerance lets; None for none."""
    asked = _network_of(network, quantity)
    # First quickly; where that leads into a singular circuit, with care.
    for refresh_after in (REFRESH, 1):
        try:
            return _short(asked, quantity, tolerance, refresh_after)
        except np.linalg.LinAlgError:
            continue
        except (SingularError, TooLargeError):
            return None
    return None


def _network_of(network: Network, quantity: Quantity) -> Network:
    """Drive and read the network as the quantity asks."""
    if quantity.kind == "resistance":
        ends = ((quantity.at or 0, Fraction(1)), (quantity.other, Fraction(-1)))
        right = tuple(sorted(end for end in ends if end[0] != NOWHERE))
        return replace(network, right=right, wanted=(quantity.at or 0, quantity.other))
    if quantity.driven is not None:
        network, branch = _tied(network, quantity.driven, "drive")
        network = replace(network, right=((branch, Fraction(1)),))
    if quantity.kind == "transfer":
        network, branch = _tied(network, quantity.at or 0, "short")
        return replace(network, wanted=(branch, NOWHERE))
    return network if quantity.at is None else replace(network, wanted=(quantity.at, NOWHERE))


def _tied(network: Network, node: int, word: str) -> tuple[Network, int]:
    """Hold a node's voltage by a branch to ground, whose current is a new unknown."""
    branch = network.size
    row, nodes = (branch, NOWHERE), (node, NOWHERE)
    stamps = (Stamp(word, (), 0, nodes, row), Stamp(word, (), 0, row, nodes))
    held = replace(
        network,
        labels=(*network.labels, ("branch", word)),
        stamps=(*network.stamps, *stamps),
        sizes=(*network.sizes, 1.0, 1.0),
    )
    return held, branch


def bench_at_zero(network: Network) -> Bench:
    """Set up a network at zero frequency, at its nominal values and at neighbouring ones."""
    factors = [np.ones(len(network.stamps)), *(varied(network, turn) for turn in range(NEIGHBOURS))]
    return Bench(network, np.zeros(len(factors), dtype=complex), np.stack(factors))


def thinned(network: Network, tolerance: float) -> tuple[Network, tuple[Change, ...]]:
    """Leave out the elements that together move the response by less than a tolerance; say which.

    Raises: LinAlgError where the network is singular.
    """
    bench = bench_at_zero(network)
    # What is shorted would join nodes, and those are asked for later.
    bench.shortable = np.zeros_like(bench.shortable)
    changes = reduce_elements(bench, Level(bench.response.copy(), tolerance, slack=SLACKS), 1.0)
    kept = [int(place) for place in np.flatnonzero(bench.there)]
    stamps = tuple(network.stamps[place] for place in kept)
    return replace(network, stamps=stamps, sizes=tuple(network.sizes[place] for place in kept)), changes


def _short(network: Network, quantity: Quantity, tolerance: float, refresh_after: int) -> Short | None:
    bench = bench_at_zero(network)
    bench.refresh_after = refresh_after
    if quantity.kind == "resistance" and quantity.driven is not None:
        bench = _grounded(bench, quantity.driven)
    reference = bench.response.copy()
    if not np.isfinite(reference).all() or not abs(reference[0]) > 0:
        return None
    changes = reduce_elements(bench, Level(reference, tolerance, slack=SLACKS), ELEMENT_PART)
    whole = float(reference[0].real)
    if quantity.kind == "resistance" and quantity.other == NOWHERE:
        parts = [_part_of(bench, chosen) for chosen in _hanging(bench, quantity.at or 0)]
        limit = tolerance * (1 - ELEMENT_PART) * TERM_PART
        pieces = [_piece(part, float(part.response[0].real), limit) for part in parts]
    else:
        pieces = [_piece(bench, whole, tolerance * TERM_PART)]
    found = [piece for piece in pieces if piece is not None]
    if not found or len(found) < len(pieces):
        return None
    values = [_value(piece, network) for piece in found]
    value = values[0] if len(values) == 1 else 1 / sum(1 / each for each in values)
    return Short(network, tuple(found), changes, value, value / whole - 1)


def _piece(bench: Bench, reference: float, limit: float) -> Piece | None:
    """Expand what is on a bench and drop small terms."""
    expanded: Expanded = expand(bench, most=MOST_TERMS)
    ring, values = expanded.ring, bench.network.values
    if expanded.top == 0:
        return None
    above, below = (coefficients(ring, p, "s") for p in (expanded.top, expanded.bottom))
    if min(above) != min(below):
        return None
    top, bottom = (terms_of(ring, p[min(p)], values) for p in (above, below))
    measure = RootOfRatio(reference, 1, limit)
    kept_top, kept_bottom, error = drop_terms(top, bottom, np.ones(1, dtype=complex), measure, 1.0)
    if not error <= 1:
        return None
    dropped = ((top, kept_top), (bottom, kept_bottom))
    ratio = lowest_terms(ring, top.polynomial(kept_top), bottom.polynomial(kept_bottom))
    return Piece(ring, *ratio, dropped, expanded.ties)


def _value(piece: Piece, network: Network) -> float:
    above, below = (
        float(terms_of(piece.ring, p, network.values).values.sum()) for p in (piece.top, piece.bottom)
    )
    return above / below


def _grounded(bench: Bench, node: int) -> Bench:
    """Put a node of a bench to ground."""
    bench.group[bench.group == bench.group[node]] = bench.group[bench.network.size]
    rows, columns = bench.group[bench.rows], bench.group[bench.columns]
    bench.there &= (rows[0] != rows[1]) & (columns[0] != columns[1])
    bench.refresh()
    return bench


def _hanging(bench: Bench, node: int) -> Iterator[npt.NDArray[np.bool_]]:
    """Give, in order, the sets of stamps that hang at a node and together nowhere else but at ground."""
    group, ends = bench.group, _ends(bench)
    apart = {int(group[node]), int(group[bench.network.size])}
    owner: dict[int, int] = {}

    def leader(place: int) -> int:
        while owner.setdefault(place, place) != place:
            place = owner[place]
        return place

    sets: dict[int, list[int]] = {}
    places = [int(place) for place in np.flatnonzero(bench.there)]
    for place in places:
        inner = sorted(ends[place] - apart)
        for other in inner[1:]:
            first, second = sorted((leader(inner[0]), leader(other)))
            owner[second] = first
    for place in places:
        inner = sorted(ends[place] - apart)
        # What lies between the node and ground alone is a set of its own.
        sets.setdefault(leader(inner[0]) if inner else -1 - place, []).append(place)
    for chosen in sets.values():
        if any(int(group[node]) in ends[place] for place in chosen):
            mask = np.zeros(len(bench.there), dtype=bool)
            mask[chosen] = True
            yield mask


def _ends(bench: Bench) -> list[set[int]]:
    """Give the nodes and branches that each stamp touches, joined ones by their leader."""
    table: Any = np.concatenate([bench.group[bench.rows], bench.group[bench.columns]])
    return [{int(end) for end in column} for column in table.T]


def _part_of(bench: Bench, chosen: npt.NDArray[np.bool_]) -> Bench:
    """Give a bench with the chosen stamps alone; what they do not touch is put to ground."""
    part = copy(bench)
    part.there = bench.there & chosen
    part.group = bench.group.copy()
    ends = _ends(bench)
    touched: set[int] = set().union(*(ends[int(place)] for place in np.flatnonzero(part.there)))
    ground = int(bench.group[bench.network.size])
    for leader in np.unique(bench.group):
        if int(leader) not in touched:
            part.group[bench.group == leader] = ground
    part.refresh()
    return part
