"""Prints what it takes to simplify the bench circuits, in batched numpy solves of the same circuit.

    python tests/benchmarks/simplify.py [--folder FOLDER]

Times are those of the processor, so that what else the machine does counts for neither side. One solve is
the stamping and the solution of a circuit's equations at 1,000 frequencies, by numpy, in the same run. The
time to simplify is that from the circuit to its short form with assumptions and price, in symbols; that to
write the form for reading is shown beside it. Circuits that are not in the folder are left out.
"""

from __future__ import annotations

import argparse
import os
import sys
import time
from collections.abc import Callable
from pathlib import Path

HERE = Path(__file__).resolve().parent
sys.path.insert(0, str(HERE.parents[1]))

# Small matrices gain nothing by threads, and on a busy machine lose much, on either side of a ratio.
os.environ.setdefault("OPENBLAS_NUM_THREADS", "1")

import numpy as np  # noqa: E402 - the checkout's own package comes first

from derive.approximate.questions import FOUR_QUESTIONS, ONE_LINE, Question, Simplified  # noqa: E402
from derive.approximate.simplify import simplify  # noqa: E402
from derive.approximate.simplify_network import network_of  # noqa: E402
from derive.approximate.simplify_original import Original  # noqa: E402
from derive.approximate.simplify_trials import responses  # noqa: E402
from derive.devices.elements import SmallSignal  # noqa: E402
from derive.devices.linearise import linearise  # noqa: E402
from derive.expressions.text import to_text  # noqa: E402
from derive.reading.read import read  # noqa: E402
from derive.topology.topology import Budget  # noqa: E402

# The range of each circuit, in Hz: up to where its first corners act.
RANGES = {
    "opamp20": (1e3, 1e6),
    "follower": (1e3, 1e7),
    "ce": (1e3, 1e6),
    "cascode": (1e3, 1e6),
    "two_stage": (1e3, 1e6),
    "three_stage": (1e3, 1e6),
}
LARGE_TARGET, SMALL_TARGET = 300, 20
FREQUENCIES = 1_000


def quickest(work: Callable[[], object], seconds: float = 1.0) -> float:
    """Give the least time of as many repeats as fit into a second; longer work is done once."""
    best, begun = float("inf"), time.process_time()
    while True:
        start = time.process_time()
        work()
        end = time.process_time()
        best = min(best, end - start)
        if end - begun > seconds:
            return best


def timed(circuit: SmallSignal, question: Question, *, readable: bool) -> tuple[float, Simplified]:
    """Give the time of a simplification that begins with nothing known, and its result."""
    find, found = circuit.topology.finds[0], []

    def work() -> None:
        found[:] = [simplify(circuit, find, question, Budget(), readable=readable)]

    return quickest(work), found[0]


def main() -> int:
    """Print the table; the exit status is 1 where a target is missed."""
    parser = argparse.ArgumentParser(description="Prints the time to simplify in batched numpy solves.")
    parser.add_argument("--folder", type=Path, default=HERE / "circuits", help="of the bench circuits")
    folder = parser.parse_args().folder
    missed = 0
    out = sys.stdout.write
    out(
        f"{'circuit':<14}{'solve':>10}{'simplified':>12}{'solves':>8}{'target':>8}{'terms':>7}{'written':>12}\n"
    )
    for name, limits in RANGES.items():
        if not (folder / f"{name}.toml").exists():
            continue
        circuit = linearise(read(folder / f"{name}.toml"))
        find = circuit.topology.finds[0]
        samples = 2j * np.pi * np.geomspace(*limits, FREQUENCIES)
        one = quickest(lambda c=circuit, f=find, s=samples: responses(network_of(c, f), s))
        question = Question("response in a band", limits)
        took, found = timed(circuit, question, readable=False)
        written, _ = timed(circuit, question, readable=True)
        target = LARGE_TARGET if len(circuit.elements) > 24 else SMALL_TARGET
        well = (
            took / one <= target and (target == SMALL_TARGET or found.terms <= ONE_LINE) and found.within
        )
        missed += not well
        out(
            f"{name:<14}{one * 1e3:>7.2f} ms{took * 1e3:>9.1f} ms{took / one:>8.1f}{target:>8}{found.terms:>7}"
            f"{written * 1e3:>9.1f} ms{'' if well else '  missed'}\n"
        )
        if target == LARGE_TARGET:
            missed += four_questions(circuit, one)
    return 1 if missed else 0


def four_questions(circuit: SmallSignal, one: float) -> int:
    """Print a large circuit's four answers; gives how many are not within the budget."""
    missed = 0
    whole = Original(circuit, circuit.topology.finds[0])
    _ = whole.poles, whole.unity_rad_per_s
    for question in FOUR_QUESTIONS:
        begun = time.process_time()
        found = simplify(circuit, circuit.topology.finds[0], question, Budget(), whole)
        took = time.process_time() - begun
        missed += not found.within
        sys.stdout.write(f"  {question.kind}, {took / one:.0f} solves: ")
        if found.form is None or found.price is None or found.price.relative is None:
            sys.stdout.write(f"no short form: {found.reason}\n")
            continue
        inside = "within" if found.within else "beyond"
        off = f"off by {100 * found.price.relative:+.2g} % ({inside} the budget)"
        sys.stdout.write(f"{found.left} = {to_text(found.form)}, {off}\n")
        for name, value in found.definitions:
            sys.stdout.write(f"    {name} = {to_text(value)}\n")
    return missed


if __name__ == "__main__":
    sys.exit(main())
