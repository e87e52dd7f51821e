"""The reduced circuit expanded: numerator and denominator in symbols, with matched parts under one name."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from math import lcm

from derive.algebra.exchange import exchange
from derive.algebra.minors import Minors, refuse_large
from derive.algebra.ratio import lowest_terms
from derive.algebra.ring import Polynomial, Ring
from derive.algebra.ring import ring as make_ring
from derive.approximate.simplify_matched import matched
from derive.approximate.simplify_network import NOWHERE, Stamp
from derive.approximate.simplify_trials import Bench
from derive.errors import SingularError, TooLargeError

# More terms than this are not looked at one by one; then more elements have to go first.
MOST_TERMS = 8_000


@dataclass(frozen=True, slots=True, eq=False)
class Expanded:
    """H = top/bottom in lowest terms over `ring`, in which nothing is inverted.

    `ties` holds (symbol, the matched symbol that stands for it).
    """

    ring: Ring
    top: Polynomial
    bottom: Polynomial
    ties: tuple[tuple[str, str], ...]


def expand(bench: Bench, *, tie: bool = True, most: int = MOST_TERMS) -> Expanded:
    """Expand what is left on the bench.

    Raises: TooLargeError where it has more than `most` terms; SingularError.
    """
    network = bench.network
    left = [stamp for stamp, there in zip(network.stamps, bench.there, strict=True) if there]
    ties = matched(network, left) if tie else {}
    symbols = [ties.get(name, name) for stamp in left for name in stamp.symbols]
    inverted = [ties.get(n, n) for stamp in left if stamp.inverted for n in stamp.symbols]
    ring = make_ring(["s", *sorted(dict.fromkeys(symbols), key=symbols.index)], inverted)
    rows = _rows(bench, left, ring, ties)
    top, bottom = _determinants(ring, rows, most)
    if bottom == 0:
        raise SingularError("the reduced circuit has no unique solution")
    (top, bottom), _ = exchange(ring, [top, bottom])
    if top != 0:
        top, bottom = lowest_terms(ring.plain(), top, bottom)
    if len(top) + len(bottom) > most:
        raise TooLargeError(f"the reduced circuit has {len(top) + len(bottom):,} terms")
    return Expanded(ring.plain(), top, bottom, tuple(ties.items()))


def _determinants(
    ring: Ring, rows: Sequence[Mapping[int, Polynomial]], most: int
) -> tuple[Polynomial, Polynomial]:
    """Give the two determinants of Cramer's rule for the last unknown, as long as they stay short."""
    size = len(rows)
    refuse_large(rows, most)
    # The memo holds minors that are longer than the determinants to which they add up.
    minors = Minors(ring, rows, limit=2 * most)
    every = (1 << size) - 1
    top = minors.minor(every, every ^ (1 << (size - 1)) | 1 << size)
    return top, minors.minor(every, every)


def _rows(
    bench: Bench, left: Sequence[Stamp], ring: Ring, ties: Mapping[str, str]
) -> list[dict[int, Polynomial]]:
    """Write the equations of what is left, the wanted unknown last and the right side behind it."""
    network, group = bench.network, [int(place) for place in bench.group]
    size = network.size
    ground = group[size]

    def leader(place: int) -> int:
        return ground if place == NOWHERE else group[place]

    plus, minus = (leader(place) for place in network.wanted)
    leaders = [place for place in dict.fromkeys(group[:size]) if place != ground]
    single = plus != ground and minus == ground
    columns = {place: index for index, place in enumerate(p for p in leaders if not single or p != plus)}
    if single:
        columns[plus] = len(columns)
    wanted = len(leaders) if not single else columns[plus]
    count = wanted + 1
    rows: dict[int, dict[int, Polynomial]] = {place: {} for place in leaders}
    for stamp in left:
        term = ring.constant(stamp.sign) * ring.monomial(_powers(stamp, ties))
        for row, column, sign in _corners(stamp):
            if leader(row) != ground and leader(column) != ground:
                _add(rows[leader(row)], columns[leader(column)], term * sign)
    scale = lcm(*(value.denominator for _, value in network.right), 1)
    for row, value in network.right:
        if leader(row) != ground:
            _add(rows[leader(row)], count, ring.constant(int(value * scale)))
    written = list(rows.values())
    if single and scale != 1:
        written = [{c: e * scale if c == wanted else e for c, e in row.items()} for row in written]
    elif not single:
        ends = [(columns[place], sign) for place, sign in ((plus, -1), (minus, 1)) if place != ground]
        written.append(_difference(ring, wanted, scale, ends))
    return [{column: entry for column, entry in row.items() if entry != 0} for row in written]


def _difference(
    ring: Ring, wanted: int, scale: int, ends: Sequence[tuple[int, int]]
) -> dict[int, Polynomial]:
    """Write scale·wanted − (the one − the other) = 0, a row of its own."""
    extra: dict[int, Polynomial] = {wanted: ring.constant(scale)}
    for column, sign in ends:
        _add(extra, column, ring.constant(sign))
    return extra


def _corners(stamp: Stamp) -> tuple[tuple[int, int, int], ...]:
    """Give the four entries of a stamp: row, column and sign."""
    (a, b), (c, d) = stamp.rows, stamp.columns
    return (a, c, 1), (a, d, -1), (b, c, -1), (b, d, 1)


def _powers(stamp: Stamp, ties: Mapping[str, str]) -> dict[str, int]:
    powers = {"s": stamp.power} if stamp.power else {}
    for name in stamp.symbols:
        tied = ties.get(name, name)
        powers[tied] = powers.get(tied, 0) + 1
    return powers


def _add(row: dict[int, Polynomial], column: int, entry: Polynomial) -> None:
    row[column] = row[column] + entry if column in row else entry
