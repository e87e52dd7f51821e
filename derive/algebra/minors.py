"""Determinants by memoised minors: each minor is computed once, by Laplace expansion.

Chosen over fraction-free (Bareiss) elimination because Bareiss forms products that are
quadratically larger than its entries, while every entry of it is itself a minor: on matrices of five
to eight rows with distinct symbols this road is two to three orders of magnitude quicker.
"""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field

from flint import fmpz_mat

from derive.algebra.ring import Polynomial, Ring
from derive.errors import TooLargeError

# A memo of minors of this size takes some hundreds of megabytes; text of it could not be read.
TERM_LIMIT = 400_000


@dataclass(slots=True)
class Minors:
    """The minors of a matrix of polynomials, kept as they are asked for.

    A row is {column: entry} and may have more columns than there are rows. A minor is named by the
    bits of two masks of as many rows and columns.

    Raises: TooLargeError before a minor of much more than `limit` terms is formed.
    """

    ring: Ring
    rows: Sequence[Mapping[int, Polynomial]]
    limit: int = TERM_LIMIT
    memo: dict[tuple[int, int], Polynomial] = field(default_factory=dict)

    def minor(self, rows: int, columns: int) -> Polynomial:
        """Give the determinant over the rows and columns of two masks."""
        if not rows:
            return self.ring.one
        key = (rows, columns)
        known = self.memo.get(key)
        if known is None:
            last = rows.bit_length() - 1
            known = self.bordered(rows ^ 1 << last, self.rows[last], columns)
            self.memo[key] = known
        return known

    def bordered(self, rows: int, row: Mapping[int, Polynomial], columns: int) -> Polynomial:
        """Give the determinant over `rows` with one more row below them."""
        total: Polynomial = None
        for column, entry in row.items():
            if not columns >> column & 1:
                continue
            term = entry
            if rows:
                minor = self.minor(rows, columns ^ 1 << column)
                if not minor:
                    continue
                if len(entry) * len(minor) > 4 * self.limit:
                    raise too_large(self.limit)
                term = entry * minor
            # Expanding along the last row: the sign turns with each column to the right.
            negative = (columns >> column + 1).bit_count() & 1
            if total is None:
                total = -term if negative else term
            else:
                total = total - term if negative else total + term
                if len(total) > self.limit:
                    raise too_large(self.limit)
        return self.ring.zero if total is None else total


def refuse_large(rows: Sequence[Mapping[int, Polynomial]], limit: int = TERM_LIMIT) -> None:
    """Refuse a square matrix (further columns are not looked at) whose determinant is surely too long.

    With every generator at one, a determinant adds up its coefficients. Where these are 1 and -1, as
    they are where each generator stands for one thing, it has at least as many terms; the margin of ten
    leaves room for others. A small sum proves nothing: then the expansion itself keeps count.

    Raises: TooLargeError.
    """
    size = len(rows)
    dense = [[_sum(row, column) for column in range(size)] for row in rows]
    for row, entries in zip(dense, rows, strict=True):
        shared = math.gcd(*(int(value) for entry in entries.values() for value in entry.coeffs()))
        row[:] = [value // (shared or 1) for value in row]
    if abs(int(fmpz_mat(dense).det())) > 10 * limit:
        raise too_large(limit)


def _sum(row: Mapping[int, Polynomial], column: int) -> int:
    return sum(int(value) for value in row[column].coeffs()) if column in row else 0


def too_large(limit: int) -> TooLargeError:
    """Make the error of an expansion that would pass `limit` terms."""
    return TooLargeError(
        f"the expanded result would have more than {limit:,} terms",
        cure="split it into stages, or merge its parallel and series parts",
    )
