"""Tampers with issued sheets many times and counts what recheck finds.

Run as `python tests/properties/tampering_campaign.py --count 300 --seed 1`; the exit status is 1 where anything was
not found.
"""

from __future__ import annotations

import argparse
import random
import sys
import time
from collections import Counter
from pathlib import Path

HERE = Path(__file__).resolve().parent
sys.path[:0] = [str(HERE.parent / "support"), str(HERE.parents[1])]

from rechecked import Rechecker, issue  # noqa: E402 - the folders above must be known first
from tampering import WAYS  # noqa: E402 - as above

from derive.errors import InputError  # noqa: E402 - as above


def main() -> int:
    """Run the campaign."""
    parser = argparse.ArgumentParser(description=__doc__)
    parser.add_argument("--count", type=int, default=300)
    parser.add_argument("--seed", type=int, default=1)
    options = parser.parse_args()
    begun = time.perf_counter()
    chance, files, recheck = random.Random(options.seed), issue(), Rechecker()
    for kind, data in files.items():
        assert recheck(data, kind).standing == "same"
    totals: Counter[str] = Counter()
    missed = 0
    for number in range(options.count):
        kind = ("json", "html", "pdf")[number % 3]
        way = chance.choice(WAYS[kind])
        data, aspects = way(files[kind], chance)
        if data == files[kind]:
            continue
        try:
            found = recheck(data, kind)
            named = {difference.aspect for difference in found.differences}
            outcome = "found" if not found.holds and named & aspects else "MISSED"
        except InputError:
            outcome = "refused"
        totals[f"{way.__name__}: {outcome}"] += 1
        missed += outcome == "MISSED"
    for name, count in sorted(totals.items()):
        print(f"{count:6d}  {name}")  # noqa: T201 - its job
    print(f"{sum(totals.values())} in {time.perf_counter() - begun:.0f} s, {missed} missed")  # noqa: T201 - its job
    return 1 if missed else 0


if __name__ == "__main__":
    sys.exit(main())
