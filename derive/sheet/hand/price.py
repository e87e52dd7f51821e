"""What an approximate line of a hand derivation costs, in words."""

from __future__ import annotations

from collections.abc import Iterator

from derive.approximate.register import Errors, RootError, Worst
from derive.handcheck.report import Neglected, Pricing
from derive.quantities.dimension import RATIO
from derive.quantities.format import engineering
from derive.sheet.figures import hertz, signed_percent, times

_TURN = 6.283185307179586
MOST_ROOTS = 4


def price_lines(pricing: Pricing) -> tuple[str, ...]:
    """Give what a line is off by, a sentence each; () where no value is known."""
    return tuple(_sentences(pricing))


def _sentences(pricing: Pricing) -> Iterator[str]:
    if pricing.relative is not None:
        yield (
            f"the right side is {signed_percent(pricing.relative)} off at the nominal values"
            + _worst_of_value(pricing.worst)
        )
    if pricing.errors is not None:
        yield from _errors(pricing.errors)
        if pricing.worst is not None:
            yield f"at the worst corners of the tolerances: {_levels(pricing.worst)}"


def _worst_of_value(worst: Worst | None) -> str:
    if worst is None or worst.gain is None:
        return ""
    return f", {signed_percent(worst.gain)} at the worst corner of the tolerances"


def _errors(errors: Errors) -> Iterator[str]:
    low, high = errors.range_hz
    where = f"from {hertz(low)} to {hertz(high)}" if low < high else f"at {hertz(low)}"
    yield f"{where}: {_levels(errors)}"
    found = []
    for name, edge in (("low", errors.low_edge), ("high", errors.high_edge)):
        if edge is not None:
            found.append(f"{name} −3 dB frequency {signed_percent(edge)}")
    kinds = (("pole", errors.poles, errors.lost_poles), ("zero", errors.zeros, errors.lost_zeros))
    for kind, roots, lost in kinds:
        found += _roots(kind, roots, lost)
    if found:
        yield "; ".join(found)


def _levels(errors: Errors | Worst) -> str:
    words = [] if errors.gain is None else [f"gain {signed_percent(errors.gain)}"]
    words.append(f"magnitude {_signed(errors.magnitude_db)} dB")
    words.append(f"phase {_signed(errors.phase_deg)}°")
    return ", ".join(words)


def _roots(kind: str, roots: tuple[RootError, ...], lost: tuple[complex, ...]) -> list[str]:
    found = []
    # Of a pair one is told.
    for root in [root for root in roots if root.approximate.imag >= 0][:MOST_ROOTS]:
        if root.exact is None or root.error is None:
            found.append(f"{kind} at {_hertz(root.approximate)} is new")
        else:
            found.append(f"{kind} at {_hertz(root.exact)}: {signed_percent(root.error)}")
    gone = [_hertz(root) for root in lost if root.imag >= 0][:MOST_ROOTS]
    return found + [f"{kind} at {each} is gone" for each in gone]


def neglected_words(item: Neglected) -> tuple[str, str]:
    """Give what stands before and behind a neglected term: where it was, and how small it is."""
    ratio = "" if item.ratio is None else f"{times(abs(item.ratio))} of "
    return f"neglected in the {item.of}: ", f", {ratio or 'beside '}"


def _signed(value: float) -> str:
    if abs(value) < 1e-9:
        return "0"
    return f"{'+' if value > 0 else ''}{engineering(value, RATIO, 3)}"


def _hertz(root: complex) -> str:
    words = hertz(abs(root) / _TURN)
    return f"{words} (pair)" if root.imag else words
