"""Compares many random circuits and prints the totals.

Run as `python tests/properties/campaign.py --count 1000 --seed 1`.
"""

from __future__ import annotations

import argparse
import sys
import time
from collections import Counter
from contextlib import suppress
from pathlib import Path

HERE = Path(__file__).resolve().parent
sys.path[:0] = [str(HERE), str(HERE.parent / "support"), str(HERE.parents[1])]

from comparison import compare  # noqa: E402 - the folders above must be known first

SHOWN = 10


def main() -> int:
    """Run the campaign; the exit status is 1 where product and solver differ."""
    parser = argparse.ArgumentParser(description=__doc__)
    parser.add_argument("--count", type=int, default=1000)
    parser.add_argument("--seed", type=int, default=1)
    options = parser.parse_args()
    begun = time.perf_counter()
    totals: Counter[str] = Counter()
    kinds: Counter[str] = Counter()
    opened: Counter[str] = Counter()
    shown = 0
    # An interrupted campaign still prints what it has.
    with suppress(KeyboardInterrupt):
        for index in range(options.count):
            seed = options.seed * 10**9 + index
            outcome = compare(seed)
            totals["circuits"] += 1
            totals["results"] += outcome.results
            totals["without a unique solution"] += outcome.singular
            totals["too large"] += outcome.too_large
            totals["drafts refused by the reader"] += outcome.drafts_refused
            kinds.update(outcome.kinds)
            opened.update(outcome.left_open)
            totals["DIFFERENT"] += bool(outcome.differences)
            totals["CHECKS FAILED"] += bool(outcome.failed)
            if (outcome.differences or outcome.failed) and shown < SHOWN:
                shown += 1
                print(f"seed {seed}: {outcome.differences} {outcome.failed}\n{outcome.text}")  # noqa: T201 - its job
    for table in (totals, kinds, opened):
        for name, count in sorted(table.items()):
            print(f"{count:8d}  {name}")  # noqa: T201 - its job
    print(f"{time.perf_counter() - begun:8.0f}  seconds")  # noqa: T201 - its job
    return 1 if totals["DIFFERENT"] or totals["CHECKS FAILED"] else 0


if __name__ == "__main__":
    raise SystemExit(main())
