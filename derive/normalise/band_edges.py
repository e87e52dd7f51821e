"""Where one band ends and the next begins, from the poles of the bands' own circuits.

The low-frequency corners are the poles that the low band's circuit has beyond those at mid-band, the
high-frequency corners those of the high band's circuit, of all quantities wanted together. (A part
without a role is kept in every band, and its poles tell no band from another: for every pole at
mid-band the nearest one is left out.) Mid-band lies between the highest low-frequency corner and the
lowest high-frequency corner; the low band reaches from its lowest corner to its highest, the high band
likewise, the full circuit from the lowest corner of all to the highest. An end without a corner is open.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

from derive.bands.choose import HIGH_FREQUENCY, LOW_FREQUENCY
from derive.bands.restrict import find_in, restrict
from derive.devices.elements import SmallSignal
from derive.errors import InputError
from derive.normalise.exact_response import ExactResponse, exact_response
from derive.topology.topology import BandName, Find

Range = tuple[float | None, float | None]
# Corners of several quantities that differ by less than this are one pole of the circuit.
SAME = 1e-9


@dataclass(frozen=True, slots=True)
class BandEdges:
    """The corners of a circuit's low and high band in Hz, rising; () where it has no such band."""

    low_corners: tuple[float, ...]
    high_corners: tuple[float, ...]

    @property
    def mid_from(self) -> float | None:
        """The highest low-frequency corner: where mid-band begins."""
        return max(self.low_corners, default=None)

    @property
    def mid_to(self) -> float | None:
        """The lowest high-frequency corner: where mid-band ends."""
        return min(self.high_corners, default=None)

    @property
    def overlap(self) -> bool:
        """Whether there is no mid-band: a low-frequency corner lies above a high-frequency one."""
        begin, end = self.mid_from, self.mid_to
        return begin is not None and end is not None and begin >= end

    def of(self, band: BandName) -> Range:
        """Give a band's lower and upper edge in Hz; None where that end is open."""
        if band == "mid":
            return self.mid_from, self.mid_to
        both = (*self.low_corners, *self.high_corners)
        corners = {"low": self.low_corners, "high": self.high_corners}.get(band, both)
        return min(corners, default=None), max(corners, default=None)


def band_edges(circuit: SmallSignal) -> BandEdges:
    """Give the corners between the bands of a circuit at its nominal values.

    A quantity that cannot be worked in a band adds no corner there.
    """
    return edges_of(circuit, circuit.topology.finds)


def edges_of(circuit: SmallSignal, finds: Sequence[Find]) -> BandEdges:
    """Give the corners between the bands as these quantities show them."""
    roles = {role for _, role in circuit.roles}
    return BandEdges(
        _corners(circuit, "low", finds) if roles & LOW_FREQUENCY else (),
        _corners(circuit, "high", finds) if roles & HIGH_FREQUENCY else (),
    )


def _corners(circuit: SmallSignal, band: BandName, finds: Sequence[Find]) -> tuple[float, ...]:
    found: list[float] = []
    for find in finds:
        response, mid = response_in(circuit, band, find), response_in(circuit, "mid", find)
        own = list(response.corners_hz) if response else []
        for corner in mid.corners_hz if mid else ():
            if own:
                own.remove(min(own, key=lambda other: abs(math.log(other / corner))))
        found += own
    distinct: list[float] = []
    for corner in sorted(found):
        if not distinct or corner > distinct[-1] * (1 + SAME):
            distinct.append(corner)
    return tuple(distinct)


def response_in(circuit: SmallSignal, band: BandName, find: Find) -> ExactResponse | None:
    """Give a quantity's response in a band at nominal values; None where it cannot be worked there."""
    try:
        narrowed = restrict(circuit, band, merge=False)
        return exact_response(narrowed.circuit, find_in(narrowed, find))
    except InputError:
        return None
