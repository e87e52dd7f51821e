"""The tableau as two matrices of floating-point numbers: its response anywhere, and the poles of that response."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np
import numpy.typing as npt

from derive.check.solve import NoSolutionError
from derive.check.stamp import Tableau

Complex = npt.NDArray[np.complexfloating[Any, Any]]
# Eigenvalues this much smaller than the largest are rounding: nothing moves there.
ROUNDING = 1e-13
# Poles nearer to the origin than this part of another are at the origin.
ORIGIN = 1e-12
# Poles nearer to one another than this part of their size are one pole met several times.
SAME = 1e-5
# A pole is one of the response if this grows tenfold as s comes ten times nearer; where it hides, not at all.
# So near because a zero may stand beside it.
NEAR, NEARER = 1e-7 * (1 + 1j), 1e-8 * (1 + 1j)
# From so far off a natural frequency is worked once more, so that it is exact to its last digits.
ASIDE = 1 + 1e-2j
GROWS = 10**0.5


@dataclass(frozen=True, slots=True)
class Pencil:
    """(constant + s·rising)·x = right, and the response pick·x."""

    constant: npt.NDArray[np.float64]
    rising: npt.NDArray[np.float64]
    right: npt.NDArray[np.float64]
    pick: npt.NDArray[np.float64]

    def response(self, s: complex) -> complex:
        """Give the response at a value of s.

        Raises: NoSolutionError where there is none.
        """
        matrix = self.constant + s * self.rising
        scale = np.abs(matrix).max(axis=1)
        try:
            found = np.linalg.solve(matrix / scale[:, None], self.right / scale)
        except np.linalg.LinAlgError as error:
            raise NoSolutionError("the circuit has no unique solution there") from error
        return complex(self.pick @ found)

    def natural(self, about: complex) -> list[complex]:
        """Give all natural frequencies, by their distance from a point; the nearest are the most exact.

        Raises: NoSolutionError where the point itself is one.
        """
        try:
            turned = np.linalg.eigvals(np.linalg.solve(self.constant + about * self.rising, self.rising))
        except np.linalg.LinAlgError as error:
            raise NoSolutionError("the circuit has no unique solution there") from error
        kept = turned[np.abs(turned) > ROUNDING * (np.abs(turned).max() or 1)]
        return sorted((complex(about - 1 / value) for value in kept), key=lambda root: abs(root - about))

    def is_pole(self, root: complex) -> bool:
        """Whether the response grows without limit towards a natural frequency."""
        near, nearer = (abs(self.response(root * (1 + step))) for step in (NEAR, NEARER))
        return nearer > GROWS * near

    def _refined(self, rough: complex) -> complex:
        return min(self.natural(rough * ASIDE), key=lambda root: abs(root - rough))

    def poles_up_to(self, stated: complex) -> list[complex]:
        """Give the poles of the response from the origin, which does not count, up to one that is stated.

        One of each pair, that above the axis, by rising size; each once.
        """
        size = abs(stated)
        inner = [
            root for root in self.natural(complex(1e-3 * size)) if ORIGIN < abs(root) / size < 1 - SAME
        ]
        found: list[complex] = []
        for rough in sorted([*inner, stated], key=abs):
            root = self._refined(rough)
            above = complex(root.real, abs(root.imag))
            if abs(above.imag) <= SAME * abs(above):
                above = complex(above.real)
            known = any(abs(above - other) <= SAME * abs(above) for other in found)
            if not known and self.is_pole(above):
                found.append(above)
        return found


def pencil_of(tableau: Tableau) -> Pencil:
    """Give a tableau of rationals in floating point."""
    size = tableau.size
    constant, rising = np.zeros((2, size, size))
    for table, entries in ((constant, tableau.constant), (rising, tableau.rising)):
        for place, value in entries.items():
            table[place] += float(value)
    right, pick = np.zeros((2, size))
    for row, value in tableau.right.items():
        right[row] = float(value)
    for column, factor in tableau.wanted.items():
        pick[column] = factor
    return Pencil(constant, rising, right, pick)
