"""What the whole circuit does: the values that short forms are measured against."""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass
from functools import cached_property
from typing import Any, TypeVar

import numpy as np

from derive.algebra.roots import roots
from derive.approximate.simplify_network import Network, network_of
from derive.approximate.simplify_trials import Complex, matrices, responses
from derive.devices.elements import SmallSignal
from derive.normalise.exact_response import ExactResponse, exact_response
from derive.readable.vocabulary import Vocabulary, vocabulary_of
from derive.topology.topology import GROUND, Find

T = TypeVar("T")

# A crossing of a gain of one is sought on so many points, from far below to far above all corners.
SWEEP = 400
HALVINGS = 60
# Smaller eigenvalues are rounding.
ROUNDING = 1e-13


@dataclass(frozen=True)
class Original:
    """A circuit and one wanted quantity, with what is known of its response; each worked when asked for.

    `words` is the vocabulary of the result that the short forms stand beside, None where there is none; `names` are
    those that the result has given a meaning.
    """

    circuit: SmallSignal
    find: Find
    words: Vocabulary | None = None
    names: frozenset[str] = frozenset()

    @cached_property
    def vocabulary(self) -> Vocabulary:
        """The words in which forms are written."""
        return self.words or vocabulary_of(self.circuit)

    @cached_property
    def taken(self) -> frozenset[str]:
        """The names that have a meaning already."""
        topology = self.circuit.topology
        found = {"s", GROUND, "K", "H", "p_1", "p_2", "omega_u", "omega_1", "omega_2", *self.names}
        found |= {symbol.name for symbol in self.circuit.symbols} | {
            e.name for e in self.circuit.elements
        }
        found |= {part.name for part in topology.parts} | {drive.name for drive in topology.drives}
        found |= {find.name for find in topology.finds} | {merge.name for merge in topology.merges}
        return frozenset(found | {name for name, _ in self.vocabulary.definitions})

    @cached_property
    def _kept(self) -> dict[float, Any]:
        return {}

    def kept_stages(self, limit: float, work: Callable[[], T]) -> T:
        """Give the stages of the circuit within a limit, worked once: two questions are answered by them."""
        if limit not in self._kept:
            self._kept[limit] = work()
        found: T = self._kept[limit]
        return found

    @cached_property
    def network(self) -> Network:
        """The circuit as stamps."""
        return network_of(self.circuit, self.find)

    @cached_property
    def exact(self) -> ExactResponse | None:
        """The exact response; None where the circuit has none."""
        return exact_response(self.circuit, self.find)

    @cached_property
    def poles(self) -> tuple[complex, ...]:
        """The poles away from the origin, by rising size, one of each pair: that above the axis."""
        if self.exact is None:
            return ()
        found = [complex(root.real, root.imaginary) for root in roots(self.exact.bottom)]
        return tuple(pole for pole in found if abs(pole) > 0 and pole.imag >= 0)

    @cached_property
    def corners_rad_per_s(self) -> tuple[float, ...]:
        """The sizes of poles and zeros away from the origin, rising."""
        if self.exact is None or self.exact.is_zero:
            return ()
        found = [*roots(self.exact.bottom), *roots(self.exact.top)]
        return tuple(sorted(s for r in found if (s := math.hypot(r.real, r.imaginary)) > 0))

    @cached_property
    def resonances_hz(self) -> tuple[float, ...]:
        """Where poles and zeros stand, in floating point: what a sampling must not step over."""
        return natural_frequencies_hz(self.network)

    @cached_property
    def low_gain(self) -> tuple[float, int] | None:
        """The factor K and the power p of the response K·s^p at low frequency; None for no response."""
        if self.exact is None or self.exact.is_zero:
            return None
        above = next(k for k, value in enumerate(self.exact.top) if value)
        below = next(k for k, value in enumerate(self.exact.bottom) if value)
        return float(self.exact.top[above] / self.exact.bottom[below]), above - below

    @cached_property
    def unity_rad_per_s(self) -> float | None:
        """The highest angular frequency at which the size of the response falls through one."""
        corners = self.corners_rad_per_s
        if not corners:
            return None
        grid = np.geomspace(corners[0] / 100, corners[-1] * 100, SWEEP)
        sizes = np.abs(self.at(1j * grid))
        falls = np.flatnonzero((sizes[:-1] > 1) & (sizes[1:] <= 1))
        if not len(falls):
            return None
        low, high = float(grid[falls[-1]]), float(grid[falls[-1] + 1])
        for _ in range(HALVINGS):
            middle = math.sqrt(low * high)
            above = abs(complex(self.at(np.array([1j * middle]))[0])) > 1
            low, high = (middle, high) if above else (low, middle)
        return math.sqrt(low * high)

    def at(self, samples: Complex) -> Complex:
        """Give the response at values of s, each by a solution of the whole circuit's equations."""
        return responses(self.network, samples)


def natural_frequencies_hz(network: Network) -> tuple[float, ...]:
    """Give the sizes of the poles and zeros of a network in Hz, rising, as eigenvalues.

    Where constant + s·rising is singular, so is 1 + (s − at)·(constant + at·rising)⁻¹·rising.
    """
    constant, rising, right, pick = matrices(network)
    size = len(right)
    bordered = np.zeros((2, size + 1, size + 1))
    bordered[0, :size, :size], bordered[1, :size, :size] = constant, rising
    bordered[0, :size, size], bordered[0, size, :size] = right, pick
    found: list[float] = []
    for still, moving in ((constant, rising), bordered):
        scale = float(np.abs(still).max() / (np.abs(moving).max() or 1))
        try:
            turned = np.linalg.eigvals(np.linalg.solve(still + scale * moving, moving))
        except np.linalg.LinAlgError:
            continue
        inner = turned[np.abs(turned) > ROUNDING * (np.abs(turned).max() or 1)]
        found += np.abs(scale - 1 / inner).tolist()
    return tuple(sorted(value / (2 * math.pi) for value in found))


def slope(response: Callable[[Complex], Complex], omega: float) -> float:
    """Give by how many powers of the frequency the size of a response rises at a frequency."""
    step = 1e-3
    low, high = np.abs(response(1j * omega * np.array([1 - step, 1 + step])))
    return float(np.log(high / low) / np.log((1 + step) / (1 - step)))
