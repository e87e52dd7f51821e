"""The exact gain from one node of a circuit to another: two voltages over one determinant.

By Cramer's rule each voltage is a determinant over that of the system, so that their ratio is the ratio of
two determinants, whatever drives the circuit. Both come from one memo of minors.
"""

from __future__ import annotations

from dataclasses import dataclass

from derive.algebra.exchange import exchange
from derive.algebra.minors import Minors, refuse_large
from derive.algebra.ratio import coefficients, lowest_terms
from derive.algebra.ring import Polynomial, Ring
from derive.eliminate.rows import input_rows
from derive.nodal.system import NodalSystem

# A gain of more terms than this is read by nobody.
READABLE_TERMS = 300
# The determinants before what they share is cancelled.
TERM_LIMIT = 20_000


@dataclass(frozen=True, slots=True, eq=False)
class NodeGain:
    """A(s) = (sum top[k]·s^k)/(sum bottom[k]·s^k) in lowest terms, over a ring without inverted names.

    Both have a lowest coefficient, that of s⁰, which is not zero.
    """

    ring: Ring
    top: dict[int, Polynomial]
    bottom: dict[int, Polynomial]

    @property
    def at_zero(self) -> tuple[Polynomial, Polynomial]:
        """The gain at zero frequency as a ratio in lowest terms."""
        return lowest_terms(self.ring, self.top[0], self.bottom[0])


@dataclass(frozen=True, slots=True, eq=False)
class NodeGains:
    """A circuit's gains from node to node, for the drive at work."""

    system: NodalSystem
    minors: Minors

    @staticmethod
    def of(system: NodalSystem) -> NodeGains:
        """Lay out the system's matrix with its right side.

        Raises: TooLargeError where its determinant would be too long to be worked here.
        """
        names = [unknown.name for unknown in system.unknowns]
        _, rows = input_rows(system, names, range(len(names)))
        refuse_large(rows, TERM_LIMIT)
        return NodeGains(system, Minors(system.ring, rows, TERM_LIMIT))

    def between(self, near: str, far: str) -> NodeGain | None:
        """Give the gain from one node to another.

        Gives None where a voltage is zero, where the gain is zero or infinite at zero frequency, and
        where it is too long to be read.
        Raises: TooLargeError.
        """
        above, below = self._determinant(far), self._determinant(near)
        if above == 0 or below == 0:
            return None
        (above, below), _ = exchange(self.system.ring, [above, below])
        ring = self.system.ring.plain()
        above, below = lowest_terms(ring, above, below)
        if len(above) + len(below) > READABLE_TERMS:
            return None
        top, bottom = coefficients(ring, above, "s"), coefficients(ring, below, "s")
        return NodeGain(ring, top, bottom) if 0 in top and 0 in bottom else None

    def _determinant(self, node: str) -> Polynomial:
        """Give the determinant with the right side in the place of the node's column."""
        places = [
            place
            for place, unknown in enumerate(self.system.unknowns)
            if unknown.quantity == "voltage" and unknown.subject == node
        ]
        size = len(self.system.unknowns)
        everything = (1 << size) - 1
        minor = self.minors.minor(everything, everything ^ 1 << places[0] | 1 << size)
        # The right side stands last here: its column is brought back to the unknown's place.
        return -minor if (size - 1 - places[0]) & 1 else minor
