"""Limits of the response at either end of the band, from the circuit reduced there.

At s = 0 the tableau's rising part falls away: capacitors are open, inductors shorted, one-pole
gains at their DC value. At infinity each row that has a rising part keeps that part alone, which
is the reverse. Where the reduced circuit alone is not enough (a piece left floating, a shorted
loop), its solution is a power series in s (or 1/s) with a pole, and as many further orders are
carried along as the ranks ask for, so that the limit is right there too.
"""

from __future__ import annotations

from derive.check.solve import NoSolutionError, reduced_modulo, residue, settle
from derive.check.stamp import Tableau

MAX_ORDERS = 6
MAX_ROWS = 900
TOO_LARGE = "too large for this road"
Row = dict[int, int]


def limit_modulo(tableau: Tableau, prime: int, *, at_infinity: bool) -> int | None:
    """Give the response's limit modulo the prime; None where it is infinite.

    Raises: NoSolutionError where the circuit has no unique solution, or is too large.
    """
    near, next_order, right = _reduced(tableau, prime, at_infinity=at_infinity)
    size = tableau.size
    order = _pole_order(near, next_order, size, prime)
    blocks = 2 * order + 1
    if blocks * size > MAX_ROWS:
        raise NoSolutionError(TOO_LARGE)
    rows, values = [], []
    for block in range(blocks):
        rows += _block_rows(near, next_order, block, size)
        values += right if block == order else [0] * size
    reduced, _ = reduced_modulo(rows, values, blocks * size, prime)
    response = 0
    for block in range(order + 1):
        wanted = {block * size + column: sign for column, sign in tableau.wanted.items()}
        _, response, rest = settle(reduced, blocks * size, wanted)
        response %= prime
        if any(value % prime for value in rest.values()):
            raise NoSolutionError("the reduced circuit leaves the response open")
        if block < order and response:
            return None
    return response


def _reduced(
    tableau: Tableau, prime: int, *, at_infinity: bool
) -> tuple[list[Row], list[Row], list[int]]:
    size = tableau.size
    constant: list[Row] = [{} for _ in range(size)]
    rising: list[Row] = [{} for _ in range(size)]
    for entries, rows in ((tableau.constant, constant), (tableau.rising, rising)):
        for (row, column), entry in entries.items():
            value = residue(entry, prime)
            if value:
                rows[row][column] = value
    right = [residue(tableau.right.get(row, 0), prime) for row in range(size)]
    if not at_infinity:
        return constant, rising, right
    # A row with a rising part is divided by s: that part stays, the constant one becomes 1/s.
    near = [high or low for low, high in zip(constant, rising, strict=True)]
    further = [low if high else {} for low, high in zip(constant, rising, strict=True)]
    return near, further, right


def _block_rows(near: list[Row], further: list[Row], block: int, size: int) -> list[Row]:
    rows = []
    for low, high in zip(near, further, strict=True):
        row = {block * size + column: value for column, value in low.items()}
        if block:
            row.update({(block - 1) * size + column: value for column, value in high.items()})
        rows.append(row)
    return rows


def _pole_order(near: list[Row], further: list[Row], size: int, prime: int) -> int:
    """Give the order of the pole of the inverse: where the rank grows by the full size."""
    rank_before = 0
    rows: list[Row] = []
    for order in range(MAX_ORDERS):
        if (order + 1) * size > MAX_ROWS:
            raise NoSolutionError(TOO_LARGE)
        rows += _block_rows(near, further, order, size)
        _, rank = reduced_modulo(rows, [0] * len(rows), (order + 1) * size, prime)
        if rank - rank_before == size:
            return order
        rank_before = rank
    raise NoSolutionError("the reduced circuit leaves the response open")
