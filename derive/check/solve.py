"""The tableau solved: modulo a prime, in exact rationals, and at many frequencies at once."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from fractions import Fraction
from typing import Any

import numpy as np
import numpy.typing as npt
from flint import fmpq, fmpq_mat, nmod_mat

from derive.check.stamp import Tableau

Complex = npt.NDArray[np.complexfloating[Any, Any]]
CHUNK_ENTRIES = 2_000_000  # keeps a stack of matrices within some 30 MB


class NoSolutionError(ArithmeticError):
    """Raised when the tableau fixes no response: contradictory, or left open."""


@dataclass(frozen=True, slots=True)
class State:
    """Every voltage and current that the tableau fixes, and the response, for an input of 1."""

    nodes: dict[str, Any]
    branches: dict[str, Any]
    response: Any


def residue(value: Fraction | int, prime: int) -> int:
    """Give a rational modulo the prime.

    Raises: ZeroDivisionError where the prime divides the denominator.
    """
    if isinstance(value, int):
        return value % prime
    if value.denominator % prime == 0:
        raise ZeroDivisionError("the prime divides a denominator")
    return value.numerator * pow(value.denominator, -1, prime) % prime


def reduced_modulo(
    rows: Sequence[dict[int, int]], right: Sequence[int], width: int, prime: int
) -> tuple[list[list[int]], int]:
    """Bring rows and right side to reduced echelon form modulo the prime; also gives the rank."""
    flat = [0] * (len(rows) * (width + 1))
    for number, (row, value) in enumerate(zip(rows, right, strict=True)):
        start = number * (width + 1)
        for column, entry in row.items():
            flat[start + column] = entry % prime
        flat[start + width] = value % prime
    reduced, rank = nmod_mat(len(rows), width + 1, flat, prime).rref()
    return [[int(entry) for entry in row] for row in reduced.tolist()[:rank]], rank


def settle(
    reduced: Sequence[Sequence[Any]], width: int, wanted: Mapping[int, Any]
) -> tuple[dict[int, Any], Any, dict[int, Any]]:
    """Read off what reduced rows fix: single unknowns, and the combination `wanted`.

    Gives the fixed unknowns by column, the combination's value, and what of the combination is
    left over: the rows fix it only if every entry of that is zero.
    Raises: NoSolutionError where the rows contradict one another.
    """
    fixed: dict[int, Any] = {}
    rest: dict[int, Any] = dict(wanted)
    response: Any = 0
    for row in reduced:
        pivot = next(column for column, entry in enumerate(row) if entry != 0)
        if pivot == width:
            raise NoSolutionError("the circuit's equations contradict one another")
        others = [column for column in range(pivot + 1, width) if row[column] != 0]
        if not others:
            fixed[pivot] = row[width]
        factor = rest.pop(pivot, 0)
        if factor != 0:
            response = response + factor * row[width]
            for column in others:
                rest[column] = rest.get(column, 0) - factor * row[column]
    return fixed, response, rest


def _state(tableau: Tableau, fixed: dict[int, Any], response: Any) -> State:
    nodes: dict[str, Any] = {}
    branches: dict[str, Any] = {}
    for (kind, name), column in tableau.columns.items():
        if column in fixed:
            (nodes if kind == "node" else branches)[name] = fixed[column]
    return State(nodes, branches, response)


def solve_modulo(tableau: Tableau, s: int, prime: int) -> State:
    """Solve the tableau, whose values are integers, at `s` modulo the prime.

    Raises: NoSolutionError where the response is not fixed at these values.
    """
    rows: list[dict[int, int]] = [{} for _ in range(tableau.size)]
    for entries, factor in ((tableau.constant, 1), (tableau.rising, s)):
        for (row, column), entry in entries.items():
            rows[row][column] = rows[row].get(column, 0) + factor * residue(entry, prime)
    right = [residue(tableau.right.get(row, 0), prime) for row in range(tableau.size)]
    reduced, _ = reduced_modulo(rows, right, tableau.size, prime)
    fixed, response, rest = settle(reduced, tableau.size, tableau.wanted)
    if any(value % prime for value in rest.values()):
        raise NoSolutionError("the circuit's equations leave the response open")
    return _state(tableau, fixed, response % prime)


def solve_exact(tableau: Tableau, s: Fraction) -> State:
    """Solve the tableau, whose values are rational, at `s` in exact rationals.

    Raises: NoSolutionError where the response is not fixed at these values.
    """
    size = tableau.size
    flat = [fmpq(0)] * (size * (size + 1))
    for entries, factor in ((tableau.constant, Fraction(1)), (tableau.rising, s)):
        for (row, column), entry in entries.items():
            exact = factor * entry
            flat[row * (size + 1) + column] += fmpq(exact.numerator, exact.denominator)
    for row, value in tableau.right.items():
        flat[row * (size + 1) + size] = fmpq(value.numerator, value.denominator)
    reduced, rank = fmpq_mat(size, size + 1, flat).rref()
    fixed, response, rest = settle(reduced.tolist()[:rank], size, tableau.wanted)
    if any(value != 0 for value in rest.values()):
        raise NoSolutionError("the circuit's equations leave the response open")
    known = {column: _fraction(value) for column, value in fixed.items()}
    return _state(tableau, known, _fraction(response))


def _fraction(value: fmpq | int) -> Fraction:
    exact = fmpq(value)
    return Fraction(int(exact.p), int(exact.q))


def long_double(value: Fraction | int) -> np.longdouble:
    """Give a rational in the widest real number of the machine."""
    exact = Fraction(value)
    return np.longdouble(str(exact.numerator)) / np.longdouble(str(exact.denominator))


PASSES = 4
# Up to this many unknowns a matrix is solved anew for each pass.
LARGE = 60


@dataclass(frozen=True, slots=True)
class Sweep:
    """The response at each frequency, and by how much refinement leaves it in doubt."""

    responses: Complex
    moved: npt.NDArray[np.float64]


def solve_frequencies(tableau: Tableau, omegas_rad_per_s: Sequence[float]) -> Sweep:
    """Solve the tableau, whose values are long doubles, at all frequencies in one stack of matrices.

    Raises: NoSolutionError where a matrix is singular.
    """
    chunk = max(1, CHUNK_ENTRIES // max(1, tableau.size**2))
    parts = [
        _solve_stack(tableau, omegas_rad_per_s[start : start + chunk])
        for start in range(0, len(omegas_rad_per_s), chunk)
    ]
    return Sweep(
        np.concatenate([part.responses for part in parts]),
        np.concatenate([part.moved for part in parts]),
    )


def _matrices(tableau: Tableau, omegas: Sequence[float]) -> tuple[Complex, Complex]:
    size = tableau.size
    matrix = np.zeros((len(omegas), size, size), dtype=np.clongdouble)
    for (row, column), entry in tableau.constant.items():
        matrix[:, row, column] += entry
    s = 1j * np.asarray(omegas, dtype=np.longdouble)
    for (row, column), entry in tableau.rising.items():
        matrix[:, row, column] += s * entry
    right = np.zeros((len(omegas), size), dtype=np.clongdouble)
    for row, value in tableau.right.items():
        right[:, row] = long_double(value)
    return matrix, right


def _solve_stack(tableau: Tableau, omegas: Sequence[float]) -> Sweep:
    matrix, right = _matrices(tableau, omegas)
    rows, columns = _scales(np.abs(matrix).astype(np.float64))
    matrix *= rows[:, :, None] * columns[:, None, :]
    right *= rows
    rough = matrix.astype(np.complex128)
    x = np.zeros_like(right)
    step = x
    try:
        inverse = np.linalg.inv(rough)
        for _ in range(PASSES):  # each pass gains the digits that a double solve holds
            left_over = (right - np.einsum("fij,fj->fi", matrix, x)).astype(np.complex128)[:, :, None]
            # The inverse, wanted below anyway, gains hardly less and saves large matrices much time.
            large = tableau.size > LARGE
            step = (inverse @ left_over if large else np.linalg.solve(rough, left_over))[:, :, 0]
            x = x + step
    except np.linalg.LinAlgError as error:
        raise NoSolutionError("the circuit has no unique solution at these values") from error
    pick = np.zeros(tableau.size, dtype=np.longdouble)
    for column, factor in tableau.wanted.items():
        pick[column] = factor
    # Where a pass gains nothing, small last steps prove nothing. What rounding can cost each unknown is
    # bounded by |A⁻¹|·|A|·|x| (Skeel, Scaling for numerical stability in Gaussian elimination, J. ACM 26
    # (1979) 494-526; from memory), once for the residuals and once more for what the passes leave.
    backward = np.abs(inverse)
    spread = np.einsum("fij,fj->fi", np.abs(rough), np.abs(x).astype(np.float64))
    condition = np.abs(rough).sum(axis=2).max(axis=1) * backward.sum(axis=2).max(axis=1)
    lost = np.minimum(condition * np.finfo(np.float64).eps, 1.0)
    unit = lost**PASSES + 4 * float(np.finfo(np.longdouble).eps)
    unsure = np.abs(step) + unit[:, None] * np.einsum("fij,fj->fi", backward, spread)
    moved = (unsure * columns * np.abs(pick)).sum(axis=1)
    return Sweep((x * columns * pick).sum(axis=1), moved.astype(np.float64))


def _scales(
    size_of: npt.NDArray[np.float64],
) -> tuple[npt.NDArray[np.float64], npt.NDArray[np.float64]]:
    # Whole powers of two lose no digit; three rounds bring 15 decades of spread near to 1.
    rows = np.ones(size_of.shape[:2])
    columns = np.ones(size_of.shape[:2])
    for _ in range(3):
        scaled = size_of * rows[:, :, None] * columns[:, None, :]
        rows *= _power_of_two(1 / np.sqrt(_or_one(scaled.max(axis=2))))
        scaled = size_of * rows[:, :, None] * columns[:, None, :]
        columns *= _power_of_two(1 / np.sqrt(_or_one(scaled.max(axis=1))))
    return rows, columns


def _or_one(values: npt.NDArray[np.float64]) -> npt.NDArray[np.float64]:
    return np.where(values > 0, values, 1.0)


def _power_of_two(values: npt.NDArray[np.float64]) -> npt.NDArray[np.float64]:
    rounded: npt.NDArray[np.float64] = np.exp2(np.round(np.log2(values)))
    return rounded
