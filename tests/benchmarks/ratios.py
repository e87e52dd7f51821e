"""Prints how this engine's times compare with those of general-purpose libraries, beside the targets.

    python tests/benchmarks/ratios.py [--only algebra,lcapy,sheet,show] [--repeats N]

Every ratio is taken within one run on one machine; absolute times are shown for orientation only.
"""

from __future__ import annotations

import argparse
import os
import statistics
import subprocess
import sys
import tempfile
import time
from collections.abc import Callable
from dataclasses import dataclass
from pathlib import Path

HERE = Path(__file__).resolve().parent
ROOT = HERE.parents[1]
CIRCUITS = HERE / "circuits"
sys.path.insert(0, str(ROOT))

from sympy import ZZ, symbols  # noqa: E402 - the checkout's own package comes first
from sympy.polys.matrices import DomainMatrix  # noqa: E402

from derive.algebra.linear_system import LinearSystem, solve  # noqa: E402
from derive.devices.linearise import linearise  # noqa: E402
from derive.eliminate.rows import input_row  # noqa: E402
from derive.nodal.write import write_equations  # noqa: E402
from derive.reading.read import read  # noqa: E402

BERKOWITZ_TARGETS = {
    "ce": 10,
    "cascode": 10,
    "two_stage": 100,
    "random5": 100,
    "three_stage": 100,
    "ladder10": 1000,
    "random8": 1000,
}
LCAPY_TARGETS = {"follower": 1000, "ce": 1000, "cascode": 1000}
LCAPY_LIMIT_SECONDS = 60
SHEET_TARGET, SHOW_TARGET = 2.5, 2.0
# Long enough to ride out what else the machine does, on either side of a ratio.
SHORT_SECONDS = 1.0


@dataclass(frozen=True)
class Line:
    """One comparison; `met` says whether the target is reached."""

    name: str
    ours_seconds: float
    other_seconds: float
    ratio: float
    target: str
    met: bool


def quickest(work: Callable[[], object]) -> float:
    """Give the least time of as many repeats as fit into SHORT_SECONDS; longer work is done once."""
    best, begun = float("inf"), time.perf_counter()
    while True:
        start = time.perf_counter()
        work()
        end = time.perf_counter()
        best = min(best, end - start)
        if end - begun > SHORT_SECONDS:
            return best


def prepared(name: str) -> LinearSystem:
    """Give a circuit's equations in the order in which they are written, the wanted unknown last."""
    topology = read(CIRCUITS / f"{name}.toml")
    system = write_equations(linearise(topology), topology.finds[0])
    names = [unknown.name for unknown in system.unknowns if unknown.name != system.wanted]
    columns = (*names, system.wanted)
    order = range(len(system.equations))
    rows = [input_row(system, columns, 1, index) for index in order]
    return LinearSystem(system.ring, tuple(rows), "s")


def berkowitz(system: LinearSystem) -> Callable[[], object]:
    """Give the work of both determinants of Cramer's rule by Berkowitz's method, in SymPy."""
    size = system.size
    names = symbols([f"x{k}" for k in range(len(system.ring.names))])
    domain = ZZ[names]

    def entry(row: int, column: int) -> object:
        polynomial = system.rows[row].get(column, system.ring.zero)
        terms = {tuple(map(int, key)): ZZ(int(value)) for key, value in polynomial.to_dict().items()}
        return domain.ring.from_dict(terms)

    def matrix(columns: list[int]) -> DomainMatrix:
        rows = [[entry(row, column) for column in columns] for row in range(size)]
        return DomainMatrix(rows, (size, size), domain)

    below = matrix(list(range(size)))
    above = matrix([*range(size - 1), size])
    return lambda: (below.charpoly_berk()[-1], above.charpoly_berk()[-1])


def algebra(repeats: int) -> list[Line]:
    """Compare the way from equations to cancelled polynomials with SymPy's two expanded determinants."""
    lines = []
    for name, target in BERKOWITZ_TARGETS.items():
        system = prepared(name)
        ours = quickest(lambda system=system: solve(system))
        other = quickest(berkowitz(system))
        ratio = other / ours
        lines.append(Line(name, ours, other, ratio, f">= {target}", ratio >= target))
    return lines


LCAPY = """
import sys, time, warnings
warnings.simplefilter("ignore")
import lcapy
circuit = lcapy.Circuit(sys.argv[1])
begun = time.perf_counter()
circuit.transfer("in", 0, "out", 0)
print(time.perf_counter() - begun)
"""


def netlist(name: str) -> str:
    """Write a bench circuit in lcapy's netlist language, every value a symbol of its own."""
    topology = read(CIRCUITS / f"{name}.toml")
    lines, counts = [], {"R": 0, "C": 0, "G": 0}
    for part in topology.parts:
        letter = {"resistor": "R", "capacitor": "C", "transconductance": "G"}[part.kind]
        counts[letter] += 1
        label = f"{letter}{counts[letter]}"
        # A source's current flows from the second node to the first through the outer circuit.
        controlled = letter == "G"
        flows = (*reversed(part.nodes("flows")), *part.nodes("senses")) if controlled else ()
        nodes = flows or part.nodes("between")
        words = " ".join("0" if node == "gnd" else node for node in nodes)
        lines.append(f"{label} {words} {label.lower()}")
    return "\n".join(lines)


def lcapy(repeats: int) -> list[Line]:
    """Compare the same way with lcapy's transfer function, in a child with a time limit."""
    lines = []
    for name, target in LCAPY_TARGETS.items():
        system = prepared(name)
        ours = quickest(lambda system=system: solve(system))
        try:
            other = float(run([sys.executable, "-c", LCAPY, netlist(name)], LCAPY_LIMIT_SECONDS))
        except subprocess.TimeoutExpired:
            other = float(LCAPY_LIMIT_SECONDS)
        ratio = other / ours
        lines.append(Line(name, ours, other, ratio, f">= {target}", ratio >= target))
    return lines


BARE_PDF = """
import sympy, typst, weasyprint
weasyprint.HTML(string="<p>One line.</p>").write_pdf("bare.pdf")
"""


def sheet(repeats: int) -> list[Line]:
    """Compare the making of a sheet with a process that only loads its libraries and writes a line."""
    with tempfile.TemporaryDirectory() as folder:
        file = str(CIRCUITS / "follower.toml")
        ours = [sys.executable, "-m", "derive", "sheet", file, "--out", folder, "--quiet"]
        bare = [sys.executable, "-c", BARE_PDF]
        return [alternate("sheet of follower", ours, bare, folder, SHEET_TARGET, repeats)]


def show(repeats: int) -> list[Line]:
    """Compare the showing of a result with a process that only imports SymPy."""
    with tempfile.TemporaryDirectory() as folder:
        file = str(CIRCUITS / "follower.toml")
        ours = [sys.executable, "-m", "derive", "show", file]
        bare = [sys.executable, "-c", "import sympy"]
        return [alternate("show follower", ours, bare, folder, SHOW_TARGET, repeats)]


def alternate(
    name: str, ours: list[str], bare: list[str], folder: str, target: float, repeats: int
) -> Line:
    """Time two commands in turn, so that both meet the same weather; compare their medians."""
    times: tuple[list[float], list[float]] = ([], [])
    for turn in range(2 * (repeats + 1)):
        begun = time.perf_counter()
        run((ours, bare)[turn % 2], None, folder)
        if turn >= 2:  # the first of each warms the file cache
            times[turn % 2].append(time.perf_counter() - begun)
    mine, other = map(statistics.median, times)
    return Line(name, mine, other, mine / other, f"<= {target}", mine / other <= target)


def run(command: list[str], limit_seconds: float | None, folder: str | None = None) -> str:
    """Run a command with the checkout's package and give its output."""
    environment = {**os.environ, "PYTHONPATH": str(ROOT)}
    return subprocess.run(
        command,
        capture_output=True,
        check=True,
        cwd=folder,
        env=environment,
        text=True,
        timeout=limit_seconds,
    ).stdout


TABLES = {
    "algebra": (algebra, "Equations to cancelled N and D, against DomainMatrix.charpoly_berk"),
    "lcapy": (lcapy, f"The same against lcapy's transfer(), stopped at {LCAPY_LIMIT_SECONDS} s"),
    "sheet": (sheet, "Time of `sheet`, as a multiple of loading its libraries and a one-line PDF"),
    "show": (show, "Time of `show`, as a multiple of `import sympy`"),
}


def write(line: str) -> None:
    """Write a line at once, for these tables grow slowly."""
    sys.stdout.write(line + "\n")
    sys.stdout.flush()


def main() -> int:
    """Print the tables asked for; the exit status is 1 where a target is missed."""
    parser = argparse.ArgumentParser(description="Prints ratios of times beside their targets.")
    parser.add_argument("--only", default=",".join(TABLES), help="of " + ", ".join(TABLES))
    parser.add_argument("--repeats", type=int, default=5)
    options = parser.parse_args()
    missed = 0
    for key in options.only.split(","):
        compare, heading = TABLES[key]
        write(heading)
        write(f"  {'circuit':<18}{'ours':>12}{'other':>12}{'ratio':>10}{'target':>10}")
        for line in compare(options.repeats):
            missed += not line.met
            ours, other = f"{line.ours_seconds * 1e3:.3f} ms", f"{line.other_seconds * 1e3:.2f} ms"
            words = f"  {line.name:<18}{ours:>12}{other:>12}{line.ratio:>10.1f}{line.target:>10}"
            write(words + ("" if line.met else "  missed"))
        write("")
    return 1 if missed else 0


if __name__ == "__main__":
    sys.exit(main())
