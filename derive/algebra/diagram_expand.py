"""The products of a diagram, written out: as bit masks, as sets of terms, or as FLINT polynomials.

Everything here counts first, and refuses before it forms anything.
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray

from derive.algebra.diagram import Diagram
from derive.algebra.diagram_forks import Fork, fold
from derive.algebra.minors import TERM_LIMIT, too_large
from derive.algebra.ring import Polynomial, Ring

WORD = 64


@dataclass(frozen=True, slots=True, eq=False)
class Products:
    """The products of one determinant: bit k of row i is set where product i holds term number k.

    `masks` has as many columns of 64 bits as the terms need; `signs` holds 1 or −1 for each product.
    """

    masks: NDArray[np.uint64]
    signs: NDArray[np.int8]

    def __iter__(self) -> Iterator[tuple[int, tuple[int, ...]]]:
        """Give every product as its sign and the numbers of its terms."""
        for words, sign in zip(self.masks.tolist(), self.signs.tolist(), strict=True):
            mask = sum(word << (WORD * place) for place, word in enumerate(words))
            yield sign, tuple(place for place in range(mask.bit_length()) if mask >> place & 1)


def products(diagram: Diagram, limit: int = TERM_LIMIT) -> tuple[Products, ...]:
    """Write out all products of each determinant.

    Raises: TooLargeError where one has more than `limit`; nothing was formed then.
    """
    refuse_long(diagram, limit)
    words = max(1, -(-len(diagram.terms) // WORD))
    bits = np.zeros((len(diagram.terms), words), np.uint64)
    for number in range(len(diagram.terms)):
        bits[number, number // WORD] = np.uint64(1 << number % WORD)
    nothing = Products(np.zeros((0, words), np.uint64), np.zeros(0, np.int8))
    empty = Products(np.zeros((1, words), np.uint64), np.ones(1, np.int8))

    def combined(fork: Fork, values: Sequence[Any]) -> Products:
        item, taken, left, sign = fork
        above = values[taken]
        entries = diagram.bundles[item].entries
        masks = [above.masks | bits[entry.number] for entry in entries]
        signs = [above.signs if entry.sign > 0 else -above.signs for entry in entries]
        if left:
            masks.append(values[left].masks)
            signs.append(values[left].signs if sign > 0 else -values[left].signs)
        return Products(np.concatenate(masks), np.concatenate(signs))

    found = fold(diagram.forks, [fork for _, fork in diagram.roots], nothing, empty, combined)
    return tuple(
        value if sign > 0 else Products(value.masks, -value.signs)
        for (sign, _), value in zip(diagram.roots, found, strict=True)
    )


def polynomials(
    diagram: Diagram, ring: Ring, variable: str = "s", limit: int = TERM_LIMIT
) -> tuple[Polynomial, ...]:
    """Give each determinant as a polynomial over a ring that has all names, and the degree variable.

    Raises: TooLargeError where one has more than `limit` products; nothing was formed then.
    """
    refuse_long(diagram, limit)
    powered = any(term.degree for term in diagram.terms)
    power = ring.generator(variable) if powered else ring.one
    weights = []
    for item in diagram.bundles:
        total = ring.zero
        for entry in item.entries:
            total += entry.sign * ring.generator(entry.name) * power**entry.degree
        weights.append(total)

    return tuple(diagram.roots_of(weights, ring.zero, ring.one))


def refuse_long(diagram: Diagram, limit: int) -> None:
    """Refuse a diagram one of whose determinants has more than `limit` products.

    Raises: TooLargeError.
    """
    if any(count > limit for count in diagram.counts()):
        raise too_large(limit)
