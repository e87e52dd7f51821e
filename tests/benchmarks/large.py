"""Prints how the element diagram of large circuits compares with NumPy's and Python's own work, beside the targets.

    python tests/benchmarks/large.py [--only diagram,expand]

Every ratio is taken within one run on one machine; absolute times are shown for orientation only. One solve is
numpy.linalg.solve of the circuit's nodal matrices at 1,000 frequencies in one batch.
"""

from __future__ import annotations

import argparse
import sys
import time
from collections.abc import Callable
from fractions import Fraction
from pathlib import Path

import numpy as np
from numpy.typing import NDArray
from ratios import Line, write

HERE = Path(__file__).resolve().parent
CIRCUITS = HERE / "circuits"
sys.path.insert(0, str(HERE.parents[1]))

from derive.algebra.diagram import Diagram  # noqa: E402 - the checkout's own package comes first
from derive.algebra.diagram_expand import polynomials, products  # noqa: E402
from derive.algebra.ring import ring  # noqa: E402
from derive.devices.elements import SmallSignal  # noqa: E402
from derive.devices.linearise import linearise  # noqa: E402
from derive.nodal.admittance_terms import AdmittanceTerms, admittance_terms  # noqa: E402
from derive.normalise.numbers import values_of  # noqa: E402
from derive.reading.read import read  # noqa: E402

FREQUENCIES = 1_000
# Each comparison repeats its two sides in turn for about this long.
SECONDS = 2.0
BUILD_TARGET, COEFFICIENT_TARGET, EXPANSION_TARGET = 20, 3, 2
# random12 has 0.9 million products in numerator and denominator together.
EXPANSION_LIMIT = 1_000_000


def prepared(name: str) -> tuple[SmallSignal, AdmittanceTerms]:
    """Give a bench circuit and the terms of its one wanted response."""
    topology = read(str(CIRCUITS / f"{name}.toml"))
    circuit = linearise(topology)
    response = admittance_terms(circuit, topology.finds[0])
    if response is None:
        raise ValueError(f"{name} is no circuit of admittances")
    return circuit, response


def batch(
    response: AdmittanceTerms, lookup: dict[str, Fraction]
) -> tuple[NDArray[np.complex128], NDArray[np.complex128]]:
    """Give the nodal matrices and right sides at all frequencies; the node that is driven is `in`."""
    s = 2j * np.pi * np.logspace(0, 9, FREQUENCIES)
    matrix = np.zeros((FREQUENCIES, response.size, response.size), complex)
    for term in response.terms:
        value = float(lookup[term.name]) * s**term.degree
        for row, row_sign in zip(term.rows, (1, -1), strict=True):
            for column, column_sign in zip(term.columns, (1, -1), strict=True):
                if row is not None and column is not None:
                    matrix[:, row, column] += row_sign * column_sign * value
    driven = response.nodes.index("in")
    kept = [place for place in range(response.size) if place != driven]
    return matrix[:, kept][:, :, kept], -matrix[:, kept][:, :, [driven]]


def diagram(name: str = "opamp20") -> list[Line]:
    """Compare the diagram's making, exact coefficients and values with one batched solve."""
    circuit, response = prepared(name)
    values = values_of(circuit)
    if values is None:
        raise ValueError(f"{name} has open values")
    lookup = response.lookup(values)
    matrix, right = batch(response, lookup)
    made = response.diagram()
    s = 2j * np.pi * np.logspace(0, 9, FREQUENCIES)
    numbers, one = {key: float(value) for key, value in lookup.items()}, np.ones(FREQUENCIES, complex)
    jobs: list[tuple[str, Callable[[], object], float | None]] = [
        ("built", response.diagram, BUILD_TARGET),
        ("coefficients", lambda: response.coefficients(made, values), COEFFICIENT_TARGET),
        ("counted", made.counts, None),
        ("values at once", lambda: made.values(numbers, s, one), None),
    ]
    return [
        line(label, *in_turn(work, lambda: np.linalg.solve(matrix, right)), target)
        for label, work, target in jobs
    ]


def expand(name: str = "random12") -> list[Line]:
    """Compare the writing out of all products with the time that writing their text takes."""
    _, response = prepared(name)
    made = response.diagram()
    names = ring(["s", *(term.name for term in response.terms)])
    jobs: list[tuple[str, Callable[[], object]]] = [
        ("as bit masks", lambda: products(made, EXPANSION_LIMIT)),
        ("as polynomials", lambda: polynomials(made, names, limit=EXPANSION_LIMIT)),
    ]
    return [line(label, *in_turn(work, lambda: text(made)), EXPANSION_TARGET) for label, work in jobs]


def in_turn(work: Callable[[], object], other: Callable[[], object]) -> tuple[float, float]:
    """Give the least times of two pieces of work done in turn, so that both meet the same weather."""
    times: tuple[list[float], list[float]] = ([], [])
    begun = time.perf_counter()
    while not times[1] or time.perf_counter() - begun < SECONDS:
        for piece, found in zip((work, other), times, strict=True):
            start = time.perf_counter()
            piece()
            found.append(time.perf_counter() - start)
    return min(times[0]), min(times[1])


def text(made: Diagram) -> list[str]:
    """Write numerator and denominator as plain text from their products, in the quickest way found.

    The names of every run of twelve terms are joined once for each of the runs' subsets.
    """
    found = []
    width = 12
    names = [term.name + "*s" * term.degree for term in made.terms]
    runs = []
    for start in range(0, len(names), width):
        part = names[start : start + width]
        runs.append(
            [
                "".join(f"*{name}" for place, name in enumerate(part) if subset >> place & 1)
                for subset in range(1 << len(part))
            ]
        )
    for written in products(made, EXPANSION_LIMIT):
        pieces = []
        last = (1 << width) - 1
        for (mask,), sign in zip(written.masks.tolist(), written.signs.tolist(), strict=True):
            whole = "".join([run[mask >> width * place & last] for place, run in enumerate(runs)])
            pieces.append(("+" if sign > 0 else "-") + whole[1:])
        found.append("".join(pieces))
    return found


def line(name: str, ours: float, other: float, target: float | None) -> Line:
    """Make a line of a table; without a target it is there for orientation."""
    ratio = ours / other
    return Line(
        name, ours, other, ratio, "" if target is None else f"<= {target}", not target or ratio <= target
    )


TABLES: dict[str, tuple[Callable[[], list[Line]], str]] = {
    "diagram": (diagram, "opamp20, as multiples of one batched solve at 1,000 frequencies"),
    "expand": (
        expand,
        "All products of random12, as a multiple of the time that writing their text takes",
    ),
}


def main() -> int:
    """Print the tables asked for; the exit status is 1 where a target is missed."""
    parser = argparse.ArgumentParser(description="Prints ratios of times beside their targets.")
    parser.add_argument("--only", default=",".join(TABLES), help="of " + ", ".join(TABLES))
    options = parser.parse_args()
    missed = 0
    for key in options.only.split(","):
        compare, heading = TABLES[key]
        write(heading)
        write(f"  {'work':<18}{'ours':>12}{'other':>12}{'ratio':>10}{'target':>10}")
        for entry in compare():
            missed += not entry.met
            ours, other = f"{entry.ours_seconds * 1e3:.3f} ms", f"{entry.other_seconds * 1e3:.2f} ms"
            words = f"  {entry.name:<18}{ours:>12}{other:>12}{entry.ratio:>10.2f}{entry.target:>10}"
            write(words + ("" if entry.met else "  missed"))
        write("")
    return 1 if missed else 0


if __name__ == "__main__":
    sys.exit(main())
