"""What a reduced response differs from the exact one by: gain, roots, −3 dB frequencies, magnitude, phase."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

from derive.approximate.register import Errors, FrequencyError, RootError
from derive.approximate.stationary import difference
from derive.estimates.bandwidth import find_bandwidth
from derive.estimates.estimates import Bandwidth
from derive.estimates.response import response_of
from derive.normalise.form import CertifiedRoot, NominalNumbers
from derive.topology.topology import BandName


@dataclass(frozen=True, slots=True, eq=False)
class Exact:
    """The exact response at its nominal values, with what errors are counted over.

    `edges` are its −3 dB frequencies; `named` the frequencies that the sheet lists by name.
    """

    numbers: NominalNumbers
    power: int
    band: BandName
    impedance: bool
    edges: Bandwidth | None
    range_hz: tuple[float, float]
    named: tuple[tuple[str, float], ...]


def edges_of(numbers: NominalNumbers, power: int, band: BandName, *, impedance: bool) -> Bandwidth | None:
    """Give the −3 dB frequencies of a response; None where it has none."""
    response = response_of(numbers, power)
    if response is None:
        return None
    return find_bandwidth(response, numbers.poles, band, impedance=impedance)[0]


def errors_of(reduced: NominalNumbers, power: int, exact: Exact) -> Errors | None:
    """Give the errors of a reduced response; None where one of the two is zero or undefined.

    Given: the reduced response's power of s.
    """
    found = difference(reduced, exact.numbers, power - exact.power)
    if found is None:
        return None
    magnitude, phase = found.worst(exact.range_hz)
    poles, lost_poles = match(reduced.poles, exact.numbers.poles)
    zeros, lost_zeros = match(reduced.zeros, exact.numbers.zeros)
    edges = edges_of(reduced, power, exact.band, impedance=exact.impedance)
    before = exact.edges
    return Errors(
        _gain(reduced, exact) if power == exact.power else None,
        magnitude,
        phase,
        exact.range_hz,
        poles,
        zeros,
        lost_poles,
        lost_zeros,
        _relative(edges.low_hz, before.low_hz) if edges and before else None,
        _relative(edges.high_hz, before.high_hz) if edges and before else None,
        tuple(FrequencyError(name, hertz, *found.at(hertz)) for name, hertz in exact.named),
    )


def _gain(reduced: NominalNumbers, exact: Exact) -> float | None:
    if reduced.gain is None or not exact.numbers.gain:
        return None
    return float(reduced.gain / exact.numbers.gain - 1)


def _relative(approximate: float | None, exact: float | None) -> float | None:
    return None if approximate is None or exact is None else approximate / exact - 1


def match(
    reduced: Sequence[CertifiedRoot], exact: Sequence[CertifiedRoot]
) -> tuple[tuple[RootError, ...], tuple[complex, ...]]:
    """Give each reduced root with the exact one nearest to it, and the exact ones left over.

    Nearest is judged on a logarithmic scale of s, the closest pair first; every root is used once.
    """
    ours, theirs = (spread(roots) for roots in (reduced, exact))
    pairs = sorted(
        (_apart(one, other), i, k) for i, one in enumerate(ours) for k, other in enumerate(theirs)
    )
    partner: dict[int, int] = {}
    for _, i, k in pairs:
        if i not in partner and k not in partner.values():
            partner[i] = k
    found = tuple(
        RootError(root, theirs[partner[i]], error_of(root, theirs[partner[i]]))
        if i in partner
        else RootError(root, None, None)
        for i, root in enumerate(ours)
    )
    return found, tuple(root for k, root in enumerate(theirs) if k not in partner.values())


def spread(roots: Sequence[CertifiedRoot]) -> list[complex]:
    """Give roots as complex numbers, each as often as its multiplicity; those at zero are left out."""
    return [
        complex(root.real, root.imaginary)
        for root in roots
        for _ in range(root.multiplicity)
        if root.magnitude > 0
    ]


def _apart(one: complex, other: complex) -> float:
    ratio = one / other
    return math.hypot(math.log(abs(ratio)), math.atan2(ratio.imag, ratio.real))


def error_of(approximate: complex, exact: complex) -> float:
    """Give (approximate − exact)/exact: of real roots as they are, else of their distance from zero."""
    if approximate.imag == 0 and exact.imag == 0:
        return approximate.real / exact.real - 1
    return abs(approximate) / abs(exact) - 1
