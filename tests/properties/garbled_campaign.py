"""Reads many garbled lines of hand algebra and prints how many could be read, how many not, and the slowest.

Run as `python tests/properties/garbled_campaign.py --count 50000 --seed 1`.
"""

from __future__ import annotations

import argparse
import random
import sys
import time
from pathlib import Path

HERE = Path(__file__).resolve().parent
sys.path[:0] = [str(HERE), str(HERE.parents[1])]

from garbled_lines import Watch, garbled  # noqa: E402 - the folders above must be known first

from derive.expressions.parse import parse_expression  # noqa: E402 - as above


def main() -> int:
    """Run the campaign; it ends with a traceback at the first line that breaks a promise."""
    parser = argparse.ArgumentParser(description=__doc__)
    parser.add_argument("--count", type=int, default=50_000)
    parser.add_argument("--seed", type=int, default=1)
    options = parser.parse_args()
    parse_expression("a")
    watch, chance = Watch(), random.Random(options.seed)
    read, slowest, began = 0, 0.0, time.perf_counter()
    for _ in range(options.count):
        text = garbled(chance)
        start = time.perf_counter()
        read += watch.read(text).fault is None
        slowest = max(slowest, time.perf_counter() - start)
    seconds = time.perf_counter() - began
    print(  # noqa: T201 - a campaign tells its results
        f"{options.count} lines, {read} read, {options.count - read} refused with their place\n"
        f"{1000 * seconds / options.count:.2f} ms a line, the slowest {1000 * slowest:.0f} ms"
    )
    return 0


if __name__ == "__main__":
    sys.exit(main())
