"""Group delay, −dφ/dω, from the polynomials themselves: no difference of neighbouring phases is taken."""

from __future__ import annotations

import math
from collections.abc import Sequence
from fractions import Fraction

from flint import acb, acb_poly, ctx

from derive.algebra.roots import rational_polynomial
from derive.normalise.exact_response import ExactResponse

BITS = 256


def group_delay(response: ExactResponse, hertz: float) -> float | None:
    """Give the group delay in seconds; None where the response vanishes or is infinite.

    For H = N/D it is the real part of D'/D − N'/N at s = j·2πf.
    """
    with ctx.workprec(BITS):
        s = acb(0, 2 * math.pi * hertz)
        below, above = _logarithmic(response.bottom, s), _logarithmic(response.top, s)
        if below is None or above is None:
            return None
        return float((below - above).real)


def _logarithmic(polynomial: Sequence[Fraction], s: acb) -> acb | None:
    """Give p'(s)/p(s)."""
    whole = acb_poly(rational_polynomial(polynomial))
    value = whole(s)
    return None if value.contains(0) else whole.derivative()(s) / value
