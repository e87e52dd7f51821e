"""The pass band of a result in words: where the response is 3 dB off, and from what that is counted."""

from __future__ import annotations

from derive.estimates.bandwidth import AT
from derive.estimates.estimates import Bandwidth
from derive.estimates.response import fraction_of, positive_roots, response_of
from derive.sheet.document import Line, Text
from derive.sheet.figures import hertz
from derive.sheet.view import View, views


def bandwidth_of(view: View) -> Bandwidth | None:
    """Give the bandwidth of a result; None where there is none."""
    estimates = view.result.solution.estimates
    return estimates.bandwidth if estimates else None


def peak_of(view: View) -> tuple[float, float] | None:
    """Give magnitude and frequency of the peak that the pass band lies around; None where it is no peak."""
    found, solution = bandwidth_of(view), view.result.solution
    if found is None or solution.numbers is None or AT["peak"] not in found.reference_says:
        return None
    response = response_of(solution.numbers, solution.form.power_of_s)
    roots = positive_roots(response.slope) if response else []
    if response is None or not roots:
        return None
    highest = max(roots, key=lambda root: fraction_of(response.square_at(root.ball)))
    return found.reference, highest.hertz


def pass_band(view: View) -> Line:
    """Say where the pass band ends; for a result of the mid band both ends, from the bands beside it.

    Gives: () where nothing is known of it.
    """
    if view.band == "mid":
        return _between_the_bands(view)
    found = bandwidth_of(view)
    if found is None:
        return ()
    words = f"{lead(view)}: {edges(found)}" + (f"; {found.remark}" if found.remark else "")
    return (Text(f"{words}."),)


def edges(found: Bandwidth) -> str:
    """Say between which frequencies the pass band lies."""
    if found.low_hz is not None and found.high_hz is not None:
        return f"from {hertz(found.low_hz)} to {hertz(found.high_hz)}"
    if found.low_hz is not None:
        return f"from {hertz(found.low_hz)} up"
    if found.high_hz is not None:
        return f"up to {hertz(found.high_hz)}"
    return "at all frequencies"


def lead(view: View) -> str:
    """Name the pass band: an impedance may leave it upwards as well."""
    impedance = view.result.solution.derivation.system.find.quantity == "impedance"
    return "Within 3 dB" if impedance else "Pass band to −3 dB"


def _between_the_bands(view: View) -> Line:
    low = high = ""
    for other in views(view.outcome):
        found = bandwidth_of(other) if other.name == view.name else None
        if found is None:
            continue
        if other.band == "low" and found.low_hz is not None:
            low = f"from {hertz(found.low_hz)} (low band)"
        if other.band == "high" and found.high_hz is not None:
            # A tuned stage has both its edges there.
            low = low or (f"from {hertz(found.low_hz)}" if found.low_hz is not None else "")
            high = f"to {hertz(found.high_hz)} (high band)"
    if not low and not high:
        return ()
    words = f"{low} {high}".strip() if low else f"up {high}"
    return (Text(f"{lead(view)}: {words}."),)
