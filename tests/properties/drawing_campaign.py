"""Draws random circuits, schematic and small-signal, and holds each drawing against its circuit.

python tests/properties/drawing_campaign.py --count 100 --seed 0
"""

from __future__ import annotations

import argparse
import contextlib
import random
import sys
import time
from pathlib import Path

sys.path[:0] = [str(Path(__file__).parents[2])]

from derive.drawing.draw import draw_circuit, draw_schematic  # noqa: E402 - the path comes first
from derive.drawing.drawing import NotDrawn  # noqa: E402
from derive.drawing.netlist import netlist_of  # noqa: E402
from derive.errors import InputError  # noqa: E402
from tests.support.drawn import overlaps, parts_of_circuit, parts_of_topology, senses_of  # noqa: E402
from tests.support.random_drawings import random_topology, small_signal_of  # noqa: E402


def main() -> int:
    """Draw them all; 1 where one is wrong or was not drawn."""
    parser = argparse.ArgumentParser()
    parser.add_argument("--count", type=int, default=100)
    parser.add_argument("--seed", type=int, default=0)
    options = parser.parse_args()
    wrong, made, seconds = 0, 0, []
    for seed in range(options.seed, options.seed + options.count):
        topology = random_topology(random.Random(seed))
        jobs = [("schematic", topology, draw_schematic, parts_of_topology)]
        with contextlib.suppress(InputError):
            jobs.append(("small-signal", small_signal_of(topology), draw_circuit, parts_of_circuit))
        for name, circuit, draw, parts in jobs:
            start = time.process_time()
            drawing = draw(circuit)
            seconds.append(time.process_time() - start)
            made += 1
            says = _wrong(drawing, parts(circuit), senses_of(circuit))
            if says:
                wrong += 1
                print(f"{name} of seed {seed}: {says}")  # noqa: T201 - its job
    mean = sum(seconds) / made
    print(f"{made} drawings, {wrong} wrong; {mean:.3f} s each, {max(seconds):.3f} s at most")  # noqa: T201 - its job
    return 1 if wrong else 0


def _wrong(drawing, parts, senses) -> str:
    if isinstance(drawing, NotDrawn):
        return f"not drawn: {drawing.why}"
    netlist = netlist_of(drawing)
    if {name: dict(pins) for name, pins in netlist.parts} != parts or set(netlist.follows) != senses:
        return "reads back as another circuit"
    return ", ".join(overlaps(drawing)[:3])


if __name__ == "__main__":
    sys.exit(main())
