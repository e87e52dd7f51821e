"""The ledger's approximations: each reduced result, and the errors that it brings."""

from __future__ import annotations

import math
from fractions import Fraction
from typing import Any

from derive.approximate.register import Entry, Errors, Register, RootError, Worst
from derive.expressions.ledger_text import to_ledger
from derive.expressions.text import to_text
from derive.expressions.tree import Expression

# Beyond these digits an error differs from machine to machine, and nobody asks.
DIGITS = 6


def approximations(register: Register | None) -> list[dict[str, Any]]:
    """Give every assumption on a result with its reduced result and its price, in order."""
    if register is None:
        return []
    return [_approximation(entry) for entry in register.entries]


def shown_in(register: Register | None) -> list[Expression]:
    """Give every expression for reading that the ledger's approximations hold."""
    found: list[Expression | None] = []
    for entry in register.entries if register else ():
        read = entry.reduced.readable
        found += [entry.smaller, entry.larger, read.gain, *read.numerator, *read.denominator]
    return [expression for expression in found if expression is not None]


def _approximation(entry: Entry) -> dict[str, Any]:
    form, numbers, read = entry.reduced.form, entry.reduced.numbers, entry.reduced.readable
    gain = numbers.gain if numbers else None
    return {
        "that": entry.assumption.that,
        "because": entry.assumption.because,
        "by": entry.assumption.by,
        "gain": {"exact": to_ledger(form.gain), "value": _number(gain)},
        "power_of_s": form.power_of_s,
        "numerator": [to_ledger(value) for value in form.numerator],
        "denominator": [to_ledger(value) for value in form.denominator],
        "ratio": rounded(entry.ratio),
        "errors": errors_data(entry.together),
        "status": entry.status,
        "number": entry.number,
        "reason": entry.reason,
        "changed": entry.reduced.says,
        "struck": [
            {
                "of": term.of,
                "power_of_s": term.power,
                "term": to_ledger(term.term),
                "against": None if term.against is None else to_ledger(term.against),
            }
            for term in entry.reduced.struck
        ],
        "smaller": _text(entry.smaller),
        "larger": _text(entry.larger),
        "readable": {
            "gain": to_text(read.gain),
            "numerator": [to_text(value) for value in read.numerator],
            "denominator": [to_text(value) for value in read.denominator],
        },
        "alone": errors_data(entry.alone),
        "worst_corner": worst_data(entry.worst),
    }


def errors_data(errors: Errors | None) -> dict[str, Any] | None:
    """Give the errors of a reduced result as data, rounded to the digits that count."""
    if errors is None:
        return None
    return {
        "gain": rounded(errors.gain),
        "magnitude_db": rounded(errors.magnitude_db),
        "phase_deg": rounded(errors.phase_deg),
        "range_hz": [rounded(end) for end in errors.range_hz],
        "poles": [_root(root) for root in errors.poles],
        "zeros": [_root(root) for root in errors.zeros],
        "low_edge": rounded(errors.low_edge),
        "high_edge": rounded(errors.high_edge),
        "at": [
            {
                "name": each.name,
                "hz": rounded(each.hertz),
                "magnitude_db": rounded(each.magnitude_db),
                "phase_deg": rounded(each.phase_deg),
            }
            for each in errors.at
        ],
    }


def worst_data(worst: Worst | None) -> dict[str, Any] | None:
    """Give the worst over the corners as data, rounded to the digits that count."""
    if worst is None:
        return None
    return {
        "ratio": rounded(worst.ratio),
        "gain": rounded(worst.gain),
        "magnitude_db": rounded(worst.magnitude_db),
        "phase_deg": rounded(worst.phase_deg),
        "at": list(worst.at),
    }


def _root(root: RootError) -> float | None:
    return rounded(root.error)


def rounded(value: float | None) -> float | None:
    """Give a number to the digits that count; None for one that is not finite."""
    if value is None or not math.isfinite(value):
        return None
    return float(f"{value:.{DIGITS}g}") + 0.0


def _number(value: Fraction | None) -> float | None:
    try:
        return None if value is None else float(value)
    except OverflowError:
        return None


def _text(expression: Expression | None) -> str | None:
    return None if expression is None else to_text(expression)
