"""The span of a response over the corners of the tolerances, from the circuit's own equations.

With up to MOST_FULL toleranced parts all 2^n corners are worked. With more, each frequency has two directed corners:
every part at that end where it alone raises the magnitude (the phase), and every part at the other. Device parameters
stay as they are: a tolerance that moves the operating point is not followed.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from fractions import Fraction
from itertools import product
from typing import Any

import numpy as np
import numpy.typing as npt

from derive.devices.elements import Coupling, Inductor, SmallSignal
from derive.nodal.system import NodalSystem
from derive.nodal.write import write_equations
from derive.normalise.numbers import values_of
from derive.response.traces import Span, SpanPoint
from derive.topology.topology import Find

MOST_FULL = 7
Array = npt.NDArray[np.float64]
Complex = npt.NDArray[np.complex128]


@dataclass(frozen=True, slots=True, eq=False)
class _Rows:
    """The equations as numbers: which entry is which polynomial of the symbols and s."""

    system: NodalSystem
    values: Mapping[str, float]

    def solve(self, factors: Mapping[str, Array], omegas: Array) -> Complex:
        """Give the response, one row a frequency and one column a corner; `factors` are one corner a column."""
        system = self.system
        names = [unknown.name for unknown in system.unknowns]
        weights = {name: float(weight) for name, weight in system.weights}
        count = next(iter(factors.values())).shape[-1]
        shape = (len(omegas), count, len(names))
        matrix: Complex = np.zeros((*shape, len(names)), dtype=complex)
        right: Complex = np.zeros(shape, dtype=complex)
        for row, equation in enumerate(system.equations):
            for name, polynomial in equation.row:
                entry = self._entry(polynomial, factors, omegas)
                if name in names:
                    matrix[:, :, row, names.index(name)] += entry
                else:
                    right[:, :, row] -= entry * weights.get(name, float(name == system.input))
        # Rows differ by many decades of unit: scaled, they lose fewer figures.
        scale = np.max(np.abs(matrix), axis=3, keepdims=True)
        scale[scale == 0] = 1.0
        solved = np.linalg.solve(matrix / scale, right[..., None] / scale)
        found: Complex = solved[:, :, names.index(system.wanted), 0]
        return found

    def _entry(self, polynomial: Any, factors: Mapping[str, Array], omegas: Array) -> Any:
        ring = self.system.ring
        total: Any = 0.0
        for exponents, coefficient in zip(polynomial.monoms(), polynomial.coeffs(), strict=True):
            term: Any = complex(int(coefficient))
            for name, exponent in zip(ring.names, map(int, exponents), strict=True):
                if not exponent:
                    continue
                if name == "s":
                    term = term * (1j * omegas[:, None]) ** exponent
                else:
                    power = -exponent if name in ring.inverted else exponent
                    term = term * (self.values[name] * factors[name]) ** power
            total = total + term
        return total


def tolerance_span(circuit: SmallSignal, find: Find, hertz: Sequence[float]) -> Span | None:
    """Give the span of a response at these frequencies; None where no part has a tolerance, or a value is open.

    Raises: SingularError where voltage drives form a loop.
    """
    known = values_of(circuit)
    loose = [symbol for symbol in circuit.symbols if symbol.tolerance and symbol.value]
    if known is None or not loose or not hertz:
        return None
    names = [symbol.name for symbol in loose]
    ends = np.array([float(symbol.tolerance or 0) for symbol in loose])
    rows = _Rows(write_equations(circuit, find), {name: float(value) for name, value in known.items()})
    omegas = 2 * np.pi * np.array(hertz)
    try:
        if len(names) <= MOST_FULL:
            signs = np.array(
                list(product((-1.0, 0.0, 1.0) if len(names) == 1 else (-1.0, 1.0), repeat=len(names)))
            )
            found = rows.solve(_factors(circuit, known, names, 1 + signs * ends), omegas)
            says = f"all {2 ** len(names)} corners"
            low_high = _extremes(found)
        else:
            low_high = _directed(rows, circuit, known, names, ends, omegas)
            says = f"at each frequency the two directed corners of {len(names)} tolerances"
    except np.linalg.LinAlgError:
        return None
    decibels, degrees = low_high
    if not (np.all(np.isfinite(decibels)) and np.all(np.isfinite(degrees))):
        return None
    return Span(
        tuple(
            SpanPoint(f, (float(db[0]), float(db[1])), (float(deg[0]), float(deg[1])))
            for f, db, deg in zip(hertz, decibels, degrees, strict=True)
        ),
        says,
    )


def _factors(
    circuit: SmallSignal, known: Mapping[str, Fraction], names: Sequence[str], shifts: Array
) -> dict[str, Array]:
    """Give by what every symbol is multiplied, one entry a corner; mutual inductances follow their coils."""
    count = shifts.shape[0]
    factors = {name: np.ones(count) for name in known}
    for place, name in enumerate(names):
        factors[name] = shifts[:, place]
    coils = {e.name: e.inductance for e in circuit.elements if isinstance(e, Inductor)}
    for element in circuit.elements:
        if isinstance(element, Coupling):
            one, other = (factors[coils[coil]] for coil in element.coils)
            factors[element.mutual] = factors[element.coefficient] * np.sqrt(one * other)
    return factors


def _extremes(found: Complex) -> tuple[Array, Array]:
    """Give least and greatest over the corners, phases counted from that of the first corner."""
    with np.errstate(divide="ignore", invalid="ignore"):
        decibels = 20 * np.log10(np.abs(found))
        lead = found[:, :1]
        turned = np.degrees(np.angle(found / lead))
    base = np.degrees(np.unwrap(np.angle(lead[:, 0])))[:, None]
    degrees = base + turned
    return (
        np.stack([decibels.min(axis=1), decibels.max(axis=1)], axis=1),
        np.stack([degrees.min(axis=1), degrees.max(axis=1)], axis=1),
    )


def _directed(
    rows: _Rows,
    circuit: SmallSignal,
    known: Mapping[str, Fraction],
    names: Sequence[str],
    ends: Array,
    omegas: Array,
) -> tuple[Array, Array]:
    """Give the span by directed corners, one pair for the magnitude and one for the phase at each frequency."""
    count = len(names)
    single = np.vstack([np.zeros(count), np.eye(count), -np.eye(count)])
    found = rows.solve(_factors(circuit, known, names, 1 + single * ends), omegas)
    with np.errstate(divide="ignore", invalid="ignore"):
        logs = np.log(found / found[:, :1])
    bounds = []
    for effect in (logs.real, logs.imag):
        toward = np.where(effect[:, 1 : count + 1] >= effect[:, count + 1 :], 1.0, -1.0)
        pair = []
        for sign in (-1, 1):
            there = [
                rows.solve(
                    _factors(circuit, known, names, 1 + sign * toward[k : k + 1] * ends),
                    omegas[k : k + 1],
                )[0, 0]
                for k in range(len(omegas))
            ]
            pair.append(np.array(there))
        bounds.append(pair)
    nominal = found[:, 0]
    base = np.degrees(np.unwrap(np.angle(nominal)))
    decibels = np.stack([20 * np.log10(np.abs(each)) for each in bounds[0]], axis=1)
    degrees = np.stack([base + np.degrees(np.angle(each / nominal)) for each in bounds[1]], axis=1)
    return np.sort(decibels, axis=1), np.sort(degrees, axis=1)
