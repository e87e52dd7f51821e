"""Seconds and shares of time constants as they are printed, from the symbols that are printed with them."""

from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence
from fractions import Fraction

from derive.expressions.tree import ZERO, Expression
from derive.expressions.walk import evaluate
from derive.reactances.time_constants import TimeConstant, TimeConstants

ROUNDING = 1e-9


def wrong_number(given: TimeConstants, nominal: Mapping[str, Fraction] | None) -> str:
    """Say which number is not that of its symbols at the nominal values; "" where none is wrong.

    Where a value is open (`nominal` None) there must be no numbers.
    """
    for wrong in _wrong(given, nominal):
        return wrong
    return ""


def _wrong(given: TimeConstants, nominal: Mapping[str, Fraction] | None) -> Iterator[str]:
    sums: dict[str, Fraction | None] = {}
    for each in given.coefficients:
        values = [_value(product.term, nominal) for product in each.products]
        sums[each.name] = _sum(values)
        for product, value in zip(each.products, values, strict=True):
            if not _is_share(product.share, value, sums[each.name]):
                names = " and ".join(product.symbols)
                yield f"{each.name}: the share of {names} is not its part of the sum"
    for rows, short in ((given.open_circuit, False), (given.short_circuit, True)):
        seconds = [_seconds(row, nominal) for row in rows]
        for row, value in zip(rows, seconds, strict=True):
            if row.seconds != value:
                yield f"{row.symbol}, {row.kind}: its seconds are not those of its time constant"
        parts = [Fraction(0) if not value else 1 / value for value in seconds] if short else seconds
        # Where modes are hidden, b_1 is the response's own, and the shares are those of the circuit's sum.
        whole = _sum(parts) if short or given.hidden_says else sums.get("b_1", _sum(parts))
        for row, part in zip(rows, parts, strict=True):
            if not _is_share(row.share, part, whole):
                yield f"{row.symbol}, {row.kind}: its share is not its part of the sum"


def _value(tree: Expression, nominal: Mapping[str, Fraction] | None) -> Fraction | None:
    if nominal is None:
        return None
    try:
        return evaluate(tree, nominal, Fraction)
    except ZeroDivisionError:
        return None


def _sum(values: Sequence[Fraction | None]) -> Fraction | None:
    known = [value for value in values if value is not None]
    return sum(known, Fraction(0)) if len(known) == len(values) else None


def _seconds(row: TimeConstant, nominal: Mapping[str, Fraction] | None) -> Fraction | None:
    """Give R·C or L/R from the resistance in the circuit's own symbols."""
    if row.resistance is None or nominal is None:
        return Fraction(0) if row.constant == ZERO and row.resistance is None else None
    value, resistance = nominal[row.symbol], _value(row.resistance, nominal)
    if resistance is None or row.reactance == "capacitor":
        return None if resistance is None else resistance * value
    return value / resistance if resistance else None


def _is_share(share: float | None, part: Fraction | None, whole: Fraction | None) -> bool:
    if share is None:
        return True
    if part is None or not whole:
        return False
    return abs(share - float(part / whole)) <= ROUNDING * max(1.0, abs(share))
