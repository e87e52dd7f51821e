"""Prints how long readable forms are against the expanded ones, circuit by circuit and by number of nodes.

    python tests/benchmarks/readable.py

Lengths are names and numbers counted as often as they stand; every gain and coefficient but the leading 1 is an
entry. The aim is a third of the expanded length at three unknowns and up. Times are shown for orientation only.
"""

from __future__ import annotations

import statistics
import sys
import time
from collections.abc import Iterator
from pathlib import Path

HERE = Path(__file__).resolve().parent
ROOT = HERE.parents[1]
sys.path.insert(0, str(ROOT))

from derive.bands.choose import bands_of  # noqa: E402 - the checkout's own package comes first
from derive.bands.restrict import find_in, restrict  # noqa: E402
from derive.bias.solve import operating_point  # noqa: E402
from derive.devices.linearise import linearise  # noqa: E402
from derive.eliminate.eliminate import eliminate  # noqa: E402
from derive.eliminate.plan import plan  # noqa: E402
from derive.expressions.tree import ONE  # noqa: E402
from derive.nodal.system import NodalSystem  # noqa: E402
from derive.nodal.write import write_equations  # noqa: E402
from derive.normalise.normalise import normalise  # noqa: E402
from derive.readable.measure import leaves  # noqa: E402
from derive.readable.readable import read_form  # noqa: E402
from derive.readable.vocabulary import vocabulary_of  # noqa: E402
from derive.reading.read import read  # noqa: E402

STAGES = ("follower", "ce", "cascode", "two_stage", "random5")
AIM = 1 / 3


def systems(file: Path) -> Iterator[NodalSystem]:
    """Give the equations of everything that a file asks for, band by band."""
    topology = read(str(file))
    point = operating_point(topology)
    circuit = linearise(topology, {device.part: device for device in point.devices} if point else {})
    for name in bands_of(circuit):
        band = restrict(circuit, name)
        for find in topology.finds:
            yield write_equations(band.circuit, find_in(band, find))


def lengths(system: NodalSystem) -> list[tuple[int, int]]:
    """Give (expanded, readable) of every entry of a result that is not 1."""
    form, _ = normalise(eliminate(system, plan(system)))
    readable = read_form(form, system.ring.plain(), vocabulary_of(system.small_signal))
    raw = (form.gain, *form.numerator, *form.denominator)
    other = (readable.gain, *readable.numerator, *readable.denominator)
    pairs = zip(raw, other, strict=True)
    return [(leaves(one), leaves(two)) for one, two in pairs if one != ONE]


def main() -> int:
    """Print the table; the exit status is 1 where the aim is missed."""
    files = [HERE / "circuits" / f"{name}.toml" for name in STAGES]
    files += sorted((ROOT / "cases").glob("*/topology.toml"))
    by_size: dict[str, list[float]] = {"1 or 2": [], "3 and up": []}
    out = sys.stdout.write
    out(f"{'circuit':<22}{'entries':>8}{'expanded':>10}{'readable':>10}{'median ratio':>14}{'s':>8}\n")
    for file in files:
        begun, found, ratios = time.perf_counter(), [], []
        for system in systems(file):
            pairs = lengths(system)
            found += pairs
            size = "3 and up" if len(system.unknowns) >= 3 else "1 or 2"
            by_size[size] += [two / one for one, two in pairs]
            ratios += [two / one for one, two in pairs]
        name = file.parent.name if file.stem == "topology" else file.stem
        totals = sum(one for one, _ in found), sum(two for _, two in found)
        took = time.perf_counter() - begun
        out(
            f"{name:<22}{len(found):>8}{totals[0]:>10}{totals[1]:>10}{statistics.median(ratios):>14.2f}{took:>8.2f}\n"
        )
    out("\n")
    for size, ratios in by_size.items():
        out(f"{size} unknowns: {len(ratios)} entries, median {statistics.median(ratios):.2f}\n")
    return 0 if statistics.median(by_size["3 and up"]) <= AIM else 1


if __name__ == "__main__":
    sys.exit(main())
